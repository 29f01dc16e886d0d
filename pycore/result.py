"""The result of a job as plain text: for copying, for a terminal, for a note to the lab."""

from collections.abc import Iterator, Mapping
from typing import Any

from pycore.optics.prism import EYES
from pycore.words import say

Report = Mapping[str, Any]


def result_text(report: Report) -> str:
    """A report as lines of text. Arguments: `report` as `report_of` makes it. Returns text."""
    return "\n".join(_lines(report)) + "\n"


def _lines(report: Report) -> Iterator[str]:
    yield say("text.title", job=report["job"] or "\u2013", state=say(f"states.{report['state']}"))
    if report["demonstration"]:
        yield say("text.demonstration")
    for eye in EYES:
        if report[eye]:
            yield ""
            yield from _lens_lines(report, eye)
    if report["pair"]:
        yield ""
        yield from _pair_lines(report["pair"])
    if report.get("verdict"):
        yield ""
        yield from _verdict_lines(report["verdict"])
    for note in report["notes"]:
        if note["severity"] != "note":
            yield say("text.note", text=say(f"notes.{note['code']}", **note["params"]))
    made = report["made_by"]
    yield ""
    yield say("text.made-by", program=made["program"], hash=(made["edition_sha256"] or "")[:12])
    for caution in ("prescriber", "local-law", "sign-off"):
        yield say(f"cautions.{caution}")


def _lens_lines(report: Report, eye: str) -> Iterator[str]:
    lens = report[eye]
    yield say("text.lens-heading", eye=say(f"eyes.{eye}"))
    for line in report["order_lines"].get(eye, []):
        yield "  " + line
    yield _row("prescribed", lens["prescribed"]["shown"]["text"])
    thinning = lens["thinning"]
    yield _row("thinning", thinning["shown"]["text"] if thinning else say("text.not-known"))
    known = lens["expected_known"] == "full"
    code = "expected" if known else "expected-horizontal"
    yield _row(code, lens["expected"]["shown"]["text"])
    if known and lens["expected"]["notation_180"]:
        yield _row("expected-180", lens["expected"]["shown"]["text_180"])
    if lens["read"]:
        yield _row("read", lens["read"]["shown"]["text"])
        yield _row("error", lens["error"]["shown"]["text"])


def _pair_lines(pair: Report) -> Iterator[str]:
    yield say("text.pair-heading")
    for component in ("vertical", "horizontal"):
        shown = pair[component]["shown"]
        text = shown["ordered"]
        if shown["read"]:
            text = say(
                "text.pair-row",
                ordered=shown["ordered"],
                read=shown["read"],
                deviation=shown["deviation"],
            )
        yield _row(component, text)
    if "thinning_found" in pair:
        yield _row("thinning-found", pair["thinning_found"]["shown"])


def _verdict_lines(verdict: Report) -> Iterator[str]:
    sentence = verdict["sentence"]
    yield say("text.verdict-heading", word=say(f"outcomes.{verdict['outcome']}"))
    yield "  " + say(f"verdict.{sentence['code']}", **sentence["params"])
    for check in verdict["checks"]:
        shown = check["shown"]
        yield "  " + say(
            "text.check-row",
            text=shown["text"],
            outcome=say(f"outcomes.{check['outcome']}" if check["counts"] else "outcomes.shown"),
            clause=check["clause"],
            provenance=say(f"provenance.{check['provenance']}"),
        )
    missing = [
        say(f"not_checked.{item['code']}", **item["params"]) for item in verdict["not_checked"]
    ]
    yield _row("not-checked", "; ".join(missing))


def _row(name: str, text: str) -> str:
    return say("text.row", name=say(f"rows.{name}"), text=text)
