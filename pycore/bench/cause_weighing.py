"""One job's causes, weighed by its readings and by the further looks that were taken."""

from collections.abc import Mapping
from dataclasses import dataclass

from pycore.bench.cause import weigh
from pycore.bench.cause_bench import Bench, Story, bench_of
from pycore.bench.cause_rank import Ranking, rank
from pycore.bench.expected import Due
from pycore.bench.look import leverage, looked
from pycore.job.document import Job
from pycore.optics.prism import Eye


@dataclass(frozen=True, slots=True)
class Weighing:
    """The hypotheses with their probabilities, and the causes ranked from them."""

    bench: Bench
    stories: tuple[Story, ...]
    ranking: Ranking


def weighing_of(job: Job, dues: Mapping[Eye, Due]) -> Weighing | None:
    """Weigh the causes of one job, or None where nothing was read.

    Arguments: `job`; `dues` of its eyes.
    """
    bench = bench_of(job, dues)
    if bench is None:
        return None
    stories = tuple(looked(weigh(bench, leverage(job.looks)), job.looks))
    return Weighing(bench, stories, rank(bench, stories))
