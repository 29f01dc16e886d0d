"""One job with everything its report and its sections are made of, thought through once."""

from collections.abc import Mapping
from dataclasses import dataclass

from pycore.bench.expected import Due, due
from pycore.bench.matter import Matter, matter_of
from pycore.bench.verdict import Verdict, judge
from pycore.editions.edition import Edition
from pycore.job.document import Job
from pycore.optics.prism import EYES, Eye


# Compared by identity, so that what several sections ask of one case can be kept for it.
@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Case:
    """One job with everything that its report is made of."""

    job: Job
    edition: Edition | None
    dues: Mapping[Eye, Due]
    matter: Matter | None
    verdict: Verdict | None


def case_of(job: Job, edition: Edition | None) -> Case:
    """Think one job through. Arguments: `job`; `edition`, or None for no verdict."""
    matter = matter_of(job, edition) if edition and _has_design(job) else None
    return Case(
        job=job,
        edition=edition,
        dues={eye: found for eye in EYES if (found := due(job, eye))},
        matter=matter,
        verdict=judge(matter) if matter else None,
    )


def _has_design(job: Job) -> bool:
    """Without a design a lens with an add could be of two kinds, with two sets of limits."""
    return any(order.lens.design for order in job.orders) or not any(
        order.verified.add for order in job.orders
    )
