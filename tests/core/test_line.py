"""The one-line entry. The notations are common practice; the 180 notation is that of US
community-college opticianry course OPH 142, angles are those of ISO 8429; quadrants are checked
against complex numbers."""

import cmath
import json
import math
import re
from decimal import Decimal
from itertools import pairwise
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from pycore.job.body import Lens
from pycore.job.fields import Fields
from pycore.job.line import LineReading, _read_parts, read_line
from pycore.job.line_part import FIXES
from pycore.job.order import read_eye

BAD = json.loads((Path(__file__).parents[1] / "bad_inputs" / "lines.json").read_text("utf-8"))


def prism(*parts: tuple[str, Any]) -> dict[str, Any]:
    return {"prism": [{"amount": amount, "base": base} for amount, base in parts]}


POWER = {"sphere": "+0.75", "cylinder": "-2.25", "axis": "20"}
IN_UP = prism(("3", "in"), ("1.5", "up"))
DOWN_IN = prism(("2.5", {"degrees": "37", "side": "down"}))

RIGHT_POWER = """R +0.75 -2.25 x20|r +0.75 -2.25 X 20|OD +0.75 -2.25 ×020|O.D. +0.75 / -2.25 * 20|RE: +0.75/-2.25/20
right eye +0,75 −2,25 ax 20|OD. +.75 -2.25 axis 20|R: + 0.75, - 2.25, 20|R+0.75-2.25x20|R +0,75 / −2,25 × 20°
R +0.75 DS -2.25 DC x 20|R +0.75 sph -2.25 cyl axis 20|R sph +0.75 cyl -2.25 ax 20|R +0.75DS/-2.25DCx20|R +0.75 cyl -2.25 @20
R +0.75 -2.25 @ 20|R +0.75 D -2.25 D 020|R +00.75 –2.25 20|RIGHT +0.75; -2.25; x20|R +0.75 (−2.25 x20)
R.E. +¾ −2¼ x20|R
+0.75 -2.25 x20|R +0.75 and -2.25 x20|R=+0.75=-2.25x20.|R\u00a0+0.75\u2009-2.25\tx20|R +0.75 sphere -2.25 cylinder axis 20 deg"""
LEFT_PRISM = """L 3 BI 1.5 BU|OS 3BI 1.5BU|L 3BI,1.5BU|L 3 BI, 1,5 BU|L 3 BI & 1.5 BU|L 3 BI and 1.5 BU|L 3 BI / 1.5 BU
L 3 BI with 1.5 BU|L 3 BI + 1.5 BU|L BI 3 BU 1.5|L BI 3, BU 1,5|L base in 3 base up 1.5|L 3 base in 1½ base up|L 3Δ BI 1.5Δ BU
L 3^ base in 1.5^ base up|L 3 in 1.5 up|L prism 3 in, 1.5 up|L 3 pd BI 1.5 pd BU|L BI 3 pd BU 1.5 pd|L 3∆BI1.5∆BU|LE 3 B.I. 1.5 B.U.
left eye: 3 base i, 1.5 base u|l 3bi 1.5bu|L.E. prism: 3 BASE IN; 1.5 BASE UP.|L 03 BI / 1.5 p.d. BU|L 3,BI 1.5,BU"""
LEFT_OBLIQUE = """L 2.5 BD&I @037|L 2.5 BD&I 037|L 2.5 BD & I @ 37|OS 2,5 BD and I 037|L 2.5 BD/I @37|L 2.5 BD+I 37°
L 2.5 base down and in @ 37|L 2.5 base down & base in @037°|L 2.5Δ down & in @37|L 2.5 BI & D @37|L 2½ BD @37|L 2.5 BD 37°
L 2.5 @37 BD|L 2.5 @037 BD&I|L 2.5 base 37 down|L BD&I 037 2.5|L BD @37 2.5|L BD&BI @ 37 2,5 Δ"""
ACCEPTED: list[tuple[str, dict[str, Any]]] = [
    *((text, {"right": POWER}) for text in re.split(r"\||\n(?!\+)", RIGHT_POWER)),
    *((text, {"left": IN_UP}) for text in re.split(r"[|\n]", LEFT_PRISM)),
    *((text, {"left": DOWN_IN}) for text in re.split(r"[|\n]", LEFT_OBLIQUE)),
    ("R pl", {"right": {"sphere": "0.00"}}),
    ("R plano DS", {"right": {"sphere": "0.00"}}),
    ("R 0 -1.00 x90", {"right": {"sphere": "0", "cylinder": "-1.00", "axis": "90"}}),
    ("R -1.00 0.00 0", {"right": {"sphere": "-1.00", "cylinder": "0.00", "axis": "0"}}),
    ("R -1.00 0", {"right": {"sphere": "-1.00", "cylinder": "0"}}),
    ("R -0.00", {"right": {"sphere": "-0.00"}}),
    ("R -1 +2 180 3 BI", {"right": {"sphere": "-1", "cylinder": "+2", "axis": "180"} | prism(("3", "in"))}),
    ("R -1 -2 x000", {"right": {"sphere": "-1", "cylinder": "-2", "axis": "0"}}),
    ("R pl / BI 3", {"right": {"sphere": "0.00"} | prism(("3", "in"))}),
    ("R -1.00 BI 3", {"right": {"sphere": "-1.00"} | prism(("3", "in"))}),
    ("R 0 BI", {"right": prism(("0", "in"))}),
    ("R 2.5 @217", {"right": prism(("2.5", "217"))}),
    ("R 2.5 base 217", {"right": prism(("2.5", "217"))}),
    ("R 2.5 base @216,87°", {"right": prism(("2.5", "216.87"))}),
    ("R 2.5@37 1@180", {"right": prism(("2.5", "37"), ("1", "180"))}),
    ("R -1.00 2.5Δ @37", {"right": {"sphere": "-1.00"} | prism(("2.5", "37"))}),
    ("R -1.00 1 BI 2.5 @37", {"right": {"sphere": "-1.00"} | prism(("1", "in"), ("2.5", "37"))}),
    ("R -1.00 -2.00 @20 2.5 @37", {"right": {"sphere": "-1.00", "cylinder": "-2.00", "axis": "20"} | prism(("2.5", "37"))}),
    ("R 3 BI @180", {"right": prism(("3", {"degrees": "180", "side": "in"}))}),
    ("L 3 BO @0", {"left": prism(("3", {"degrees": "0", "side": "out"}))}),
    ("L 3 BU @90", {"left": prism(("3", {"degrees": "90", "side": "up"}))}),
    ("L 2.5 BD&I @217", {"left": prism(("2.5", "217"))}),
    ("L 2.5 BD @217", {"left": prism(("2.5", "217"))}),
    ("R 3 BI @360", {"right": prism(("3", "360"))}),
    ("OU -1.00", {"right": {"sphere": "-1.00"}, "left": {"sphere": "-1.00"}}),
    ("both eyes: -1,00", {"right": {"sphere": "-1.00"}, "left": {"sphere": "-1.00"}}),
    ("BE -1.00 2 BU each", {"right": {"sphere": "-1.00"} | prism(("2", "up")), "left": {"sphere": "-1.00"} | prism(("2", "up"))}),
    ("OU each eye 2 BU", {"right": prism(("2", "up")), "left": prism(("2", "up"))}),
    ("R -1 L -2\n2 BU each", {"right": {"sphere": "-1"} | prism(("2", "up")), "left": {"sphere": "-2"} | prism(("2", "up"))}),
    (
        "OU -1 add 2 R 1 BU L 1 BD",
        {"right": {"sphere": "-1", "add": "2"} | prism(("1", "up")), "left": {"sphere": "-1", "add": "2"} | prism(("1", "down"))},
    ),
    ("R -1 R -1.00", {"right": {"sphere": "-1"}}),
    ("R -1 add +1,75 D L -2 ADD:2,00", {"right": {"sphere": "-1", "add": "1.75"}, "left": {"sphere": "-2", "add": "2.00"}}),
    ("R -1 add 2 L -2", {"right": {"sphere": "-1", "add": "2"}, "left": {"sphere": "-2"}}),
    (
        "R -1 L -2 add 2",
        {"right": {"sphere": "-1", "add": "2"}, "left": {"sphere": "-2", "add": "2"}, "notes": ["add-taken-for-both"]},
    ),
    (
        "L -2 R -1 add 2",
        {"right": {"sphere": "-1", "add": "2"}, "left": {"sphere": "-2", "add": "2"}, "notes": ["add-taken-for-both"]},
    ),
    (
        "add 2 R -1 L -2",
        {"right": {"sphere": "-1", "add": "2"}, "left": {"sphere": "-2", "add": "2"}, "notes": ["add-taken-for-both"]},
    ),
    ("R -1 L -2 OU add 2", {"right": {"sphere": "-1", "add": "2"}, "left": {"sphere": "-2", "add": "2"}}),
    ("R -1\nadd 2", {"right": {"sphere": "-1", "add": "2"}}),
    ("R 1 BI 1 BI", {"right": prism(("1", "in"), ("1", "in")), "notes": ["line-base-repeated"]}),
    ("R -1 L -2 PD 63", {"right": {"sphere": "-1"}, "left": {"sphere": "-2"}, "pd_mm": "63"}),
    ("R -1 PD 63 L -2 PD 63.0", {"right": {"sphere": "-1"}, "left": {"sphere": "-2"}, "pd_mm": "63"}),
    ("PD 62,5 mm", {"pd_mm": "62.5"}),
    ("PD 63/R -1", {"right": {"sphere": "-1"}, "pd_mm": "63"}),
    ("R PD 63/3 BI", {"right": prism(("3", "in")), "pd_mm": "63"}),
    ("R PD 63/ BI 3", {"right": prism(("3", "in")), "pd_mm": "63"}),
    ("R PD 63/ -1", {"right": {"sphere": "-1"}, "pd_mm": "63"}),
    ("R PD 63/3Δ BI", {"right": prism(("3", "in")), "pd_mm": "63"}),
    ("R -1 PD 31.5", {"right": {"sphere": "-1", "pd_mm": "31.5"}}),
    ("R -1 PD 31.5 L -2 PD 32", {"right": {"sphere": "-1", "pd_mm": "31.5"}, "left": {"sphere": "-2", "pd_mm": "32"}}),
    (
        "R -1 L -2 PD 31,5/32",
        {"right": {"sphere": "-1", "pd_mm": "31.5"}, "left": {"sphere": "-2", "pd_mm": "32"}, "notes": ["line-right-first"]},
    ),
    (
        "OU -1 PD: 31.5 mm / 32 mm",
        {"right": {"sphere": "-1", "pd_mm": "31.5"}, "left": {"sphere": "-1", "pd_mm": "32"}, "notes": ["line-right-first"]},
    ),
    (
        "R -1 fitting height 18 L -2 FH 18.5",
        {"right": {"sphere": "-1", "fitting_height_mm": "18"}, "left": {"sphere": "-2", "fitting_height_mm": "18.5"}},
    ),
    ("OU -1 PRP height 17 mm", {"right": {"sphere": "-1", "prp_height_mm": "17"}, "left": {"sphere": "-1", "prp_height_mm": "17"}}),
    (
        "R -1 L -2 FH 18/18.5",
        {
            "right": {"sphere": "-1", "fitting_height_mm": "18"},
            "left": {"sphere": "-2", "fitting_height_mm": "18.5"},
            "notes": ["line-right-first"],
        },
    ),
    ("single vision lenses R -1", {"right": {"sphere": "-1"}, "lens": {"design": "single-vision"}}),
    ("R -1 add 2 progressive", {"right": {"sphere": "-1", "add": "2"}, "lens": {"design": "progressive"}}),
]


def said(reading: LineReading) -> dict[str, Any]:
    """The reading without what is empty."""
    found = {
        "right": reading.right, "left": reading.left, "pd_mm": reading.pd_mm, "lens": reading.lens,
        "notes": [note.code for note in reading.notes], "errors": bool(reading.errors),
    }  # fmt: skip
    return {name: value for name, value in found.items() if value}


@pytest.mark.parametrize(("line", "expected"), ACCEPTED)
def test_a_notation_is_read(line: str, expected: dict[str, Any]) -> None:
    """Notations: common practice, issue by issue as the trade writes them (no single source)."""
    reading = read_line(line)
    assert said(reading) == expected, reading.errors


@pytest.mark.parametrize("line", [line for line, _ in ACCEPTED])
def test_the_job_document_takes_what_the_line_gives(line: str) -> None:
    reading = read_line(line)
    for eye in ("right", "left"):
        faults: list[Any] = []
        read_eye(Fields(getattr(reading, eye) or {}, eye, faults), eye, Lens(), [])  # type: ignore[arg-type]
        assert not faults


@pytest.mark.parametrize("row", BAD, ids=lambda row: row["line"][:40])
def test_a_bad_or_ambiguous_line_is_asked(row: dict[str, Any]) -> None:
    reading = read_line(row["line"], row.get("bases", "360"))
    assert sorted(fault.code for fault in reading.errors) == sorted(row["codes"])
    for fault in reading.errors:
        assert fault.fix == FIXES[fault.code]
        assert fault.field == "line" or re.fullmatch(r"line\.(right|left)\.[a-z_]+", fault.field)
        assert len(fault.given) <= 64
        assert all(piece in row["line"] for piece in fault.given.split())


def test_every_question_is_provoked() -> None:
    """Each code has a kept bad line; too long a line is made here."""
    long = read_line("R -1.00 " * 126)
    assert [(fault.code, dict(fault.params)) for fault in long.errors] == [("line-too-long", {"limit": "1000"})]
    assert not read_line("R -1.00" + " " * 993).errors
    assert {code for row in BAD for code in row["codes"]} | {"line-too-long"} == set(FIXES)
    assert len(BAD) >= 100


def test_question_names_field_and_piece() -> None:
    reading = read_line("R +0.75 -2.25 L 2.5 BU @217 OS 1 BI 1 BO")
    found = {(fault.code, fault.field, fault.given) for fault in reading.errors}
    assert found == {
        ("line-axis-missing", "line.right.axis", "-2.25"),
        ("line-base-contradicts", "line.left.prism", "2.5 BU @217"),
        ("line-bases-opposite", "line.left.prism", "1 BI 1 BO"),
        ("line-given-twice", "line.left.prism", "1 BI 1 BO"),
    }
    opposite = next(fault for fault in reading.errors if fault.code == "line-bases-opposite")
    assert opposite.params == {"one": "in", "other": "out"}
    contradicts = next(fault for fault in reading.errors if fault.code == "line-base-contradicts")
    assert contradicts.params == {"words": "up", "degrees": "217"}


def test_180_notation_asks_only_without_its_word() -> None:
    """A base above 180 cannot be the 180 notation; one up to 180 needs its word (OPH 142)."""
    for degrees in range(361):
        asked = [fault.code for fault in read_line(f"R 2 @{degrees}", "180").errors]
        assert asked == (["line-side-missing"] if degrees <= 180 else [])
        assert not read_line(f"R 2 @{degrees}").errors
    assert not read_line("L 2.5 BD&I 037", "180").errors
    assert not read_line("L 2.5 BI @180", "180").errors


@pytest.mark.parametrize("eye", ["R", "L"])
def test_quadrant_words_agree_with_complex_numbers(eye: str) -> None:
    """Independent: the base is a unit complex number, in is +x for the right lens (ISO 8429)."""
    for full in (degrees for degrees in range(1, 360) if degrees % 90):
        vector = cmath.rect(1, math.radians(full))
        inward = (vector.real > 0) == (eye == "R")
        vertical, horizontal = "U" if vector.imag > 0 else "D", "I" if inward else "O"
        side = "up" if vector.imag > 0 else "down"
        for in_out in "IO":
            reading = read_line(f"{eye} 1 B{vertical}&{in_out} @{full % 180:03}")
            assert bool(reading.errors) != (in_out == horizontal)
            if not reading.errors:
                fields = reading.right or reading.left or {}
                assert fields == prism(("1", {"degrees": str(full % 180), "side": side}))
        for words in ("U&I", "U&O", "D&I", "D&O") if full > 180 else ():
            asked = read_line(f"{eye} 1 B{words} @{full}").errors
            assert bool(asked) != (words == f"{vertical}&{horizontal}")


def test_compound_base_of_the_course() -> None:
    """OPH 142: right 1.5 BU 2 BI is 2.5 @037 BU&I; left 1.5 BD 2 BI is 2.5 @217, BD&I @037."""
    right, left = read_line("R 2.5 BU&I @037").right, read_line("L 2.5 BD&I @037").left
    assert right == prism(("2.5", {"degrees": "37", "side": "up"}))
    assert left == DOWN_IN
    assert read_line("R 2.5 BD&I @037").errors
    assert read_line("L 2.5 BU&I @037").errors


# -- an order written at random and read back

HUNDREDTHS = st.integers(0, 1999).map(lambda value: f"{value // 100}.{value % 100:02}")
AMOUNT = st.sampled_from(["0.25", "0.5", "1", "1.25", "2", "2.5", "3", "3.00", "12"])
SIDES = {
    "in": ("BI", "in", "base in", "B.I.", "bi"),
    "out": ("BO", "out", "base out"),
    "up": ("BU", "up", "base up"),
    "down": ("BD", "down", "dn", "base down"),
}
MARKS = {
    "right": ("R", "OD", "RE", "right", "O.D.", "R:", "od", "right eye"),
    "left": ("L", "OS", "LE", "left", "L:", "Os.", "left eye:"),
}


@st.composite
def component(draw: st.DrawFn, eye: str, words: list[str]) -> tuple[str, Any, str]:
    """A prism: its amount, its base as the job document writes it, and the base in one spelling."""
    kind = draw(st.sampled_from(["word", "full", "half"]))
    if kind == "word" and words:
        word = words.pop()
        return draw(AMOUNT), word, draw(st.sampled_from(SIDES[word]))
    degrees = draw(st.integers(1, 179).filter(lambda value: value != 90))
    if kind == "full":
        return draw(AMOUNT), str(degrees + 180), draw(st.sampled_from(["@{0}", "@ {0}°", "base {0}"])).format(degrees + 180)
    side = draw(st.sampled_from(["up", "down"]))
    inward = (math.cos(math.radians(degrees + (side == "down") * 180)) > 0) == (eye == "right")
    one, two = "B" + side[0].upper(), "I" if inward else "O"
    spelling = draw(st.sampled_from(["{0} @{2}", "{0}&{1} @{2:03}", "{0} & {1} {2:03}", "{0} and {1} @ {2}°", "{0}/{1} @{2}"]))
    return draw(AMOUNT), {"degrees": str(degrees), "side": side}, spelling.format(one, two, degrees)


@st.composite
def number(draw: st.DrawFn, text: str) -> str:
    """The same number with a comma or a point, and another minus."""
    text = text.replace("-", draw(st.sampled_from(["-", "−", "- "])))
    return text.replace(".", ",") if draw(st.booleans()) else text


@st.composite
def one_eye(draw: st.DrawFn, eye: str, base_first: bool) -> tuple[dict[str, Any], str]:
    """One eye's fields and one way to write them."""
    pick = lambda *options: draw(st.sampled_from(options))  # noqa: E731
    sphere = pick("+", "-") + draw(HUNDREDTHS)
    fields: dict[str, Any] = {"sphere": sphere}
    pieces = [draw(number(sphere)) + pick("", " DS", "DS", " sph", " D")]
    if draw(st.booleans()):
        cylinder, axis = pick("+", "-") + draw(HUNDREDTHS), draw(st.integers(0, 180))
        fields |= {"cylinder": cylinder, "axis": str(axis)}
        # After a bare axis a base word would be asked, so base-first lines mark theirs.
        mark = pick("x{}", " X {}", "×{:03}", " ax {}", " axis {}°", " @{}", *([] if base_first else [" {}", "/{:03}"]))
        pieces.append(draw(number(cylinder)) + pick("", " DC", " cyl") + mark.format(axis))
    power = pick(" ", " / ", "/", ", ", "  ").join(pieces)
    words = [pick("in", "out"), pick("up", "down")]
    prisms = [draw(component(eye, words)) for _ in range(draw(st.integers(0, 3)))]
    written = []
    for amount, _, spelling in prisms:
        text, unit = draw(number(amount)), pick("", "Δ", " Δ", "^")
        if base_first and spelling[0] != "@" and not re.match(r"base \d", spelling):
            written.append(f"{spelling} {text}{unit}")
        elif base_first:
            return draw(one_eye(eye, base_first))
        else:
            # Without a cylinder a bare `2 @20` may be an axis: the unit tells (only up to 180).
            written.append(f"{text}{unit} {spelling}" if unit else f"{text} {spelling}")
    if prisms:
        fields["prism"] = [{"amount": amount, "base": base} for amount, base, _ in prisms]
    tail = [power]
    if written:
        tail.append(pick(" ", " & ", ", ", " and ", " / ").join(written))
    if draw(st.booleans()):
        fields["add"] = draw(HUNDREDTHS)
        tail.append(pick("add ", "ADD: ", "Add +", "add:") + draw(number(fields["add"])))
    return fields, pick(" ", ", ", "; ").join(tail)


@st.composite
def order(draw: st.DrawFn) -> tuple[dict[str, Any], str]:
    """An order for one eye or both with one way to write it."""
    base_first = draw(st.booleans())
    eyes = draw(st.sampled_from([["right"], ["left"], ["right", "left"], ["left", "right"]]))
    fields, lines = {}, []
    for eye in eyes:
        fields[eye], text = draw(one_eye(eye, base_first))
        lines.append(f"{draw(st.sampled_from(MARKS[eye]))} {text}")
    if len(eyes) == 2 and "add" in fields[eyes[1]] and "add" not in fields[eyes[0]]:
        fields[eyes[0]]["add"] = fields[eyes[1]]["add"]
    return fields, draw(st.sampled_from([" ", "\n", "  ", "; "])).join(lines)


@settings(max_examples=1000, deadline=None)
@given(order())
def test_an_order_written_at_random_is_read_back(written: tuple[dict[str, Any], str]) -> None:
    fields, text = written
    reading = read_line(text)
    assert not reading.errors, text
    assert {"right": reading.right, "left": reading.left} == {"right": None, "left": None} | fields


# -- nothing is passed over, nothing makes it fall

TRADE = [
    *("R", "L", "OD", "OS", "OU", "RE", "BE", "right", "left", "both", "eye", "each", "total", "\n"),
    *("+0.75", "-2.25", "−1,5", "+1", "0", "pl", "0.00", "20", "180", "037", "217", "3", "2.5", "1,000"),
    *("63", "31.5", "½", "-", "x", "×", "@", "ax", "axis", "DS", "DC", "cyl", "sph", "D", "Δ", "°", "^"),
    *("base", "BI", "BO", "BU", "BD", "in", "up", "down", "BD&I", "I", "&", "and", "/", "+", ",", ".", ";"),
    *(":", "pd", "PD", "mm", "add", "height", "FH", "prp", "fitting", "progressive", "single", "vision"),
    *("zz", "?", "("),
]
TRADE_LINE = st.tuples(st.lists(st.sampled_from(TRADE), max_size=14), st.sampled_from([" ", ""])).map(
    lambda pair: pair[1].join(pair[0])
)


def numbers_in(value: Any) -> set[Decimal]:
    """Every number of a reading, by its size."""
    if isinstance(value, dict):
        return {number for inner in value.values() for number in numbers_in(inner)}
    if isinstance(value, list):
        return {number for inner in value for number in numbers_in(inner)}
    return {abs(Decimal(value))} if re.fullmatch(r"[+-]?[0-9.]+", value or "") else set()


def check_any_text(text: str) -> None:
    """It never falls; a line taken as an order holds every number typed and no other."""
    for bases in ("360", "180"):
        reading = read_line(text, bases)  # type: ignore[arg-type]
        assert all(fault.code in FIXES for fault in reading.errors)
        if reading.errors:
            continue
        # A comma before a number with its own decimals only separates: `3 BI,1.5 BU`.
        plain = re.sub(r"(?<![0-9]),(?=[0-9]+[.,][0-9])", " ", text)
        plain = plain.replace("½", ".5").replace("¼", ".25").replace("¾", ".75").replace(",", ".")
        typed = {Decimal(found) for found in re.findall(r"[0-9]*\.?[0-9]+", plain)}
        read = numbers_in({"right": reading.right, "left": reading.left, "pd": reading.pd_mm})
        assert read - {Decimal(0)} == typed - {Decimal(0)}, text


@settings(max_examples=2000, deadline=None)
@given(st.text(max_size=1100) | TRADE_LINE)
def test_any_text_is_read_or_asked(text: str) -> None:
    check_any_text(text)


@settings(max_examples=1000, deadline=None)
@given(TRADE_LINE)
def test_amount_first_and_base_first_are_never_both_clean_and_different(text: str) -> None:
    first, second = _read_parts(text, "360", False), _read_parts(text, "360", True)
    if not first.faults and not second.faults:
        assert first.eyes == second.eyes


@pytest.mark.parametrize("line", [line for line, _ in ACCEPTED])
@pytest.mark.parametrize("junk", ["zz", "?", "7.77", "€"])
def test_a_stray_word_or_number_anywhere_is_asked(line: str, junk: str) -> None:
    gaps = [match.end() for match in re.finditer(r"\s+", line)]
    for place in [0, *gaps, len(line)]:
        reading = read_line(f"{line[:place]} {junk} {line[place:]}")
        # `base 7.77 up` and `pd 7.77` say something: then the number stands in the reading.
        kept = [fields for fields in (reading.right, reading.left) if "7.77" in json.dumps(fields)]
        assert reading.errors or (junk == "7.77" and kept), place


def test_order_of_words_of_one_prism_is_kept() -> None:
    """Components stay in the order written, so that the echo shows what was typed."""
    amounts = ["1", "2", "3", "4"]
    line = "R " + " ".join(f"{amount} {base}" for amount, base in zip(amounts, ("BI", "BU", "@217", "BU @37"), strict=True))
    read = (read_line(line).right or {})["prism"]
    assert [part["amount"] for part in read] == amounts
    assert all(int(one) < int(two) for one, two in pairwise(part["amount"] for part in read))
