"""Cases of prism and of the millimetres in its place: mounted pairs, single lenses."""

from __future__ import annotations

from collections.abc import Iterator
from decimal import Decimal

from tests.references import limits_reference as ref
from tests.references.limit_jobs import (
    ABSENT,
    EYES,
    Case,
    Due,
    Job,
    around,
    base_job,
    case,
    last_digit,
    listed,
    prism,
    signed,
)

D = Decimal

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
