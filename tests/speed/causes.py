"""How long the causes and the next look take, in plain CPython, job by job; a command prints it."""

from __future__ import annotations

import json
import statistics
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from pycore.api import handle
from pycore.case import Case, case_of
from pycore.contract import decode
from pycore.editions.reader import built_in
from pycore.job.document import read_job
from pycore.sections.causes import causes_section
from pycore.sections.look import look_section

Prism = list[dict[str, str]]
ROUNDS = 15
ORDERED: Prism = [{"amount": "3.00", "base": "in"}, {"amount": "0.25", "base": "up"}]
KINDS: dict[str, tuple[Prism, Prism | None]] = {
    "as ordered": (ORDERED, None),
    "one base reversed": ([{"amount": "3.00", "base": "out"}, {"amount": "2.75", "base": "down"}], None),
    "zero off": (
        [{"amount": "3.25", "base": "in"}, {"amount": "0.75", "base": "up"}],
        [{"amount": "2.75", "base": "in"}, {"amount": "2.25", "base": "down"}],
    ),
    "nothing fits": ([{"amount": "5.00", "base": "out"}, {"amount": "4.00", "base": "up"}], None),
}


def jobs() -> Iterator[tuple[str, Case]]:
    """A pair of each kind, thought through as far as order and verdict."""
    source = handle(json.dumps({"format": "wedgewright.request/1", "do": "demonstration"}))
    for kind, (right, left) in KINDS.items():
        job: dict[str, Any] = json.loads(source)["job"]
        job["readings"]["right"] |= {"prism": right, "axis": "20"}
        if left:
            job["readings"]["left"]["prism"] = left
        read = read_job(decode(json.dumps(job)))
        yield kind, case_of(read, built_in(read.edition or ""))


def milliseconds(work: Callable[[Case], object], case: Case) -> float:
    """Median processor time of one piece of work."""
    times = []
    for _ in range(ROUNDS):
        begun = time.process_time()
        work(case)
        times.append((time.process_time() - begun) * 1000)
    return statistics.median(times)


def measure_causes() -> dict[str, tuple[float, float]]:
    """By kind of pair: milliseconds of the causes of both lenses jointly, and of the next look with the causes it needs."""
    return {kind: (milliseconds(causes_section, case), milliseconds(look_section, case)) for kind, case in jobs()}


if __name__ == "__main__":
    for kind, (causes, look) in measure_causes().items():
        print(f"{kind:20s} causes {causes:5.1f} ms (goal 15)   next look {look:5.1f} ms (goal 10)")
