"""How long the smallest movement takes beside the verdict, in plain CPython: failing jobs of every edition, drawn at random."""

from __future__ import annotations

import statistics
import sys
import time

import numpy as np

from pycore.bench.matter import Matter
from pycore.bench.remedy import remedy_of
from pycore.bench.verdict import Verdict
from pycore.case import case_of
from pycore.editions.reader import built_in
from pycore.job.document import read_job
from tests.references.shift_jobs import draw

JOBS = 300


def failing(count: int, seed: int = 7) -> list[tuple[Matter, Verdict]]:
    """Failing jobs, judged."""
    rng, found = np.random.default_rng(seed), []
    while len(found) < count:
        job = draw(rng)
        case = case_of(read_job(job), built_in(job["edition"]))
        if case.matter and case.verdict and case.verdict.outcome == "outside":
            found.append((case.matter, case.verdict))
    return found


def measure_remedy(count: int = JOBS) -> tuple[float, float]:
    """Median and 95th percentile of milliseconds of processor time for one job."""
    taken = []
    for matter, verdict in failing(count):
        begun = time.process_time()
        remedy_of(matter, verdict)
        taken.append((time.process_time() - begun) * 1000)
    return statistics.median(taken), statistics.quantiles(taken, n=20)[-1]


if __name__ == "__main__":
    median, most = measure_remedy()
    print(f"smallest movement, CPython: median {median:.2f} ms, 95 of 100 below {most:.2f} ms")
    sys.exit(int(median > 2.0))
