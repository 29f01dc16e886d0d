"""What the door can be asked to do; each action takes the envelope and answers with an entry."""

import json
from collections.abc import Mapping
from typing import Any

from pycore.case import case_of
from pycore.data import package_text
from pycore.echo import echo_of
from pycore.editions.edition import OPTIONS, Edition
from pycore.editions.reader import BUILT_IN, built_in, read_edition
from pycore.envelope import Action, Source, checked, job_source, refuse
from pycore.errors import Fault, Note, RefusedError
from pycore.job.body import Lens
from pycore.job.document import PAIR_PD_MM, Job, read_job
from pycore.job.fields import Fields
from pycore.job.order import EyeOrder, read_eye
from pycore.names import Entry
from pycore.optics.prism import EYES
from pycore.reading_actions import check_instrument, place, step, touch
from pycore.report import note_entry, order_lines, report_of
from pycore.result import result_text
from pycore.sections import SECTIONS, add_sections

MAXIMUM_EDITIONS = 20


def _report(envelope: Source, fields: Fields) -> Entry:
    scenes, text = fields.flag("scenes"), fields.flag("text")
    for key in ("job", "editions", "sections"):
        fields.raw(key)
    wanted = _wanted_sections(envelope.get("sections"))
    checked(fields)
    source = job_source(envelope)
    try:
        job = read_job(source)
        edition = _edition_for(job, envelope)
    except RefusedError as refused:
        raise RefusedError(refused.faults, echo_of(source)) from None
    case = case_of(job, edition)
    report = report_of(case, scenes=scenes)
    add_sections(report, case, wanted, scenes=scenes)
    report["echo"] = echo_of(source)
    if text:
        report["text"] = result_text(report)
    return report


def _wanted_sections(sections: Any) -> tuple[str, ...]:
    """The names of the sections to work out: all where nothing is said, none for an empty list."""
    if sections is None:
        return tuple(SECTIONS)
    if not isinstance(sections, list):
        refuse("list-expected", "sections", "", "send-again")
    for name in sections:
        if not isinstance(name, str) or name not in SECTIONS:
            refuse(
                "choice-unknown",
                "sections",
                str(name),
                "choose-one",
                allowed=", ".join(SECTIONS) or "\u2013",
            )
    return tuple(dict.fromkeys(sections))


def _edition_for(job: Job, envelope: Source) -> Edition | None:
    """The edition a job names, with its options and state checked."""
    if job.edition is None:
        return None
    shop = _shop_editions(envelope)
    if job.edition not in (*BUILT_IN, *shop):
        allowed = ", ".join((*BUILT_IN, *shop))
        refuse("edition-unknown", "edition", job.edition, "choose-one", allowed=allowed)
    edition = shop.get(job.edition) or built_in(job.edition)
    faults = [*_option_faults(job, edition)]
    if job.state not in edition.states:
        others = [*map(built_in, BUILT_IN), *shop.values()]
        covering = ", ".join(other.name for other in others if job.state in other.states)
        faults.append(
            Fault(
                code="edition-does-not-cover-state",
                field="edition",
                given=job.edition,
                params={"edition": edition.name, "state": job.state, "allowed": covering},
                fix="choose-edition",
            )
        )
    if faults:
        raise RefusedError(tuple(faults))
    return edition


def _option_faults(job: Job, edition: Edition) -> list[Fault]:
    faults = []
    for name, value in job.edition_options.items():
        allowed = OPTIONS.get(name, ()) if name in edition.options else ()
        if value not in allowed:
            code = "choice-unknown" if allowed else "option-not-offered"
            params = {"allowed": ", ".join(allowed or edition.options), "edition": edition.name}
            field = f"edition_options.{name}"
            faults.append(
                Fault(code=code, field=field, given=value, params=params, fix="choose-one")
            )
    return faults


def _shop_editions(envelope: Source) -> dict[str, Edition]:
    given = envelope.get("editions")
    if given is None:
        return {}
    if not isinstance(given, list) or len(given) > MAXIMUM_EDITIONS:
        refuse("list-expected", "editions", "", "send-again")
    editions = {}
    for source in given:
        edition = read_edition(source, local=True)
        if edition.id in BUILT_IN:
            refuse("edition-id-taken", "edition.id", edition.id, "rename-edition")
        if edition.id in editions:
            refuse("edition-id-twice", "edition.id", edition.id, "rename-edition")
        editions[edition.id] = edition
    return editions


def _check_edition(envelope: Source, fields: Fields) -> Entry:
    fields.raw("edition")
    checked(fields)
    edition = read_edition(envelope.get("edition") or {}, local=True)
    if edition.id in BUILT_IN:
        refuse("edition-id-taken", "edition.id", edition.id, "rename-edition")
    return {"format": "wedgewright.edition-check/1", "edition": _edition_entry(edition)}


def _list_editions(envelope: Source, fields: Fields) -> Entry:
    fields.raw("editions")
    checked(fields)
    editions = [*map(built_in, BUILT_IN), *_shop_editions(envelope).values()]
    return {"format": "wedgewright.editions/1", "editions": list(map(_edition_entry, editions))}


def _edition_entry(edition: Edition) -> Entry:
    return {
        "id": edition.id,
        "name": edition.name,
        "states": list(edition.states),
        "provenance": list(edition.provenances),
        "sha256": edition.sha256,
        "rows": len(edition.rows),
        "options": [
            {
                "id": name,
                "default": default,
                "why": name,
                "values": [{"id": value, "why": f"{name}.{value}"} for value in OPTIONS[name]],
            }
            for name, default in edition.options.items()
        ],
    }


def _demonstration(_envelope: Source, fields: Fields) -> Entry:
    """An invented pair; `pair` names one that fails, by what is wrong with it."""
    kept = json.loads(package_text("job/demonstration.json"))
    pair = fields.word("pair", tuple(kept["changes"])) or "within"
    checked(fields)
    job = _changed(kept["pair"], kept["changes"][pair])
    names = list(kept["changes"])
    following = names[(names.index(pair) + 1) % len(names)]
    return {
        "format": "wedgewright.demonstration/1",
        "job": job,
        "pair": pair,
        "next": following,
        "pairs": names,
    }


def _changed(job: Source, change: Source) -> Entry:
    """The job with the fields of `change` in it, object by object; null takes a field away."""
    inner = {
        key: _changed(job.get(key, {}), value) if isinstance(value, Mapping) else value
        for key, value in change.items()
    }
    return {key: value for key, value in {**job, **inner}.items() if value is not None}


def _imagine(envelope: Source, fields: Fields) -> Entry:
    """What the dials would show if one cause were the case."""
    from pycore.imagine import BOTH, imaginable, imagined_entry  # not needed at the start

    cause = fields.word("cause", imaginable()) or "as-ordered"
    eyes = fields.word("eye", (*EYES, BOTH)) or BOTH
    for key in ("job", "editions"):
        fields.raw(key)
    checked(fields)
    job = read_job(job_source(envelope))
    return imagined_entry(case_of(job, _edition_for(job, envelope)), cause, eyes)


def _read_order(envelope: Source, fields: Fields) -> Entry:
    for key in ("line", "bases"):
        fields.raw(key)
    checked(fields)
    line, bases = envelope.get("line"), envelope.get("bases", "360")
    if not isinstance(line, str):
        refuse("text-expected", "line", str(line), "type-text")
    if bases not in ("360", "180"):
        refuse("choice-unknown", "bases", str(bases), "choose-one", allowed="360, 180")
    from pycore.job.line import read_line  # here, so that the start does not wait for it

    reading = read_line(line, bases)
    if reading.errors:
        raise RefusedError(reading.errors)
    given = {"right": reading.right, "left": reading.left}
    found = {eye: fields for eye, fields in given.items() if fields is not None}
    orders, notes = _try_order(found, reading.pd_mm)
    lines = {order.eye: order_lines(order) for order in orders}
    answer: Entry = {
        "format": "wedgewright.order/1",
        **found,
        "echo": [text for texts in lines.values() for text in texts],
        "order_lines": lines,
        "notes": [note_entry(note) for note in (*reading.notes, *notes)],
    }
    if reading.lens:
        answer["lens"] = dict(reading.lens)
    if reading.pd_mm is not None:
        answer["pd_mm"] = reading.pd_mm
    return answer


def _try_order(found: Source, pd_mm: str | None) -> tuple[list[EyeOrder], list[Note]]:
    """Read the eyes of a line as a job would, so that figures out of range are refused here."""
    faults, notes = list[Fault](), list[Note]()
    fields = Fields({**found, "pd_mm": pd_mm}, "", faults)
    fields.number("pd_mm", *PAIR_PD_MM)
    orders = [read_eye(inner, eye, Lens(), notes) for eye in EYES if (inner := fields.child(eye))]
    if faults:
        raise RefusedError(tuple(faults))
    return orders, notes


ACTIONS: Mapping[str, Action] = {
    "report": _report,
    "read-order": _read_order,
    "touch": touch,
    "step": step,
    "place": place,
    "imagine": _imagine,
    "check-instrument": check_instrument,
    "check-edition": _check_edition,
    "list-editions": _list_editions,
    "demonstration": _demonstration,
}
