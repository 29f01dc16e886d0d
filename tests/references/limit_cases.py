"""Jobs that stand on a limit, one last digit above it and one below it, with the outcome the reference says.

Made from `limits_reference` alone. Each case is a job as it would be typed and, for some of its checks, the
outcome due; `ABSENT` where the edition sets no such limit. `at` says which figures the limit is looked up by.
"""

from __future__ import annotations

import json
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from decimal import Decimal
from functools import cache
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
        job["thinning"] = {"rule": "none"}
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


# --- power, cylinder, axis, add -------------------------------------------------------------------------------------------

POWERS = {  # each edition's switches, one last digit to both sides, and some more
    "ansi": "0.00 0.25 6.49 6.50 6.51 7.99 8.00 8.01 12.25 20.00",
    "iso-8980": "0.00 3.00 3.01 6.00 6.01 9.00 9.01 12.00 12.01 20.00 20.01 24.00",
    "nj": "0.00 6.00 6.24 6.25 6.26 9.00 11.99 12.00 12.01 15.00",
    "iso-21987": "3.00",
}
CYLINDERS = {
    "ansi": "0.25 2.00 2.01 3.50 3.51 4.50 4.51 6.00",
    "iso-8980": "0.25 0.75 0.76 4.00 4.01 6.00 6.01 8.00",
    "nj": "1.00",
    "iso-21987": "1.00",
}
AXIS_CYLINDERS = {
    "ansi": "0.11 0.12 0.25 0.26 0.50 0.51 0.75 0.76 1.50 1.51 3.00",
    "iso-21987": "0.124 0.125 0.25 0.26 0.50 0.51 0.75 0.76 1.50 1.51 2.50 2.51 4.00",
    "iso-8980": "0.25 0.50 0.51 0.75 0.76 1.50 1.51 3.00",
    "nj": "0.11 0.12 0.37 0.38 0.50 1.00 1.01 1.12 2.00",
}


def listed(table: dict[str, str], edition: str) -> list[D]:
    """The row of a table for an edition, as numbers."""
    return [D(text) for text in next(row for key, row in table.items() if edition.startswith(key)).split()]


def power_cases(edition: str, design: str) -> Iterator[Case]:
    """Spheres: plus in the right lens, minus in the left."""
    for power in listed(POWERS, edition):
        limit = ref.power_limit(edition, power, design)
        for deviation, outcome in around(limit) if limit is not None else [(D(0), ABSENT)]:
            job = base_job(edition, state_for(edition), design)
            for eye, sphere in zip(EYES, (power, -power), strict=True):
                job[eye]["sphere"] = signed(sphere)
                job["readings"][eye]["sphere"] = signed(sphere + deviation)
            due = [Due("power", eye, outcome) for eye in EYES]
            yield case(f"power {power} off {deviation}", job, due, power=power)


def weaker_meridian_cases(edition: str, design: str) -> Iterator[Case]:
    """ISO 8980 judges each meridian, the others the strongest only: +4.00 −1.00, weaker meridian off."""
    limit = ref.power_limit(edition, D(4), design)
    if limit is None:
        return
    for deviation, outcome in around(limit):
        job = base_job(edition, state_for(edition), design)
        for eye in EYES:
            job[eye] |= {"sphere": "+4.00", "cylinder": "-1.00", "axis": "30"}
            job["readings"][eye] |= {"sphere": "+4.00", "cylinder": signed(D(-1) + deviation), "axis": "30"}
        each = outcome if edition.startswith("iso-8980") else "within"
        yield case(f"weaker meridian off {deviation}", job, [Due("power", eye, each) for eye in EYES], power=D(4))


def cylinder_cases(edition: str, design: str) -> Iterator[Case]:
    """Minus form in the right lens; plus form in the left, read in the minus form."""
    for strongest in listed(POWERS, edition):
        for size in listed(CYLINDERS, edition):
            if size > 2 * strongest or (edition in ref.ANSI and strongest != D("12.25")):
                continue
            limit = ref.cylinder_limit(edition, strongest, size, design)
            for deviation, outcome in around(limit) if limit is not None else [(D(0), ABSENT)]:
                job, read = base_job(edition, state_for(edition), design), size + deviation
                if read < 0:
                    continue  # a cylinder of the other sign is another order
                job["right"] |= {"sphere": signed(strongest), "cylinder": signed(-size), "axis": "30"}
                job["readings"]["right"] |= {"sphere": signed(strongest), "cylinder": signed(-read), "axis": "30"}
                job["left"] |= {"sphere": signed(-strongest), "cylinder": signed(size), "axis": "120"}
                job["readings"]["left"] |= {"sphere": signed(read - strongest), "cylinder": signed(-read), "axis": "30"}
                name = f"cylinder {size}, strongest {strongest}, off {deviation}"
                yield case(name, job, [Due("cylinder", eye, outcome) for eye in EYES], power=strongest, cylinder=size)


def axis_cases(edition: str, design: str) -> Iterator[Case]:
    """Axis 90 in the right lens; 178 in the left, so that the limit reaches across 180."""
    for size in listed(AXIS_CYLINDERS, edition):
        limit = ref.axis_limit(edition, size)
        for deviation, outcome in [*around(limit), *around(limit, D(1))] if limit is not None else [(D(20), ABSENT)]:
            job = base_job(edition, state_for(edition), design)
            for eye, axis in zip(EYES, (D(90), D(178)), strict=True):
                job[eye] |= {"sphere": "+5.00", "cylinder": signed(-size), "axis": f"{axis}"}
                read = (axis + deviation) % 180 or D(180)
                job["readings"][eye] |= {"sphere": "+5.00", "cylinder": signed(-size), "axis": f"{read:f}"}
            due = [Due("axis", eye, outcome) for eye in EYES]
            yield case(f"axis, cylinder {size}, off {deviation}", job, due, power=D(5), cylinder=size)


def add_cases(edition: str, design: str) -> Iterator[Case]:
    """Adds of multifocals and progressives."""
    if design == "single-vision":
        return
    for add in (D("0.75"), D("4.00"), D("4.01"), D("5.00")):
        limit = ref.add_limit(edition, add)
        for deviation, outcome in around(limit) if limit is not None else [(D(0), ABSENT)]:
            job = base_job(edition, state_for(edition), design)
            for eye in EYES:
                job[eye]["add"] = f"{add}"
                job["readings"][eye]["add"] = f"{add + deviation}"
            due = [Due("add", eye, outcome) for eye in EYES]
            yield case(f"add {add} off {deviation}", job, due, add=add)


# --- prism of the mounted pair ------------------------------------------------------------------------------------------------

PAIR_POWERS = {"iso-21987": "1.00 3.25 3.26 5.00 5.01 8.00", "ansi": "1.00 9.00", "nj": "1.00 9.00"}
PAIR_COMPONENTS = {"iso-21987": "0.00 2.00 2.01 10.00 10.01 12.00", "ansi": "0.00 3.00", "nj": "0.00 3.00"}


def read_pair(job: Job, size: D, across: D, upward: D) -> None:
    """Order `size` in and up right, in and down left, less a little in the left; read it off by two deviations of the pair.

    A part of the deviation, 0.10, is put into the left lens, so that neither lens shows the whole of it.
    """
    little = min(size, D("0.50"))
    share = D("0.10")
    part = {True: share, False: -share}
    job["right"]["prism"] = prism(size, size)
    job["left"]["prism"] = prism(size - little, little - size)
    job["readings"]["right"]["prism"] = prism(size + across - part[across > 0], size + upward - part[upward > 0])
    job["readings"]["left"]["prism"] = prism(size - little + part[across > 0], little - size - part[upward > 0])


def pair_cases(edition: str, design: str) -> Iterator[Case]:
    """Vertical and horizontal at once; the row of ISO 21987 goes by the larger component and the larger power of the pair."""
    if edition.startswith("iso-8980"):
        return
    for power in listed(PAIR_POWERS, edition):
        for size in listed(PAIR_COMPONENTS, edition):
            limits = {way: ref.pair_limit(edition, way, size, power) for way in ("horizontal", "vertical")}
            assert None not in limits.values()
            both = zip(around(limits["horizontal"] or D(0)), around(limits["vertical"] or D(0)), strict=True)
            for (across, first), (upward, second) in both:
                job = base_job(edition, "mounted", design)
                job["right"]["sphere"], job["left"]["sphere"] = signed(-power), signed(D("0.50") - power)
                read_pair(job, size, across, upward)
                due = [Due("prism.horizontal", "pair", first), Due("prism.vertical", "pair", second)]
                yield case(f"pair {size}, power {power}, off {across} {upward}", job, due, power=power, prism=size)


def pair_mm_cases(edition: str, design: str) -> Iterator[Case]:
    """The millimetre alternatives of ANSI: where the power passes the switch, by what was measured after sliding."""
    if edition not in ref.ANSI:
        return
    each = design == "progressive"
    heights = ref.ANSI_PROGRESSIVE_MM if each else ref.ANSI_PAIR_MM["vertical"]
    for power in (ref.ANSI_SWITCH_VERTICAL, ref.ANSI_SWITCH_VERTICAL + D("0.001")):
        for moved, outcome in around(heights, D("0.1")):
            job = base_job(edition, "mounted", design)
            job["right"]["sphere"], job["left"]["sphere"] = signed(-power), signed(-power + D("0.25"))
            read_pair(job, D("1.00"), D(0), D("0.60"))
            job["readings"]["right"]["prp_height_mm"] = f"{17 + moved}"
            job["readings"]["left"]["prp_height_mm"] = "17"
            present = power > ref.ANSI_SWITCH_VERTICAL
            due = [Due("prp.height", "pair", outcome if present else ABSENT), Due("prism.vertical", "pair", "outside")]
            yield case(f"height off {moved}, power {power}", job, due, power=power)
    job = base_job(edition, "mounted", design)  # both too high by 3 mm: no difference, yet each is off
    job["right"]["sphere"] = job["left"]["sphere"] = "-6.00"
    read_pair(job, D("1.00"), D(0), D("0.60"))
    for eye in EYES:
        job["readings"][eye]["prp_height_mm"] = "20"
    yield case("both 3 mm high", job, [Due("prp.height", "pair", "outside" if each else "within")], power=D(6))


def pair_distance_cases(edition: str, design: str) -> Iterator[Case]:
    """The same horizontally: 2.5 mm in total, progressives 1.0 mm each, with either reading of their switch."""
    if edition not in ref.ANSI:
        return
    each = design == "progressive"
    switches = ref.ANSI_SWITCH_PROGRESSIVE_HORIZONTAL if each else {"": ref.ANSI_SWITCH_HORIZONTAL}
    limit = ref.ANSI_PROGRESSIVE_MM if each else ref.ANSI_PAIR_MM["horizontal"]
    for option, switch in switches.items():
        for power in (switch, switch + last_digit(switch)):
            for moved, outcome in around(limit, D("0.1")):
                job = base_job(edition, "mounted", design)
                if option:
                    job["edition_options"] = {"progressive-horizontal-switch": option}
                job["right"]["sphere"], job["left"]["sphere"] = signed(D("0.25") - power), signed(-power)
                read_pair(job, D("1.00"), D("1.20"), D(0))
                if each:
                    job["readings"]["right"]["pd_mm"] = f"{32 + moved}"
                    job["readings"]["left"]["pd_mm"] = "32"
                else:
                    job["readings"]["prp_distance_mm"] = f"{64 + moved}"
                due = [
                    Due("prp.distance", "pair", outcome if power > switch else ABSENT),
                    Due("prism.horizontal", "pair", "outside"),
                ]
                yield case(f"distance off {moved}, power {power}, switch {switch}", job, due, power=power)


def each_lens_cases(edition: str, design: str) -> Iterator[Case]:
    """The stricter readings offered as options: each lens of a mounted pair by itself."""
    if edition in ref.ANSI:
        options, limit, ways = {"horizontal-reading": "each-lens"}, ref.ANSI_EACH_LENS_HORIZONTAL, ("horizontal",)
    elif edition.startswith("nj"):
        options, limit, ways = {"per-lens-or-total": "both"}, ref.NJ_LENS, ("horizontal", "vertical")
    else:
        return
    for deviation, outcome in around(limit):
        job = base_job(edition, "mounted", design, edition_options=options)
        off = {"horizontal": D(0), "vertical": D(0)} | dict.fromkeys(ways, deviation)
        for eye in EYES:
            job[eye]["prism"] = prism(D(1), D("0.50"))
            job["readings"][eye]["prism"] = prism(D(1) + off["horizontal"], D("0.50") + off["vertical"])
        yield case(
            f"each lens off {deviation}", job, [Due("prism.lens", eye, outcome, way) for eye in EYES for way in ways], power=D(0)
        )


# --- prism of the single lens ---------------------------------------------------------------------------------------------------


def lens_vector_cases(edition: str, design: str) -> Iterator[Case]:
    """ANSI: the vector error of an uncut or edged lens, straight and oblique (3-4-5), and the components as an option."""
    if edition not in ref.ANSI:
        return
    limit = ref.ANSI_LENS_PRISM
    oblique = [((limit * 3 / 5, limit * 4 / 5), "within"), ((limit * 3 / 5, limit * 4 / 5 + D("0.001")), "outside")]
    straight = [((value, D(0)), outcome) for value, outcome in around(limit)] + [
        ((D(0), value), outcome) for value, outcome in around(limit)
    ]
    for state in ("uncut", "edged"):
        for (across, upward), outcome in [*straight, *oblique]:
            for options in ({}, {"lens-prism": "components"}):
                job = base_job(edition, state, design, edition_options=options)
                for eye in EYES:
                    job[eye]["prism"] = prism(D(2), D(1))
                    job["readings"][eye]["prism"] = prism(D(2) + across, D(1) + upward)
                due_here = outcome if not options or D(0) in (across, upward) else "within"
                yield case(
                    f"lens off {across} {upward} {options}", job, [Due("prism.lens", eye, due_here) for eye in EYES], power=D(0)
                )


def lens_mm_cases(edition: str, design: str) -> Iterator[Case]:
    """ANSI: above 3.375 D in the strongest meridian the point may lie 1.0 mm off."""
    if edition not in ref.ANSI:
        return
    for state in ("uncut", "edged"):
        for power in (ref.ANSI_SWITCH_LENS, ref.ANSI_SWITCH_LENS + D("0.001")):
            for slid, outcome in ((D("0.9"), "within"), (D("1.0"), "within"), (D("1.1"), "outside")):
                job = base_job(edition, state, design)
                for eye in EYES:
                    job[eye] |= {"sphere": signed(power), "prism": prism(D(1), D(1))}
                    job["readings"][eye] |= {"prism": prism(D("1.40"), D(1)), "slid_mm": f"{slid}"}
                present = power > ref.ANSI_SWITCH_LENS
                due = [Due("prp.position", eye, outcome if present else ABSENT) for eye in EYES]
                yield case(f"point off {slid}, power {power}", job, due, power=power)


def lens_component_cases(edition: str, design: str) -> Iterator[Case]:
    """ISO 8980 and N.J.: horizontal and vertical components of an uncut lens, each by its own ordered component."""
    if edition in ref.ANSI or edition == "iso-21987":
        return
    powers = ("0.00", "2.00", "6.00", "9.50") if edition.startswith("iso") else ("2.00",)
    sizes = ("0.00", "2.00", "2.01", "10.00", "10.01") if edition.startswith("iso") else ("1.00",)
    for strongest in map(D, powers):
        for size in map(D, sizes):
            limits = {way: ref.lens_limit(edition, way, size, strongest) or D(0) for way in ("horizontal", "vertical")}
            both = zip(around(limits["horizontal"]), around(limits["vertical"]), strict=True)
            for (across, first), (upward, second) in both:
                job = base_job(edition, "uncut", design)
                for eye in EYES:  # the strongest principal power lies along neither 90 nor 180
                    job[eye] |= {
                        "sphere": signed(strongest),
                        "cylinder": signed(-strongest / 4),
                        "axis": "35",
                        "prism": prism(size, size),
                    }
                    job["readings"][eye]["prism"] = prism(size + across, size + upward)
                due = [
                    Due("prism.lens", eye, outcome, way)
                    for eye in EYES
                    for way, outcome in (("horizontal", first), ("vertical", second))
                ]
                yield case(f"lens {size}, power {strongest}, off {across} {upward}", job, due, power=strongest, prism=size)


MAKERS = (
    power_cases,
    weaker_meridian_cases,
    cylinder_cases,
    axis_cases,
    add_cases,
    pair_cases,
    pair_mm_cases,
    pair_distance_cases,
    each_lens_cases,
    lens_vector_cases,
    lens_mm_cases,
    lens_component_cases,
)


@cache
def cases_of(edition: str) -> tuple[Case, ...]:
    """Every case of an edition."""
    return tuple(found for design in designs_of(edition) for make in MAKERS for found in make(edition, design))
