"""How long the sections take beside the order-and-verdict report, in plain CPython, job by job."""

from __future__ import annotations

import json
import statistics
import time
from collections.abc import Iterator
from typing import Any

from pycore.api import handle
from pycore.sections import SECTIONS

JOBS = 60
WHY = ("causes", "look", "remedy")  # measured by themselves
BODY = [name for name in SECTIONS if name not in WHY]
REQUEST = {"format": "wedgewright.request/1", "do": "report"}


def complete_jobs() -> Iterator[dict[str, Any]]:
    """The demonstration, complete and each time a little different, so that nothing kept is found again."""
    job = json.loads(handle(json.dumps(REQUEST | {"do": "demonstration"})))["job"]
    job["wear"] = {"vertex_tested_mm": "12", "vertex_worn_mm": "13", "pantoscopic_deg": "8", "wrap_deg": "5"}
    for number in range(10, 10 + JOBS):
        job["right"]["sphere"], job["left"]["sphere"] = f"-2.{number}", f"-1.{number}"
        job["frame"]["b_mm"] = f"34.{number}"
        yield job


def milliseconds(job: dict[str, Any], sections: list[str]) -> float:
    """Processor time of one report."""
    request = json.dumps(REQUEST | {"job": job, "sections": sections})
    begun = time.process_time()
    handle(request)
    return (time.process_time() - begun) * 1000


def measure_sections() -> tuple[float, float]:
    """Median milliseconds of order and verdict, and of what all sections add to it, measured in turns."""
    plain, added = [], []
    for job in complete_jobs():
        plain.append(milliseconds(job, []))
        added.append(milliseconds(job, BODY) - plain[-1])
    return statistics.median(plain), statistics.median(added)
