"""Editions at the door: which holds for which lens, the shop's own, the options.

Figures of editions: published summaries of Z80.1-2010 and -2015, N.J. Admin. Code 13:35-5.2; ISO
tables from memory, as the editions say of themselves.
"""

import math

import pytest

from tests.core.strategies import (
    WORDS,
    Job,
    answer_to,
    ask,
    checks_of,
    codes,
    errors_of,
    patched,
    report_on,
)
from tests.door.pairs import LENS, PAIR, STRONG, heights, outcome, read, words


def test_the_state_is_asked_never_guessed() -> None:
    assert errors_of(answer_to(patched(PAIR, state=None))) == [("state-missing", "state")]
    assert errors_of(answer_to(patched(PAIR, state="glazed"))) == [("choice-unknown", "state")]


def test_an_edition_is_refused_for_a_state_it_does_not_cover_naming_those_that_do() -> None:
    listed = ask("list-editions")["editions"]
    assert [edition["id"] for edition in listed] == [
        "ansi-z80.1-2015",
        "ansi-z80.1-2010",
        "ansi-z80.1-2020",
        "iso-21987",
        "iso-8980-1",
        "iso-8980-2",
        "nj-13-35-5.2",
    ]
    for edition in listed:
        for state in ("uncut", "edged", "mounted"):
            answer = answer_to(patched(PAIR, edition=edition["id"], state=state))
            if state in edition["states"]:
                assert answer["verdict"]["edition"]["name"] == edition["name"]
                continue
            assert errors_of(answer) == [("edition-does-not-cover-state", "edition")]
            error = answer["errors"][0]
            assert error["fix"] == "choose-edition"
            assert error["params"]["allowed"] == ", ".join(other["name"] for other in listed if state in other["states"])
    covering = {edition["id"]: set(edition["states"]) for edition in listed}
    assert covering["iso-21987"] == {"mounted"}
    assert covering["iso-8980-1"] == covering["iso-8980-2"] == {"uncut"}


def test_without_an_edition_there_is_no_verdict_and_a_note() -> None:
    report = report_on(patched(PAIR, edition=None))
    assert "verdict" not in report
    assert report["edition"] is None
    assert "edition-missing" in codes(report)
    assert errors_of(answer_to(patched(PAIR, edition="ansi-z80.1-1066"))) == [("edition-unknown", "edition")]


def test_editions_say_where_their_figures_come_from() -> None:
    """Nothing from memory is ever called published; every option has a default and a reason."""
    for edition in ask("list-editions")["editions"]:
        kinds = set(edition["provenance"])
        assert kinds <= {"published", "memory"}
        if edition["id"] in ("ansi-z80.1-2020", "iso-8980-1", "iso-8980-2"):
            assert kinds == {"memory"}
        for option in edition["options"]:
            assert option["default"] in [value["id"] for value in option["values"]]
            assert all(why in WORDS["options"] for why in [option["why"], *(value["why"] for value in option["values"])])


def test_an_edition_of_the_shop() -> None:
    """It is judged like ours, and is local whatever it claims of itself."""
    shop = {
        "format": "wedgewright.edition/1",
        "id": "shop-1",
        "name": "Our bench",
        "states": ["mounted"],
        "options": {"prism-alternatives": "prism-only"},
        "rows": [
            {"check": "prism.vertical", "limit": {"fixed": "0.20"}, "clause": "house rule 1", "provenance": "published"},
            {
                "check": "prism.horizontal",
                "power": {"to": "3"},
                "limit": {"fixed": "0.40", "per_dioptre": "0.05"},
                "clause": "house rule 2",
            },
        ],
    }
    job = read(patched(PAIR, edition="shop-1"), words("0.21 up"), words("0 up"))
    report = report_on(job, editions=[shop])
    vertical, horizontal = checks_of(report, "prism.vertical")[0], checks_of(report, "prism.horizontal")[0]
    assert (vertical["limit"], vertical["outcome"], vertical["provenance"]) == (0.2, "outside", "local")
    assert horizontal["limit"] == 0.5
    assert report["verdict"]["edition"]["sha256"] == report["made_by"]["edition_sha256"]
    assert {item["params"]["check"] for item in report["verdict"]["not_checked"] if item["code"] == "no-limit"} == {
        "power",
        "cylinder",
    }
    checked = ask("check-edition", edition=shop)
    assert checked["format"] == "wedgewright.edition-check/1"
    assert (checked["edition"]["id"], checked["edition"]["sha256"]) == ("shop-1", report["made_by"]["edition_sha256"])
    assert [edition["id"] for edition in ask("list-editions", editions=[shop])["editions"]][-1] == "shop-1"
    assert errors_of(ask("report", job=patched(job, state="edged"), editions=[shop])) == [
        ("edition-does-not-cover-state", "edition")
    ]
    for claimed in (shop | {"id": "iso-21987"}, "shop"):
        assert errors_of(ask("report", job=job, editions=[claimed])) in (
            [("edition-id-taken", "edition.id")],
            errors_of(ask("check-edition", edition=claimed)),
        )
    assert errors_of(ask("report", job=job, editions=[shop, shop])) == [("edition-id-twice", "edition.id")]
    assert outcome(patched(PAIR, edition="shop-1"), editions=[shop | {"options": None, "states": None}]) == "unread"


@pytest.mark.parametrize(
    ("change", "code", "field"),
    [
        ({"format": "wedgewright.edition/9"}, "format-unknown", "edition.format"),
        ({"id": None}, "text-missing", "edition.id"),
        ({"name": " "}, "text-missing", "edition.name"),
        ({"states": "mounted"}, "choice-unknown", "edition.states"),
        ({"states": ["glazed"]}, "choice-unknown", "edition.states"),
        ({"rows": None}, "rows-missing", "edition.rows"),
        ({"rows": {}}, "list-expected", "edition.rows"),
        ({"rows": [1]}, "object-expected", "edition.rows[0]"),
        ({"colour": "red"}, "key-unknown", "edition.colour"),
        ({"options": {"lens-prism": "length"}}, "choice-unknown", "edition.options.lens-prism"),
        ({"options": {"lens": "vector"}}, "key-unknown", "edition.options.lens"),
        ({"row": {"check": "prism.diagonal"}}, "choice-unknown", "edition.rows[0].check"),
        ({"row": {"check": None}}, "choice-missing", "edition.rows[0].check"),
        ({"row": {"limit": None}}, "number-missing", "edition.rows[0].limit"),
        ({"row": {"limit": {}}}, "number-missing", "edition.rows[0].limit.fixed"),
        ({"row": {"limit": {"fixed": "1e-1"}}}, "number-exponent", "edition.rows[0].limit.fixed"),
        ({"row": {"limit": {"fixed": "-0.1"}}}, "number-out-of-range", "edition.rows[0].limit.fixed"),
        ({"row": {"limit": {"fixed": "0.1", "about": "0.1"}}}, "key-unknown", "edition.rows[0].limit.about"),
        ({"row": {"clause": ""}}, "text-missing", "edition.rows[0].clause"),
        ({"row": {"clause": "x" * 301}}, "text-missing", "edition.rows[0].clause"),
        ({"row": {"provenance": "certain"}}, "choice-unknown", "edition.rows[0].provenance"),
        ({"row": {"designs": ["round"]}}, "choice-unknown", "edition.rows[0].designs"),
        ({"row": {"power": {"to": "x"}}}, "number-malformed", "edition.rows[0].power.to"),
        ({"row": {"power": {"up to": "3"}}}, "key-unknown", "edition.rows[0].power.up to"),
        ({"row": {"component": "oblique"}}, "choice-unknown", "edition.rows[0].component"),
        ({"row": {"measure": "both"}}, "choice-unknown", "edition.rows[0].measure"),
        ({"row": {"meridians": "all"}}, "choice-unknown", "edition.rows[0].meridians"),
        ({"row": {"option": {"id": "lens-prism"}}}, "choice-missing", "edition.rows[0].option.value"),
        ({"row": {"option": {"id": "lens-prism", "value": "length"}}}, "choice-unknown", "edition.rows[0].option.value"),
        ({"row": {"option": {"id": "lens"}}}, "choice-unknown", "edition.rows[0].option.id"),
        ({"row": {"option": {}}}, "choice-missing", "edition.rows[0].option.id"),
        ({"row": {"limits": {}}}, "key-unknown", "edition.rows[0].limits"),
    ],
)
def test_an_edition_is_read_as_strictly_as_a_job(change: Job, code: str, field: str) -> None:
    row = {"check": "prism.vertical", "limit": {"fixed": "0.20"}, "clause": "house rule 1"}
    edition: Job = {"format": "wedgewright.edition/1", "id": "shop", "name": "Shop", "states": ["mounted"], "rows": [row]}
    ask("check-edition", edition=edition)["edition"]["rows"]
    row.update(change.pop("row", {}))
    assert (code, field) in errors_of(ask("check-edition", edition=edition | change))


def test_the_other_options() -> None:
    one_sided = read(PAIR, words("0.60 in"), words("0 up"))
    assert outcome(one_sided) == "within"  # 0.67 in total
    assert outcome(patched(one_sided, edition_options={"horizontal-reading": "each-lens"})) == "outside"  # 8.5.2: one third each
    mixed = heights(read(patched(STRONG, left__sphere="-1.00"), words("0.45 up"), words("0 up")), "18.5", "18")
    assert outcome(mixed) == "within"
    assert outcome(patched(mixed, edition_options={"millimetre-power": "both-lenses"})) == "outside"
    corner = patched(read(PAIR, words("0.30 up", "0.30 in"), words("0 up")), state="uncut")
    assert outcome(corner) == "outside"  # 0.42 as a vector
    assert outcome(patched(corner, edition_options={"lens-prism": "components"})) == "within"
    turned = patched(
        PAIR, right__cylinder="-4.00", right__axis="90", readings__right={"sphere": "-2.00", "cylinder": "-4.00", "axis": "100"}
    )
    principal = [check["deviation"] for check in checks_of(report_on(turned), "power", "right")]
    meridians = [
        check["deviation"]
        for check in checks_of(
            report_on(patched(turned, edition_options={"power-comparison": "ordered-meridians"})), "power", "right"
        )
    ]
    assert principal == [0]
    assert meridians == [pytest.approx(4 * math.sin(math.radians(10)) ** 2)]  # Euler's theorem
    for options, error in (
        ({"lens-prism": "length"}, ("choice-unknown", "edition_options.lens-prism")),
        ({"prism-row": "pair"}, ("option-not-offered", "edition_options.prism-row")),
        ({"colour": "red"}, ("option-not-offered", "edition_options.colour")),
    ):
        assert errors_of(answer_to(patched(PAIR, edition_options=options))) == [error]


def test_iso_21987_picks_its_row_by_prism_and_power() -> None:
    """3 prism dioptres, 4.00 D, horizontal: 0.33 + 0.2 x 4 = 1.13 (row WE77, from memory); the options pick otherwise."""
    job = read(patched(PAIR, edition="iso-21987", right__sphere="-4.00", right__prism=words("3 in")), words("3 in"), words("0 up"))
    limit = {name: checks_of(report_on(job), f"prism.{name}")[0]["limit"] for name in ("vertical", "horizontal")}
    assert limit == {"vertical": 0.5, "horizontal": 1.13}
    both = patched(job, left__prism=words("8 in"))
    assert checks_of(report_on(both), "prism.horizontal")[0]["limit"] == 1.13  # 8 alone is not over 10
    assert (
        checks_of(report_on(patched(both, edition_options={"prism-row": "pair"})), "prism.horizontal")[0]["limit"] == 1.38
    )  # 11 together
    crossed = patched(job, right__sphere="0.00", right__cylinder="-4.00", right__axis="180")
    assert checks_of(report_on(crossed), "prism.horizontal")[0]["limit"] == 1.0  # no power along 180
    strongest = patched(crossed, edition_options={"row-power": "strongest"})
    assert checks_of(report_on(strongest), "prism.horizontal")[0]["limit"] == 1.13
    thinned = patched(
        job,
        lens__design="progressive",
        thinning={"rule": "amount", "amount": "3", "base": "down"},
        right__add="2.00",
        left__add="2.00",
    )
    assert checks_of(report_on(thinned), "prism.vertical")[0]["limit"] == 0.5
    assert (
        checks_of(report_on(patched(thinned, edition_options={"thinning-row": "with-thinning"})), "prism.vertical")[0]["limit"]
        == 0.75
    )


def test_iso_8980_holds_each_component_by_the_strongest_power() -> None:
    """+0.50 -2.50 x20, up to 2 prism dioptres: 0.45 across, 0.35 up and down (row WE76, from memory)."""
    job = patched(PAIR, edition="iso-8980-1", state="uncut", right=LENS | {"sphere": "+0.50", "cylinder": "-2.50", "axis": "20"})
    report = report_on(read(job, words("0.45 in", "0.35 up"), words("0 up")))
    limits = {check["component"]: (check["limit"], check["outcome"]) for check in checks_of(report, "prism.lens", "right")}
    assert limits == {"horizontal": (0.45, "within"), "vertical": (0.35, "within")}
    second = patched(
        job, edition="iso-8980-2", lens__design="progressive", thinning={"rule": "none"}, right__add="2.00", left__add="2.00"
    )
    assert {
        check["limit"] for check in checks_of(report_on(read(second, words("0 up"), words("0 up"))), "prism.lens", "right")
    } == {0.45, 0.35}


def test_new_jersey_per_lens_or_total() -> None:
    job = read(patched(PAIR, edition="nj-13-35-5.2"), words("0.40 up"), words("0 up"))
    assert outcome(job) == "within"
    assert outcome(patched(job, edition_options={"per-lens-or-total": "both"})) == "outside"
    power = patched(PAIR, edition="nj-13-35-5.2", right__sphere="-6.25", readings__right__sphere="-6.37")
    assert checks_of(report_on(power), "power", "right")[0]["limit"] == 0.125


def test_rows_of_an_edition_may_not_overlap() -> None:
    """Else the first would win in silence."""
    row = {"check": "prism.lens", "limit": {"fixed": "0.20"}, "clause": "1"}
    edition = {
        "format": "wedgewright.edition/1",
        "id": "shop",
        "name": "Shop",
        "rows": [row | {"component": "vertical"}, row | {"component": "horizontal"}],
    }
    assert ask("check-edition", edition=edition)["edition"]["rows"] == 2
    for second in (row, row | {"component": "vertical"}, row | {"power": {"over": "3"}, "component": "vertical"}):
        answer = ask("check-edition", edition=edition | {"rows": [row | {"component": "vertical"}, second]})
        assert errors_of(answer) == [("edition-rows-overlap", "edition.rows")]
        assert (answer["errors"][0]["params"]["first"], answer["errors"][0]["params"]["second"]) == ("1", "2")
    low, high = {"power": {"to": "3"}}, {"power": {"over": "3"}}
    for ranges in (
        (low, high),
        (high, low),
        ({"power": {"below": "3"}}, {"power": {"from": "3"}}),
        ({"states": ["uncut"]}, {"states": ["mounted"]}),
    ):
        assert ask("check-edition", edition=edition | {"rows": [row | part for part in ranges]})["edition"]["rows"] == 2
    for ranges in (
        (low, {"power": {"from": "3"}}),
        (low, {"add": {"to": "2"}}),
        ({"power": {"over": "2", "to": "4"}}, {"power": {"over": "3"}}),
    ):
        assert errors_of(ask("check-edition", edition=edition | {"rows": [row | part for part in ranges]})) == [
            ("edition-rows-overlap", "edition.rows")
        ]
