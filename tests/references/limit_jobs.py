"""How a case on a limit is put together: a job as it would be typed, and the outcome due for some of its checks.

`ABSENT` is due where the edition sets no such limit. `at` says which figures the limit is looked up by.
"""

from __future__ import annotations

import json
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

from pycore.api import handle
from tests.references import limits_reference as ref

D = Decimal

Job = dict[str, Any]
ABSENT = "absent"
EYES = ("right", "left")
EDITIONS = (*ref.ANSI, "iso-21987", "iso-8980-1", "iso-8980-2", "nj-13-35-5.2")
DESIGNS = {
    "iso-21987": ("single-vision", "progressive"),
    "iso-8980-1": ("single-vision", "bifocal"),
    "iso-8980-2": ("progressive",),
}


@dataclass(frozen=True)
class Due:
    """One check of a job and the outcome it must have: within, outside or absent."""

    check: str
    eye: str
    outcome: str
    component: str | None = None

    def seen_in(self, report: Job) -> str:
        """The outcome that the report gives it: the worst where several meridians are checked."""
        if "verdict" not in report:
            return "refused"
        found = {
            entry["outcome"]
            for entry in report["verdict"]["checks"]
            if (entry["id"], entry["eye"]) == (self.check, self.eye)
            and self.component in (None, entry["component"])
            and entry["counts"]
        }
        return next((outcome for outcome in ("outside", "unread", "within") if outcome in found), ABSENT)


@dataclass(frozen=True)
class Case:
    """A job and what must come of it."""

    name: str
    job: Job
    due: tuple[Due, ...]
    at: dict[str, D]


# --- small things -------------------------------------------------------------------------------------------------------


def report_on(job: Job, **keys: Any) -> Job:
    """The answer of the door to a job."""
    request = {"format": "wedgewright.request/1", "do": "report", "sections": [], "job": job, **keys}
    answer: Job = json.loads(handle(json.dumps(request)))
    return answer


def signed(value: D) -> str:
    """A power as typed, with its sign."""
    return f"{value:+f}" if value else "0.00"


def component(value: D, plus: str, minus: str) -> Job:
    """A prism component from a signed amount."""
    return {"amount": f"{abs(value):f}", "base": plus if value >= 0 else minus}


def prism(inward: D, up: D) -> list[Job]:
    """The two components of a prism, in and up positive."""
    return [component(inward, "in", "out"), component(up, "up", "down")]


def last_digit(limit: D) -> D:
    """One in the last place of a limit, at least to the hundredth for dioptres."""
    return D((0, (1,), int(limit.as_tuple().exponent)))


def around(limit: D, step: D | None = None) -> list[tuple[D, str]]:
    """Deviations on the limit, above and below, of both signs, each with its outcome."""
    step = step or min(last_digit(limit), D("0.01"))
    sizes = [(limit, "within"), (limit + step, "outside"), (limit - step, "within")]
    return [(sign * size, outcome) for size, outcome in sizes for sign in (1, -1) if size >= 0]


def base_job(edition: str, state: str, design: str, **more: Any) -> Job:
    """A job of two empty eyes."""
    job: Job = {
        "format": "wedgewright.job/1",
        "state": state,
        "edition": edition,
        "lens": {"design": design},
        "right": {"sphere": "0.00", "pd_mm": "32", "prp_height_mm": "17"},
        "left": {"sphere": "0.00", "pd_mm": "32", "prp_height_mm": "17"},
        "readings": {"at": "marked-point", "right": {}, "left": {}},
        **more,
    }
    if design != "single-vision":
        job.setdefault("thinning", {"rule": "none"})
        for eye in EYES:
            job[eye]["add"] = "2.00"
    return job


def state_for(edition: str) -> str:
    """A state the edition covers, for powers."""
    return "uncut" if edition.startswith("iso-8980") else "mounted"


def case(name: str, job: Job, due: Iterable[Due], **at: D) -> Case:
    """Put a case together."""
    return Case(f"{job['edition']} {job['state']} {job['lens']['design']} {name}", job, tuple(due), at)


def designs_of(edition: str) -> tuple[str, ...]:
    """The designs an edition is tried with."""
    return DESIGNS.get(edition, ("single-vision", "bifocal", "progressive"))


def listed(table: dict[str, str], edition: str) -> list[D]:
    """The row of a table for an edition, as numbers."""
    return [D(text) for text in next(row for key, row in table.items() if edition.startswith(key)).split()]
