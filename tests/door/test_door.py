"""The door by its contract: one text in, one text out; numbers, limits, the envelope, the words."""

import ast
import copy
import json
import math
from decimal import Decimal
from pathlib import Path
from typing import Any

import jsonschema
import pytest
from hypothesis import given
from hypothesis import strategies as st

import pycore
from pycore.api import handle
from pycore.schema import job_schema
from tests.core.strategies import (
    EYES,
    WORDS,
    Job,
    answer_to,
    ask,
    checks_of,
    codes,
    decimals,
    demonstration,
    errors_of,
    jobs,
    patched,
    report_on,
    text_of,
)
from tests.door.pairs import EXAMPLE, PAIR, every_text, outcome, read, words, xy

PACKAGE = Path(pycore.__file__).parent
SCHEMA = jsonschema.Draft202012Validator(job_schema())


def test_the_example_of_the_contract() -> None:
    report = report_on(EXAMPLE, scenes=True, text=True)
    assert set(report) >= {
        "format",
        "job",
        "edition",
        "made_by",
        "right",
        "left",
        "pair",
        "verdict",
        "notes",
        "echo",
        "scenes",
        "text",
    }
    assert (report["job"], report["edition"], report["made_by"]["contract"]) == ("T-1042", "ansi-z80.1-2015", 1)
    assert len(report["made_by"]["edition_sha256"]) == 64
    right, left = report["right"], report["left"]
    assert set(right) >= {"prescribed", "thinning", "expected", "power", "compensator", "oc_from_prp_mm", "read", "error"}
    # Thinning 2/3 of 2.00 is 1.33 (the technical brief of 1998, row WE54), down in both.
    assert xy(right["thinning"]) == xy(left["thinning"]) == (0, -1.33)
    assert xy(right["expected"]) == pytest.approx((3, 0.17), abs=1e-9)
    # 4.1 at 217: cosine and sine of the general library.
    oblique = (4.1 * math.cos(math.radians(217)), 4.1 * math.sin(math.radians(217)))
    assert xy(left["prescribed"]) == pytest.approx(oblique, abs=1e-9)
    assert left["prescribed"]["quadrant"] == "down-in"
    assert left["prescribed"]["notation_180"] == {"degrees": "037", "side": "down", "words": "BD&I"}
    assert xy(right["error"]) == pytest.approx((-0.25, 0.08), abs=1e-9)
    assert report["pair"]["vertical"]["ordered"] == pytest.approx(1.5 - oblique[1], abs=1e-9)
    assert report["pair"]["horizontal"]["ordered"] == pytest.approx(3 - oblique[0], abs=1e-9)
    assert right["power"]["minus_form"]["shown"]["text"] == "−0.75 −1.50 ×110"
    assert right["oc_from_prp_mm"] is None
    assert "decentring-progressive" in codes(report)
    check = checks_of(report, "prism.vertical")[0]
    keys = "id group eye ordered read deviation limit margin uncertainty doubt unit shown outcome clause provenance measured counts"
    assert set(check) >= set(keys.split())
    assert set(check["shown"]) >= {"deviation", "limit", "margin"}
    assert report["verdict"]["cautions"] == ["prescriber", "local-law", "sign-off"]
    assert all("{" not in text for text in every_text(answer_to(EXAMPLE)))  # with every section
    SCHEMA.validate(EXAMPLE)


def test_each_demonstration_pair_but_the_first_fails_for_its_own_cause_and_leads_to_the_next() -> None:
    seen, pair = [], "within"
    while pair not in seen:
        answer = ask(do="demonstration", pair=pair)
        verdict = report_on(answer["job"])["verdict"]
        assert verdict["outcome"] == ("within" if pair == "within" else "outside"), pair
        causes = ask(do="report", job=answer["job"], sections=["causes"])["causes"]
        assert causes[0]["code"] == ("as-ordered" if pair == "within" else pair), pair
        seen.append(pair)
        pair = answer["next"]
    assert (pair, seen) == ("within", answer["pairs"])
    assert ask(do="demonstration", pair="no-such")["errors"][0]["code"] == "choice-unknown"


def test_the_demonstration_job() -> None:
    job = demonstration()
    assert job["demonstration"] is True
    assert job["id"].startswith("DEMO")
    SCHEMA.validate(job)
    assert outcome(job) == "within"
    assert "DEMONSTRATION" in report_on(job, text=True)["text"]


@given(job=jobs())
def test_any_job_is_answered_in_full(job: Job) -> None:
    """Against its schema; no text with a hole left open; pictures of finite numbers; nothing kept."""
    SCHEMA.validate(job)
    report = report_on(job, scenes=True, text=True)
    text = json.dumps(report, ensure_ascii=False)
    assert "{" not in report["text"]
    assert all("{" not in value for value in every_text(report))
    assert "NaN" not in text
    assert "Infinity" not in text
    for eye in EYES:
        for scene in report["scenes"][eye].values():
            left, bottom, right, top = scene["extent"]
            assert left < right
            assert bottom < top
            numbers = [value for shape in scene["shapes"] for value in shape.values() if isinstance(value, float)]
            assert all(math.isfinite(value) for value in numbers)
            target = next((shape for shape in scene["shapes"] if shape["role"] == "expected"), None)
            assert target is not None
            assert left <= target["x"] <= right
            assert bottom <= target["y"] <= top
    handle(json.dumps(EXAMPLE))
    assert report_on(job, scenes=True, text=True) == report


def test_typed_text_and_json_numbers_mean_the_same() -> None:
    typed = json.loads(json.dumps(EXAMPLE), parse_float=str, parse_int=str)
    commas = json.loads(json.dumps(EXAMPLE), parse_float=lambda text: text.replace(".", ","), parse_int=str)
    minus = json.loads(json.dumps(EXAMPLE).replace('"-', '"−'))
    first = report_on(EXAMPLE)
    assert report_on(typed) == report_on(commas) == report_on(minus) == first


@pytest.mark.parametrize(
    "parts", [("0.1 up", "0.2 up", "0.03 up"), ("0.33 up",), ("0.330 up",), ("0,330 up",), ("1.10 up", "0.77 down")]
)
def test_on_the_limit_is_on_the_limit(parts: tuple[str, ...]) -> None:
    """0.1 + 0.2 + 0.03 is 0.33 in decimals, and more than that in binary fractions."""
    report = report_on(read(PAIR, words(*parts), words("0 up")))
    check = checks_of(report, "prism.vertical")[0]
    assert (check["margin"], check["outcome"], check["limit"]) == (0, "within", 0.33)
    beyond = report_on(read(PAIR, words(*parts, "0.000000001 up"), words("0 up")))
    assert checks_of(beyond, "prism.vertical")[0]["outcome"] == "outside"


@given(
    right=decimals("0", "1.2", "0.001"),
    limit=st.sampled_from(["0.33", "0.67"]),
    more=st.sampled_from(["0", "0.0001", "0.004", "0.000000002"]),
)
def test_what_is_shown_agrees_with_the_outcome(right: Decimal, limit: str, more: str) -> None:
    """Never "0.33 > 0.33": the digits shown tell deviation and limit apart, half-even, true minus."""
    component, word = ("vertical", "up") if limit == "0.33" else ("horizontal", "in")
    report = report_on(read(PAIR, words(f"{text_of(right + Decimal(more))} {word}"), words(f"0 {word}")))
    check = checks_of(report, f"prism.{component}")[0]
    shown = {
        name: Decimal(text.replace("−", "-")) for name, text in check["shown"].items() if name in ("deviation", "limit", "margin")
    }
    assert (abs(shown["deviation"]) <= shown["limit"]) == (check["outcome"] == "within")
    assert (abs(shown["deviation"]) == shown["limit"]) == (abs(check["deviation"]) == check["limit"])
    assert "-" not in check["shown"]["deviation"]


def test_what_is_shown_is_rounded_half_to_even_with_the_true_minus() -> None:
    seen = patched(PAIR, right__prism=words("0.125 in", "0.375 up"), readings__right__prism=words("0.12 in", "0.3749 up"))
    right = report_on(seen)["right"]
    assert (right["prescribed"]["shown"]["horizontal"], right["prescribed"]["shown"]["vertical"]) == ("0.12", "0.38")
    assert right["error"]["shown"]["vertical"] == "0.00"
    check = checks_of(report_on(read(PAIR, words("0.1 down"), words("0 up"))), "prism.vertical")[0]
    assert (check["shown"]["deviation"], check["shown"]["margin"]) == ("−0.10", "0.23")


def test_a_sign_must_be_written_unless_there_is_nothing_to_sign() -> None:
    for field in ("sphere", "cylinder"):
        job = patched(patched(PAIR, right__cylinder="-1.00", right__axis="90"), **{f"right__{field}": "1.25"})
        assert errors_of(answer_to(job)) == [("sign-missing", f"right.{field}")]
    for zero in ("0", "0.00", "+0", "-0.00", "0,0"):
        assert report_on(patched(PAIR, right__sphere=zero))["right"]["power"]["plus_form"]["sphere"] == 0
    assert report_on(patched(PAIR, right__sphere=1.25))["right"]["power"]["plus_form"]["sphere"] == 1.25
    assert errors_of(answer_to(patched(PAIR, readings__left__sphere="2.00"))) == [("sign-missing", "readings.left.sphere")]


def test_axis_0_is_180_and_base_360_is_0() -> None:
    job = read(
        patched(PAIR, right__cylinder="-1.00", right__axis="0", right__prism=[{"amount": "2", "base": "360"}]),
        words("2 in"),
        words("0 up"),
    )
    job = patched(job, readings__right__sphere="-2.00", readings__right__cylinder="-1.00", readings__right__axis="0")
    report = report_on(job)
    assert report["right"]["power"]["minus_form"]["axis"] == 180
    assert report["right"]["prescribed"]["base"] == 0
    fields = [note["field"] for note in report["notes"] if note["code"] == "axis-zero"]
    assert fields == ["right.axis", "readings.right.axis"]
    assert checks_of(report, "axis", "right")[0]["deviation"] == 0


@pytest.mark.parametrize(
    ("ordered", "seen", "deviation"), [("178", "2", 4), ("2", "179", -3), ("180", "1", 1), ("1", "180", -1), ("45", "135", 90)]
)
def test_axes_are_compared_the_short_way_round(ordered: str, seen: str, deviation: float) -> None:
    job = patched(PAIR, right__cylinder="-1.00", right__axis=ordered)
    job = patched(job, readings__right={"sphere": "-2.00", "cylinder": "-1.00", "axis": seen})
    check = checks_of(report_on(job), "axis", "right")[0]
    assert abs(check["deviation"]) == abs(deviation)
    assert abs(deviation) == 90 or check["deviation"] == deviation
    assert (check["shown"]["ordered"], check["shown"]["read"]) == (ordered, seen)


def test_limits_of_the_document_are_where_the_contract_says() -> None:
    """64 KB, depth 8, 64 characters, 12 digits, 8 prisms, 20 repeats: the last that goes, the first that does not."""
    assert report_on(patched(PAIR, id="x" * 64))["job"] == "x" * 64
    assert errors_of(answer_to(patched(PAIR, id="x" * 65))) == [("text-too-long", "id")]
    report_on(patched(PAIR, right__pd_mm="31.0000000000"))
    assert errors_of(answer_to(patched(PAIR, right__pd_mm="31.00000000000"))) == [("number-too-long", "right.pd_mm")]
    report_on(patched(PAIR, right__prism=words("1 in") * 8))
    assert errors_of(answer_to(patched(PAIR, right__prism=words("1 in") * 9))) == [("list-too-long", "right.prism")]
    again = [{"prism": words("1 in")}]
    assert report_on(read(PAIR, words("1 in"), words("1 in"), readings__left__repeats=again * 20))["left"]["spread"]["count"] == 21
    assert errors_of(answer_to(patched(PAIR, readings__left__repeats=again * 21))) == [("list-too-long", "readings.left.repeats")]
    job = json.dumps(PAIR)
    assert answer_to(job + " " * (64 * 1024 - len(job)))["format"] == "wedgewright.report/1"
    assert errors_of(answer_to(job + " " * (64 * 1024 + 1 - len(job)))) == [("job-too-long", "job")]
    padded = {
        "format": "wedgewright.request/1",
        "do": "report",
        "job": patched(PAIR, right__prism=[{"amount": "1", "base": "in", "n" * 40: "x" * 60}] * 700),
    }
    assert errors_of(answer_to(padded)) == [("job-too-long", "job")]
    assert errors_of(answer_to(" " * (1024 * 1024 + 1))) == [("request-too-long", "")]
    assert errors_of(answer_to('{"format": "wedgewright.job/1", "id": ' + "[" * 7 + "]" * 7 + "}"))[0] != ("json-too-deep", "job")
    assert errors_of(answer_to('{"format": "wedgewright.job/1", "id": ' + "[" * 8 + "]" * 8 + "}")) == [("json-too-deep", "job")]
    for deep in ("[" * 100_000, '{"a":' * 100_000, '{"a": "' + "[" * 100_000 + '"', "[" * 11 + "]" * 11):
        assert errors_of(answer_to(deep))[0][0] in ("json-too-deep", "json-malformed")
    assert report_on(patched(PAIR, id="[{[{[{[{[{[{[{"))["job"] == "[{[{[{[{[{[{[{"


@pytest.mark.parametrize("sequence", [0, 7, "42", 999_999_999_999_999])
def test_the_sequence_is_repeated(sequence: Any) -> None:
    assert ask("report", job=PAIR, sequence=sequence)["sequence"] == int(sequence)
    assert ask("report", job={}, sequence=sequence)["sequence"] == int(sequence)
    assert "sequence" not in report_on(PAIR)


@pytest.mark.parametrize("sequence", ["²", "٣", "9" * 5000, "-1", 1.5, "x", [], {"a": 1}, True])
def test_a_sequence_that_is_none_is_refused(sequence: Any) -> None:
    answer = ask("report", job=PAIR, sequence=sequence)
    assert errors_of(answer) == [("number-malformed", "sequence")]
    assert "sequence" not in answer


def test_a_bare_job_is_a_report_request() -> None:
    assert answer_to(PAIR) == ask("report", job=PAIR)


def test_a_refused_job_still_echoes_what_was_understood() -> None:
    answer = answer_to(patched(PAIR, state=None, right__sphere="-2,25", right__pd_mm="wide"))
    assert errors_of(answer) == [("state-missing", "state"), ("number-malformed", "right.pd_mm")]
    assert answer["echo"]["right.sphere"] == "−2.25 D"
    assert "right.pd_mm" not in answer["echo"]


def test_every_figure_is_echoed_with_its_unit() -> None:
    echo = report_on(
        patched(EXAMPLE, right__prism=[{"amount": "3", "base": {"degrees": "37", "side": "down"}}, {"amount": "1", "base": "300"}])
    )["echo"]
    wanted = {
        "right.sphere": "−2.25 D",
        "right.cylinder": "+1.50 D",
        "right.axis": "20°",
        "right.add": "2 D",
        "right.prism[0].amount": "3 Δ",
        "right.prism[0].base.degrees": "37°",
        "right.prism[1].base": "300° (down in)",
        "left.prism[0].base": "217° (down in)",
        "frame.a_mm": "52 mm",
        "wear.pantoscopic_deg": "8°",
        "instrument.uncertainty.power_d": "0.04 D",
        "instrument.uncertainty.prism": "0.08 Δ",
        "readings.right.prism[1].base": "up",
        "lens.index": "1.6",
    }
    assert {path: echo.get(path) for path in wanted} == wanted


def test_a_fault_of_the_program_itself_is_an_answer(monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(*_: Any) -> None:
        raise ZeroDivisionError("a slip")

    monkeypatch.setattr("pycore.actions.read_job", fail)
    answer = ask("report", job=PAIR, sequence=3)
    assert errors_of(answer) == [("internal", "")]
    assert (answer["sequence"], answer["errors"][0]["params"]["kind"]) == (3, "ZeroDivisionError")


def codes_in_the_source() -> dict[str, set[str]]:
    """Every code the core can send, gathered from its syntax trees."""
    places = {
        "Fault": {},
        "Note": {},
        "refuse": {0: "errors", 3: "fixes"},
        "NumberError": {0: "errors"},
        "_warn": {0: "notes"},
        "Missing": {},
        "Point": {},
    }
    keywords = {
        "Fault": {"code": "errors", "fix": "fixes"},
        "Note": {"code": "notes"},
        "Missing": {"code": "not_checked"},
        "Point": {"code": "points"},
    }
    found: dict[str, set[str]] = {group: set() for group in ("errors", "fixes", "notes", "not_checked", "points")}
    for path in PACKAGE.rglob("*.py"):
        for node in ast.walk(ast.parse(path.read_text("utf-8"))):
            if not isinstance(node, ast.Call):
                continue
            name = getattr(node.func, "attr", getattr(node.func, "id", ""))
            positions = dict(places.get(name, {}))
            if name == "_refuse":
                positions = {0: "errors", 1: "fixes"} if path.name == "contract.py" else {0: "errors", 3: "fixes"}
            for position, group in positions.items():
                if len(node.args) > position:
                    found[group] |= _literals(node.args[position])
            for keyword in node.keywords:
                group = keywords.get(name, {}).get(keyword.arg or "")
                if group:
                    found[group] |= _literals(keyword.value)
    return found


def _literals(node: ast.AST) -> set[str]:
    return {inner.value for inner in ast.walk(node) if isinstance(inner, ast.Constant) and isinstance(inner.value, str)} - {""}


def test_every_code_has_its_words() -> None:
    found = codes_in_the_source()
    assert len(found["errors"]) > 40
    assert {group: sorted(codes - set(WORDS[group])) for group, codes in found.items()} == {group: [] for group in found}


def test_there_are_no_words_that_nothing_says() -> None:
    """Each code with words stands somewhere in the sources of the core or the page."""
    page = Path(__file__).parents[2] / "web" / "app"
    sources = "\n".join(
        path.read_text("utf-8")
        for folder in (PACKAGE, page)
        for path in folder.rglob("*.*")
        if path.suffix in (".py", ".js") and "generated" not in path.parts
    )
    idle = {
        group: [code for code in WORDS[group] if f'"{code.removesuffix("-unplaced")}"' not in sources]
        for group in ("errors", "fixes", "notes", "points")
    }
    assert idle == {group: [] for group in idle}


def test_every_field_that_can_be_refused_has_a_name() -> None:
    """The schema knows every field; each has a word for people."""

    def names(schema: Job) -> set[str]:
        own = set(schema.get("properties", {}))
        for inner in schema.get("properties", {}).values():
            own |= names(inner) | names(inner.get("items", {}))
        return own

    unnamed = names(job_schema()) - set(WORDS["fields"])
    assert unnamed <= {"demonstration", "signed"}


def test_the_schema_is_as_strict_as_the_reader_about_keys() -> None:
    for path in ("right__colour", "lens__colour", "readings__left__colour", "colour", "instrument__uncertainty__colour"):
        job = patched(EXAMPLE, **{path: "red"})
        assert errors_of(answer_to(job)) == [("key-unknown", path.replace("__", "."))]
        with pytest.raises(jsonschema.ValidationError):
            SCHEMA.validate(job)
    for missing in ("format", "state"):
        assert not SCHEMA.is_valid(patched(EXAMPLE, **{missing: None}))


def test_nothing_of_the_request_is_changed() -> None:
    job = copy.deepcopy(EXAMPLE)
    report_on(job)
    assert job == EXAMPLE
    assert text_of(Decimal("0.10")) == "0.10"
