"""The one home of the generators: jobs as a bench would type them; and the calls every test makes.

`HYPOTHESIS_PROFILE=long` runs 10,000 examples of each law instead of the everyday few.
"""

import json
import os
import re
from decimal import ROUND_HALF_EVEN, Decimal
from pathlib import Path
from typing import Any

from hypothesis import HealthCheck, settings
from hypothesis import strategies as st

import pycore
from pycore.api import handle

settings.register_profile("quick", max_examples=80, deadline=None, derandomize=True, suppress_health_check=[HealthCheck.too_slow])
settings.register_profile("long", max_examples=10_000, deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "quick"))

Job = dict[str, Any]
WORDS: dict[str, dict[str, str]] = json.loads((Path(pycore.__file__).parent / "words" / "en.json").read_text("utf-8"))
HOLE = re.compile(r"\{(\w+)\}")
EYES = ("right", "left")
OPPOSITE = {"up": "down", "down": "up", "in": "out", "out": "in", "right": "left", "left": "right"}
SEGMENTED = ("bifocal", "trifocal")
EDITIONS = {
    "mounted": ("ansi-z80.1-2015", "ansi-z80.1-2010", "ansi-z80.1-2020", "iso-21987", "nj-13-35-5.2"),
    "edged": ("ansi-z80.1-2015", "ansi-z80.1-2010", "ansi-z80.1-2020", "nj-13-35-5.2"),
    "uncut": ("ansi-z80.1-2015", "ansi-z80.1-2010", "ansi-z80.1-2020", "iso-8980-1", "iso-8980-2", "nj-13-35-5.2"),
}
OPTIONS = {
    "ansi": {
        "prism-alternatives": ("either", "both", "replace", "prism-only"),
        "horizontal-reading": ("total", "each-lens"),
        "lens-prism": ("vector", "components"),
        "millimetre-power": ("stronger", "both-lenses"),
        "progressive-horizontal-switch": ("3.75", "3.375"),
        "power-comparison": ("principal", "ordered-meridians"),
    },
    "iso-21987": {
        "prism-row": ("lens", "pair"),
        "thinning-row": ("prescribed", "with-thinning"),
        "row-power": ("meridian", "strongest"),
    },
    "iso-8980-1": {"thinning-row": ("prescribed", "with-thinning")},
    "iso-8980-2": {"thinning-row": ("prescribed", "with-thinning")},
    "nj-13-35-5.2": {"per-lens-or-total": ("total", "both")},
}


# --- what every test does -------------------------------------------------------------------------


def answer_to(request: Any) -> dict[str, Any]:
    """The door's answer to one request, given as an object or as its text."""
    text = request if isinstance(request, str) else json.dumps(request, ensure_ascii=False)
    answered = handle(text)
    answered.encode()  # any answer can be written to a file
    answer: dict[str, Any] = json.loads(answered)
    assert_said_in_full(answer)
    return answer


def assert_said_in_full(answer: dict[str, Any]) -> None:
    """Every code of an answer has its sentence, and every hole of it is filled."""
    spoken = [("errors", error["code"], error["params"]) for error in answer.get("errors", [])]
    spoken += [("fixes", error["fix"], error["params"]) for error in answer.get("errors", [])]
    spoken += [("notes", note["code"], note["params"]) for note in answer.get("notes", [])]
    if answer["format"] == "wedgewright.report/1":
        spoken += [("points", answer[eye]["point"]["code"], answer[eye]["point"]["params"]) for eye in EYES if answer[eye]]
        verdict = answer.get("verdict")
        if verdict:
            spoken += [("not_checked", item["code"], item["params"]) for item in verdict["not_checked"]]
            spoken.append(("verdict", verdict["sentence"]["code"], verdict["sentence"]["params"]))
            spoken += [("cautions", code, {}) for code in verdict["cautions"]]
            spoken += [("options", option["why"], {}) for option in verdict["edition"]["options"]]
    for section in answer.get("sections", {}).values():
        spoken.append(("section_titles", section["title"]["code"], section["title"]["params"]))
        spoken += [("section_notes", note["code"], note["params"]) for note in section["notes"]]
        spoken += [("section_rows", row["code"], {}) for row in section["rows"]]
        spoken += [("fields", asked["field"].split(".")[-1], {}) for asked in section["asks"]]
    for group, code, params in spoken:
        sentence = WORDS[group].get(code)
        assert sentence, f"no words for {group}.{code}"
        assert all(isinstance(value, str) for value in params.values()), (code, params)
        missing = set(HOLE.findall(sentence)) - {name for name, value in params.items() if value or name == "given"}
        assert not missing, f"{group}.{code} is not told {missing}"
    for note in answer.get("notes", []):
        assert note["severity"] in ("note", "warning", "ask")
        assert note["about"] in ("order", "reading", "verdict", "instrument", "layout")


def ask(do: str, **keys: Any) -> dict[str, Any]:
    """The answer to one envelope."""
    return answer_to({"format": "wedgewright.request/1", "do": do, **keys})


def report_on(job: Job, **keys: Any) -> dict[str, Any]:
    """The report on a job that must not be refused: order and verdict, without further sections."""
    report = ask("report", job=job, **{"sections": [], **keys})
    assert report["format"] == "wedgewright.report/1", report
    return report


def errors_of(answer: dict[str, Any]) -> list[tuple[str, str]]:
    """Code and field of every fault of a refusal."""
    assert answer["format"] == "wedgewright.refusal/1", answer
    return [(error["code"], error["field"]) for error in answer["errors"]]


def fresh(value: Any) -> Any:
    """A copy in which nothing is shared, not even with itself (a deep copy keeps such ties)."""
    if isinstance(value, dict):
        return {key: fresh(item) for key, item in value.items()}
    return [fresh(item) for item in value] if isinstance(value, list) else value


def patched(job: Job, **changes: Any) -> Job:
    """A copy with changes; `right__axis="20"` sets right.axis, None takes the field out."""
    job = fresh(job)
    for path, value in changes.items():
        *parents, last = path.split("__")
        inner = job
        for name in parents:
            inner = inner.setdefault(name, {})
        if value is None:
            inner.pop(last, None)
        else:
            inner[last] = value
    return job


def checks_of(report: dict[str, Any], id_: str, eye: str | None = None) -> list[dict[str, Any]]:
    """The checks of one identifier (and eye) in a report."""
    return [check for check in report["verdict"]["checks"] if check["id"] == id_ and eye in (None, check["eye"])]


def codes(report: dict[str, Any]) -> set[str]:
    """The codes of a report's notes."""
    return {note["code"] for note in report["notes"]}


def demonstration() -> Job:
    """The invented job that comes with the program."""
    job: Job = ask("demonstration")["job"]
    return job


# --- values as they are typed ---------------------------------------------------------------------


def text_of(value: Decimal) -> str:
    """A value in plain digits."""
    return format(value, "f")


def decimals(low: str, high: str, step: str = "0.01") -> st.SearchStrategy[Decimal]:
    """Values on a step between two ends, both included."""
    size = Decimal(step)
    first, last = int(Decimal(low) / size), int(Decimal(high) / size)
    return st.integers(first, last).map(lambda count: count * size)


def typed(low: str, high: str, step: str = "0.01") -> st.SearchStrategy[str]:
    """The same as typed text."""
    return decimals(low, high, step).map(text_of)


def signed_power(low: str = "-12", high: str = "12") -> st.SearchStrategy[str]:
    """A power with the sign it needs."""
    return decimals(low, high, "0.25").map(lambda value: f"{value:+f}" if value else "0.00")


degrees_360 = st.one_of(
    typed("0", "359.99", "0.01"),
    st.sampled_from(["0", "90", "180", "270", "360", "45", "30", "0.03", "179.98", "180.02", "359.97"]),
)
in_180 = st.one_of(
    st.builds(lambda degrees, side: {"degrees": degrees, "side": side}, typed("1", "179", "1"), st.sampled_from(["up", "down"])),
    st.builds(
        lambda degrees, side: {"degrees": degrees, "side": side}, st.sampled_from(["0", "180"]), st.sampled_from(["in", "out"])
    ),
)
bases = st.one_of(st.sampled_from(["in", "out", "up", "down"]), degrees_360, in_180)


def components(most: str = "6") -> st.SearchStrategy[dict[str, Any]]:
    """One prism in any of the notations."""
    return st.builds(lambda amount, base: {"amount": amount, "base": base}, typed("0", most), bases)


def prisms(count: int = 3) -> st.SearchStrategy[list[dict[str, Any]]]:
    """A list of prisms."""
    return st.lists(components(), max_size=count)


# --- whole jobs -----------------------------------------------------------------------------------


@st.composite
def orders(draw: st.DrawFn, design: str) -> Job:
    """One eye's order."""
    eye: Job = {"sphere": draw(signed_power())}
    if draw(st.booleans()):
        eye |= {"cylinder": draw(signed_power("-4", "4")), "axis": draw(typed("1", "180", "1"))}
    if design in (*SEGMENTED, "progressive"):
        eye["add"] = draw(typed("0.75", "3.50", "0.25"))
    if draw(st.booleans()):
        eye["prism"] = draw(prisms())
    if draw(st.booleans()):
        eye |= {"pd_mm": draw(typed("28", "36", "0.5")), "prp_height_mm": draw(typed("14", "24", "0.5"))}
    if draw(st.integers(0, 5)) == 0:
        eye["stated"] = {"sphere": eye["sphere"], "prism": draw(prisms(2)), "includes_thinning": draw(st.booleans())}
    return eye


def thinning_by_rule(job: Job) -> Decimal:
    """The thinning a rule gives, reckoned here again (both rules: facts of the trade, 1998)."""
    share = {"two-thirds": Decimal(2) / 3, "six-tenths": Decimal("0.6")}[job["thinning"]["rule"]]
    add = min(Decimal(job[eye]["add"]) for eye in EYES)
    return (add * share).quantize(Decimal("0.01"), ROUND_HALF_EVEN)


def _due_components(job: Job, eye: str) -> list[dict[str, Any]]:
    """What the lens must show, as components of a reading; small unknowns do not matter here."""
    order, rule = job[eye], job.get("thinning", {}).get("rule", "none")
    stated = order.get("stated")
    parts = list(stated["prism"] if stated else order.get("prism", []))
    if stated and stated["includes_thinning"]:
        return parts
    if rule == "amount":
        amount = job["thinning"]["amount"]
        if eye == "left":
            amount = job["thinning"].get("left_amount", amount)
        parts.append({"amount": amount, "base": job["thinning"]["base"]})
    elif rule in ("two-thirds", "six-tenths"):
        parts.append({"amount": text_of(thinning_by_rule(job)), "base": "down"})
    return parts


@st.composite
def readings(draw: st.DrawFn, job: Job, eye: str) -> Job:
    """A reading of one lens not far from what it must show."""
    order, reading = job[eye], {}
    off = [
        {"amount": draw(typed("0", "0.80")), "base": draw(st.sampled_from(["in", "out"]))},
        {"amount": draw(typed("0", "0.50")), "base": draw(st.sampled_from(["up", "down"]))},
    ]
    reading["prism"] = [*_due_components(job, eye), *off]
    sense = job["instrument"].get("compensator")
    if sense and draw(st.booleans()):
        setting, base = draw(typed("0.25", "9")), draw(decimals("0", "359", "1"))
        reading["compensator"] = {"amount": setting, "base": text_of(base)}
        shift = base if sense == "own-base" else (base + 180) % 360
        reading["prism"].append({"amount": setting, "base": text_of(shift)})
    if draw(st.booleans()):
        reading["repeats"] = [{"prism": [*_due_components(job, eye), draw(components("0.40"))]}]
    if draw(st.booleans()):
        reading |= {key: order[key] for key in ("sphere", "cylinder", "axis", "add") if key in order}
    if draw(st.booleans()):
        reading |= {"pd_mm": draw(typed("28", "36", "0.5")), "prp_height_mm": draw(typed("14", "24", "0.5"))}
    return reading


@st.composite
def jobs(
    draw: st.DrawFn,
    states: tuple[str, ...] = ("mounted", "uncut", "edged"),
    designs: tuple[str, ...] = ("single-vision", "bifocal", "progressive"),
    rules: tuple[str, ...] = ("simple", "guarded"),
    read: bool = True,
) -> Job:
    """A whole job: both eyes ordered, any edition that covers it, any of its options, readings."""
    state, design = draw(st.sampled_from(states)), draw(st.sampled_from(designs))
    edition = draw(st.sampled_from(EDITIONS[state]))
    offered = OPTIONS["ansi" if edition.startswith("ansi") else edition]
    job: Job = {
        "format": "wedgewright.job/1",
        "state": state,
        "edition": edition,
        "decision_rule": draw(st.sampled_from(rules)),
        "edition_options": {
            name: draw(st.sampled_from(values)) for name, values in offered.items() if draw(st.integers(0, 3)) == 0
        },
        "lens": {"design": design},
        "right": draw(orders(design)),
        "left": draw(orders(design)),
        "instrument": {
            "compensator": draw(st.sampled_from(["lens-prism", "own-base"])),
            "uncertainty": {"prism": draw(typed("0.02", "0.20"))},
            "zero_uncertainty": draw(typed("0", "0.05")),
        },
    }
    if design in (*SEGMENTED, "progressive"):
        rule = draw(st.sampled_from(["none", "two-thirds", "six-tenths", "amount", "unknown"]))
        job["thinning"] = {"rule": rule}
        if rule == "amount":
            job["thinning"] |= {"amount": draw(typed("0", "2")), "base": draw(st.sampled_from(["down", "up"]))}
            if draw(st.booleans()):
                job["thinning"]["left_amount"] = draw(typed("0", "2"))
    if read:
        job["readings"] = {eye: draw(readings(job, eye)) for eye in EYES if draw(st.integers(0, 5))}
        if draw(st.booleans()):
            job["readings"]["at"] = draw(st.sampled_from(["marked-point", "first-lens-set"]))
    return job
