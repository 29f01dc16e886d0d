"""The laws that hold whatever the order: mirror, rotation, transposition, order, zero, thinning.

Sources: vector addition and ISO 8429:1986 (one picture for both eyes, 0 to 360 counter-clockwise,
base in at 0 on the right lens and at 180 on the left); Euler's theorem for the cylinder forms.
Angles and vectors are reckoned again with Python's complex numbers.
"""

import cmath
import copy
import math
from collections import Counter
from decimal import Decimal
from typing import Any

import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from pycore.names import prism_entry
from pycore.optics.prism import NO_PRISM, Prism, from_base, total
from tests.core.strategies import (
    EYES,
    OPPOSITE,
    Job,
    bases,
    components,
    decimals,
    degrees_360,
    jobs,
    prisms,
    report_on,
    signed_power,
    text_of,
    typed,
)

CLOSE = 1e-9


def close(first: float | None, second: float | None, allowed: float = CLOSE) -> bool:
    return first == second or (first is not None and second is not None and abs(first - second) <= allowed)


def same_direction(first: float | None, second: float | None, allowed: float = 1e-6) -> bool:
    """Bases agree, going round by way of 360."""
    if first is None or second is None:
        return first is second
    return abs((first - second + 180) % 360 - 180) <= allowed


def every_prism(report: Job, eye: str) -> dict[str, Any]:
    """Every prism that the report states of one lens."""
    lens = report[eye]
    found = {name: lens[name] for name in ("prescribed", "thinning", "expected", "read", "error") if lens[name]}
    for name in ("full", "onto_rings"):
        if lens["compensator"][name]:
            found[f"{name} residual"] = lens["compensator"][name]["residual"]
    return found


def judged(report: Job, swap: bool = False) -> Counter[tuple[Any, ...]]:
    """The checks as a bag, without the signs that depend on how the order is written."""
    return Counter(
        (
            check["id"],
            OPPOSITE.get(check["eye"], check["eye"]) if swap else check["eye"],
            check["component"],
            round(abs(check["deviation"]), 7) + 0.0,
            round(check["limit"], 7),
            round(check["doubt"], 6) + 0.0,
            check["outcome"],
            check["counts"],
            check["measured"],
        )
        for check in report["verdict"]["checks"]
    )


# --- mirror -----------------------------------------------------------------------------------------------------------


def _mirrored_base(base: Any) -> Any:
    """In and out stay with the eye; degrees are mirrored at the vertical."""
    if isinstance(base, dict):
        return base | {"degrees": text_of(180 - Decimal(base["degrees"]))}
    return base if base in OPPOSITE else text_of((540 - Decimal(base)) % 360)


def _mirrored(part: Any) -> Any:
    if isinstance(part, list):
        return [_mirrored(item) for item in part]
    if not isinstance(part, dict):
        return part
    turned = {name: _mirrored(value) for name, value in part.items()}
    if "base" in turned:
        turned["base"] = _mirrored_base(part["base"])
    if "axis" in turned:
        turned["axis"] = text_of((180 - Decimal(part["axis"])) or Decimal(180))
    if "right" in turned or "left" in turned:
        eyes = {OPPOSITE[eye]: turned.pop(eye) for eye in EYES if eye in turned}
        turned |= eyes
    return turned


def mirrored(job: Job) -> Job:
    """The same job for a wearer seen in a mirror: eyes exchanged, left and right exchanged."""
    thinning = job.get("thinning", {})
    turned: Job = _mirrored({name: value for name, value in job.items() if name != "thinning"})
    if thinning:
        turned["thinning"] = dict(thinning)
        if "left_amount" in thinning:
            turned["thinning"] |= {"amount": thinning["left_amount"], "left_amount": thinning["amount"]}
    return turned


def _mirrored_shape(shape: Job) -> dict[str, Any]:
    turned = shape | {"x": -shape["x"]}
    if "x2" in shape:
        turned |= {"x": -shape["x2"], "x2": -shape["x"]}
        turned["open"] = sorted(OPPOSITE.get(side, side) if side in ("left", "right") else side for side in shape["open"])
    return turned


def regions(report: Job, eye: str) -> list[Job]:
    return [
        shape | ({"open": sorted(shape["open"])} if "open" in shape else {})
        for scene in report["scenes"][eye].values()
        for shape in scene["shapes"]
        if shape["role"] == "region"
    ]


@given(job=jobs())
def test_mirror(job: Job) -> None:
    here, there = report_on(job, scenes=True), report_on(mirrored(job), scenes=True)
    assert here["verdict"]["outcome"] == there["verdict"]["outcome"]
    assert judged(here) == judged(there, swap=True)
    assert Counter(note["code"] for note in here["notes"]) == Counter(note["code"] for note in there["notes"])
    for eye in EYES:
        mine, theirs = every_prism(here, eye), every_prism(there, OPPOSITE[eye])
        assert mine.keys() == theirs.keys()
        for name, prism in mine.items():
            other = theirs[name]
            assert close(prism["amount"], other["amount"]), name
            assert close(prism["x"], -other["x"])
            assert close(prism["y"], other["y"])
            assert prism["quadrant"] == other["quadrant"]
            assert prism["base"] is None or same_direction(prism["base"], 180 - other["base"])
        for name in ("full", "onto_rings"):
            setting, other = here[eye]["compensator"][name], there[OPPOSITE[eye]]["compensator"][name]
            assert (setting is None) == (other is None)
            if setting:
                assert close(setting["amount"], other["amount"])
                assert setting["beyond_maximum"] == other["beyond_maximum"]
                assert setting["base"] is None or same_direction(setting["base"], 180 - other["base"])
        for mine_shape, theirs_shape in zip(regions(here, eye), regions(there, OPPOSITE[eye]), strict=True):
            assert mine_shape["empty"] == theirs_shape["empty"]
            turned = _mirrored_shape(theirs_shape)
            assert mine_shape["empty"] or all(
                close(value, turned[key]) if isinstance(value, float) else value == turned[key] for key, value in mine_shape.items()
            )
    assert close(here["pair"]["horizontal"]["ordered"], there["pair"]["horizontal"]["ordered"])
    assert close(here["pair"]["vertical"]["ordered"], -there["pair"]["vertical"]["ordered"])
    first = here["read_first"] and here["read_first"]["eye"]
    assert (there["read_first"] and OPPOSITE[there["read_first"]["eye"]]) == first


def test_mirror_with_two_designs() -> None:
    """Each lens is judged as what it is, whichever eye it stands before."""
    eye = {"sphere": "-2.00", "cylinder": "-1.00", "axis": "90", "pd_mm": "31", "prp_height_mm": "18"}
    job: Job = {
        "format": "wedgewright.job/1",
        "state": "mounted",
        "edition": "ansi-z80.1-2015",
        "thinning": {"rule": "none"},
        "right": eye | {"design": "single-vision"},
        "left": eye | {"design": "progressive", "add": "2.00"},
        "readings": {
            eye_name: {"sphere": "-2.15", "cylinder": "-0.85", "axis": "90", "prism": [{"amount": "0"}]} for eye_name in EYES
        },
    }
    here, there = report_on(job), report_on(mirrored(job))
    assert judged(here) == judged(there, swap=True)
    limits = {check["eye"]: check["limit"] for check in here["verdict"]["checks"] if check["id"] == "cylinder"}
    assert limits == {"right": 0.13, "left": 0.16}  # Z80.1-2015, published quick reference guide


# --- rotation, cancellation, order, zero ---------------------------------------------------------------------------------


@given(
    parts=st.lists(st.tuples(decimals("0", "12"), decimals("0", "359.9", "0.1")), min_size=1, max_size=4),
    turn=decimals("0", "359.9", "0.1"),
)
def test_rotation(parts: list[tuple[Decimal, Decimal]], turn: Decimal) -> None:
    """Turning every component turns the sum (complex multiplication)."""
    before = total(from_base(amount, base) for amount, base in parts)
    after = total(from_base(amount, base + turn) for amount, base in parts)
    wanted = complex(before.x, before.y) * cmath.rect(1.0, math.radians(turn))
    assert abs(complex(after.x, after.y) - wanted) <= CLOSE
    assert abs(complex(before.x, before.y) - sum(cmath.rect(float(amount), math.radians(base)) for amount, base in parts)) <= CLOSE


@given(amount=decimals("0", "60"), base=decimals("0", "359.99"))
def test_opposite_bases_cancel_exactly(amount: Decimal, base: Decimal) -> None:
    assert from_base(amount, base) == -from_base(amount, base + 180)
    assert total([from_base(amount, base), from_base(amount, base + 180)]) == NO_PRISM


def test_opposite_bases_cancel_exactly_at_every_tenth_of_a_degree() -> None:
    """Naive sines leave a ghost nearly everywhere (measured: 1,751 of 1,800 bases)."""
    ghosts = [
        (amount, tenth)
        for tenth in range(3600)
        for amount in (Decimal(3), Decimal("17.83"))
        if total([from_base(amount, Decimal(tenth) / 10), from_base(amount, Decimal(tenth) / 10 + 180)]) != NO_PRISM
    ]
    assert ghosts == []


@given(job=jobs(), random=st.randoms(use_true_random=False))
def test_order_of_components_does_not_matter(job: Job, random: Any) -> None:
    other = copy.deepcopy(job)
    for part in [other[eye] for eye in EYES] + list(other.get("readings", {}).values()):
        if isinstance(part, dict) and "prism" in part:
            random.shuffle(part["prism"])
    keys = list(other)
    random.shuffle(keys)
    first, second = report_on(job, scenes=True), report_on({key: other[key] for key in keys}, scenes=True)
    for report in (first, second):
        del report["echo"], report["order_lines"]
    assert first == second


@given(job=jobs(), base=bases, eye=st.sampled_from(EYES))
def test_prism_of_zero_changes_nothing(job: Job, base: Any, eye: str) -> None:
    assume(len(job[eye].get("prism", [])) < 8)
    other = copy.deepcopy(job)
    other[eye].setdefault("prism", []).append({"amount": "0", "base": base})
    first, second = report_on(job, scenes=True), report_on(other, scenes=True)
    for report in (first, second):
        del report["echo"], report["order_lines"]
        report["notes"] = [note for note in report["notes"] if note["code"] != "prism-zero-with-base"]
    assert first == second


# --- the cylinder's two forms --------------------------------------------------------------------------------------------


def transposed(power: Job) -> Job:
    """The other cylinder form: S + C, -C, axis ± 90."""
    if "cylinder" not in power:
        return power
    sphere, cylinder, axis = (Decimal(power[name]) for name in ("sphere", "cylinder", "axis"))
    new = {"sphere": sphere + cylinder, "cylinder": -cylinder}
    signed = {name: f"{value:+f}" if value else "0.00" for name, value in new.items()}
    return power | signed | {"axis": text_of(axis + 90 if axis <= 90 else axis - 90)}


@given(job=jobs(), which=st.sampled_from(["order", "reading", "both"]))
def test_transposition_changes_only_the_form(job: Job, which: str) -> None:
    other = copy.deepcopy(job)
    for eye in EYES:
        if which != "reading":
            other[eye] = transposed(other[eye])
            if "stated" in other[eye]:
                other[eye]["stated"].pop("sphere")
        if which != "order" and eye in other.get("readings", {}) and "sphere" in other["readings"][eye]:
            other["readings"][eye] = transposed(other["readings"][eye])
    start = copy.deepcopy(job)
    for eye in EYES:
        if which != "reading" and "stated" in start[eye]:
            start[eye]["stated"].pop("sphere")
    first, second = report_on(start, scenes=True), report_on(other, scenes=True)
    assert judged(first) == judged(second)
    assert first["verdict"]["outcome"] == second["verdict"]["outcome"]
    assert first["read_first"] == second["read_first"]
    for eye in EYES:
        assert first[eye]["power"]["plus_form"] == second[eye]["power"]["plus_form"]
        assert first[eye]["power"]["minus_form"] == second[eye]["power"]["minus_form"]
        assert close(first[eye]["power"]["at_90"], second[eye]["power"]["at_90"])
        assert close(first[eye]["power"]["at_180"], second[eye]["power"]["at_180"])
        assert every_prism(first, eye) == every_prism(second, eye)
        centres = [report[eye]["oc_from_prp_mm"] for report in (first, second)]
        assert (centres[0] is None) == (centres[1] is None)
        assert centres[0] is None or all(close(centres[0][name], centres[1][name], 1e-7) for name in centres[0])


# --- thinning -------------------------------------------------------------------------------------------------------------


@given(
    job=jobs(designs=("progressive", "bifocal"), states=("mounted",)), amount=typed("0", "3"), base=st.sampled_from(["down", "up"])
)
def test_equal_thinning_leaves_the_pair_unchanged(job: Job, amount: str, base: str) -> None:
    """Yoked vertical prism cancels (study note of the technical brief of 1998)."""
    for eye in EYES:
        job[eye].pop("stated", None)
    bare, thinned = copy.deepcopy(job), copy.deepcopy(job)
    bare["thinning"], thinned["thinning"] = {"rule": "none"}, {"rule": "amount", "amount": amount, "base": base}
    for options in (bare["edition_options"], thinned["edition_options"]):
        options.pop("thinning-row", None)
    first, second = report_on(bare), report_on(thinned)
    assert first["pair"] == second["pair"]
    pairs = [Counter(entry for entry in judged(report).elements() if entry[1] == "pair") for report in (first, second)]
    assert pairs[0] == pairs[1]


# --- every notation, there and back -----------------------------------------------------------------------------------------


def lens_of(prism: list[Any], eye: str) -> Job:
    """What the report says of one lens ordered with these prisms."""
    job = {"format": "wedgewright.job/1", "state": "uncut", eye: {"sphere": "-1.00", "prism": prism}}
    found: Job = report_on(job)[eye]["prescribed"]
    return found


def digits(value: float) -> str:
    """A value as typed, within the twelve digits that may be typed."""
    return f"{value:.9f}"


@given(prism=prisms(4), eye=st.sampled_from(EYES))
def test_every_notation_reads_back(prism: list[Any], eye: str) -> None:
    first = lens_of(prism, eye)
    sides = [first["horizontal"], first["vertical"]]
    by_words = lens_of([{"amount": digits(side["amount"]), "base": side["base"]} for side in sides if side["base"]], eye)
    assert close(by_words["x"], first["x"])
    assert close(by_words["y"], first["y"])
    assert by_words["quadrant"] == first["quadrant"]
    if first["base"] is None:
        assert first["amount"] == 0
        assert first["notation_180"] is None
        return
    assert 0 <= first["base"] < 360
    assert first["shown"]["base"] != "360"
    by_base = lens_of([{"amount": digits(first["amount"]), "base": digits(first["base"])}], eye)
    assert close(by_base["x"], first["x"], 1e-7)
    assert close(by_base["y"], first["y"], 1e-7)
    turned = first["notation_180"]
    by_180 = lens_of([{"amount": digits(first["amount"]), "base": {"degrees": turned["degrees"], "side": turned["side"]}}], eye)
    assert same_direction(by_180["base"], first["base"], 0.500001)
    assert {"U": "up", "D": "down"}.get(turned["words"][1], first["quadrant"]) in first["quadrant"]


@given(degrees=st.integers(1, 179), side=st.sampled_from(["up", "down"]), eye=st.sampled_from(EYES), amount=typed("0.25", "9"))
def test_the_180_notation(degrees: int, side: str, eye: str, amount: str) -> None:
    """The angle modulo 180 with up or down (US community-college course OPH 142)."""
    found = lens_of([{"amount": amount, "base": {"degrees": str(degrees), "side": side}}], eye)
    assert same_direction(found["base"], degrees + (180 if side == "down" else 0))
    assert found["notation_180"]["degrees"] == f"{degrees:03}"
    assert found["notation_180"]["side"] == side
    plane = cmath.rect(1.0, math.radians(found["base"]))
    towards_nose = plane.real * (1 if eye == "right" else -1)
    words = f"B{side[0].upper()}" + ("" if degrees == 90 else "&I" if towards_nose > 0 else "&O")
    assert found["notation_180"]["words"] == words


@given(
    x=decimals("-3", "3", "0.000000000001"),
    y=st.sampled_from(["0", "1E-12", "-1E-12", "4E-10", "-6E-10", "0.001"]),
    eye=st.sampled_from(EYES),
)
def test_bases_next_to_the_horizontal_have_sound_names(x: Decimal, y: str, eye: Any) -> None:
    entry = prism_entry(eye, Prism(x, Decimal(y)))
    assert (entry["base"] is None) == (entry["quadrant"] == "none")
    if entry["base"] is not None:
        assert 0 <= entry["base"] < 360
        assert entry["shown"]["base"] != "360"


# --- the compensator ----------------------------------------------------------------------------------------------------------


@given(
    prism=st.lists(components("9"), min_size=1, max_size=3),
    eye=st.sampled_from(EYES),
    sense=st.sampled_from(["lens-prism", "own-base"]),
    maximum=typed("1", "15"),
    sphere=signed_power(),
)
def test_compensator_setting_and_residual_make_the_expected_reading(
    prism: list[Any], eye: str, sense: str, maximum: str, sphere: str
) -> None:
    """p = scale + residual where the scale reads the lens's prism, p = residual - scale where its own base (from memory)."""
    job = {
        "format": "wedgewright.job/1",
        "state": "uncut",
        eye: {"sphere": sphere, "prism": prism},
        "instrument": {"compensator": sense, "compensator_maximum": maximum, "rings": "5", "ring_step": "1"},
    }
    lens = report_on(job)[eye]
    expected = complex(lens["expected"]["x"], lens["expected"]["y"])
    assert lens["on_rings"] == (abs(expected) <= 5 or math.isclose(abs(expected), 5, abs_tol=1e-9))
    assert (lens["compensator"]["onto_rings"] is None) == lens["on_rings"]
    for name in ("full", "onto_rings"):
        setting = lens["compensator"][name]
        if setting is None:
            continue
        scale = cmath.rect(setting["amount"], math.radians(setting["base"] or 0))
        residual = complex(setting["residual"]["x"], setting["residual"]["y"])
        assert abs((scale if sense == "lens-prism" else -scale) + residual - expected) <= 1e-7
        assert setting["amount"] <= float(maximum) + CLOSE
        if not setting["beyond_maximum"]:
            assert close(abs(residual), 0 if name == "full" else 5, 1e-7)
        reading: Job = {"prism": [{"amount": digits(abs(residual)), "base": digits(setting["residual"]["base"] or 0)}]}
        if setting["amount"]:
            reading["compensator"] = {"amount": digits(setting["amount"]), "base": digits(setting["base"])}
        read = report_on(job | {"readings": {eye: reading}})[eye]["read"]
        assert abs(complex(read["x"], read["y"]) - expected) <= 1e-6


@pytest.mark.parametrize(("sense", "base"), [("lens-prism", 37.0), ("own-base", 217.0)])
def test_compensator_worked_example(sense: str, base: float) -> None:
    """8 prism dioptres at 37, rings to 5: set 3 at 37, 5 at 37 is left (row WE84, from memory)."""
    job = {
        "format": "wedgewright.job/1",
        "state": "uncut",
        "right": {"sphere": "0.00", "prism": [{"amount": "8", "base": "37"}]},
        "instrument": {"compensator": sense},
    }
    setting = report_on(job)["right"]["compensator"]["onto_rings"]
    assert (setting["amount"], setting["base"]) == (3, pytest.approx(base))
    assert (setting["residual"]["amount"], setting["residual"]["base"]) == (5, pytest.approx(37))


@given(base=degrees_360)
def test_360_is_0(base: str) -> None:
    here = lens_of([{"amount": "2.5", "base": base}], "right")
    assert same_direction(here["base"], float(base))
