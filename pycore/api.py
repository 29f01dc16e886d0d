"""The door: one text in, one text out, for the page, the command line and the tests alike."""

import json
from collections.abc import Callable, Mapping
from decimal import Decimal
from typing import Any, NoReturn

from pycore.bench.setting import snap_to_step
from pycore.contract import (
    JOB_FORMAT,
    REFUSAL_FORMAT,
    REQUEST_FORMAT,
    check_job_size,
    decode,
    encode,
)
from pycore.data import package_text
from pycore.decimals import fixed
from pycore.echo import echo_of
from pycore.editions.edition import OPTIONS, Edition
from pycore.editions.reader import BUILT_IN, built_in, read_edition
from pycore.errors import Fault, Note, RefusedError
from pycore.job.bench import Instrument, read_instrument
from pycore.job.body import Lens
from pycore.job.document import PAIR_PD_MM, Job, read_job
from pycore.job.fields import Fields
from pycore.job.line import read_line
from pycore.job.order import EyeOrder, read_eye
from pycore.names import Entry, spoken
from pycore.optics.prism import EYES, Eye, Prism, horizontal_word, vertical_word
from pycore.report import case_of, note_entry, order_lines, report_of
from pycore.result import result_text
from pycore.words import say

Source = Mapping[str, Any]
MAXIMUM_EDITIONS = 20
MAXIMUM_STEPS = "400"


def handle(request: str) -> str:
    """Answer one request; never raises.

    Arguments: `request` JSON text, a job or an envelope. Returns JSON text, a report or other
    answer, or a refusal with every fault. A fault of the program itself has code `internal`.

    >>> json.loads(handle('{"format": "wedgewright.job/1"}'))["errors"][0]["code"]
    'state-missing'
    """
    sequence: Any = None
    try:
        source = decode(request)
        envelope = source if source.get("format") == REQUEST_FORMAT else None
        sequence = envelope.get("sequence") if envelope else None
        answer = _answer(envelope) if envelope else _report({"job": source})
    except RefusedError as refused:
        answer = refusal(refused.faults)
    except Exception as error:  # the door's promise: a slip of ours is an answer, not a crash
        fault = Fault(
            code="internal", field="", params={"kind": type(error).__name__}, fix="report-fault"
        )
        answer = refusal((fault,))
    if isinstance(sequence, str) and sequence.isdigit():
        answer = {**answer, "sequence": int(sequence)}
    return encode(answer)


def refusal(faults: tuple[Fault, ...]) -> Entry:
    """A refusal with every fault at once. Arguments: `faults`. Returns the answer."""
    return {
        "format": REFUSAL_FORMAT,
        "errors": [
            {
                "code": fault.code,
                "field": fault.field,
                "given": fault.given,
                "params": {
                    **spoken(fault.params),
                    "given": fault.given,
                    "field_name": field_name(fault.field),
                },
                "fix": fault.fix,
            }
            for fault in faults
        ],
    }


def field_name(path: str) -> str:
    """The name a person knows a field by. Arguments: `path` in the document. Returns words.

    >>> field_name("readings.left.sphere")
    'left lens, as read: sphere'
    """
    parts = path.replace("]", "").replace("[", ".").split(".")
    last = next((part for part in reversed(parts) if not part.isdigit()), "")
    place = ".".join(part for part in parts if part in ("readings", "stated", *EYES))
    name = say(f"fields.{last}").removeprefix("fields.")
    if not place or place == last:
        return name
    return say("text.field-name", place=say(f"places.{place}").removeprefix("places."), name=name)


def _answer(envelope: Source) -> Entry:
    actions: dict[str, Callable[[Source], Entry]] = {
        "report": _report,
        "read-order": _read_order,
        "touch": _touch,
        "step": _step,
        "check-edition": _check_edition,
        "list-editions": _list_editions,
        "demonstration": _demonstration,
    }
    wanted = envelope.get("do", "report")
    action = actions.get(wanted) if isinstance(wanted, str) else None
    if action is None:
        allowed = ", ".join(actions)
        _refuse("choice-unknown", "do", str(wanted), "choose-one", allowed=allowed)
    return action(envelope)


def _refuse(code: str, field: str, given: str, fix: str, **params: str) -> NoReturn:
    raise RefusedError((Fault(code=code, field=field, given=given[:64], params=params, fix=fix),))


def _job_source(envelope: Source) -> Source:
    job = envelope.get("job")
    if not isinstance(job, Mapping):
        _refuse("object-expected", "job", str(job), "send-again")
    check_job_size(job)
    if "format" not in job:
        _refuse("format-unknown", "format", "", "use-format", format=JOB_FORMAT)
    return job


def _report(envelope: Source) -> Entry:
    source = _job_source(envelope)
    job = read_job(source)
    report = report_of(
        case_of(job, _edition_for(job, envelope)), scenes=envelope.get("scenes") is True
    )
    report["echo"] = echo_of(source)
    if envelope.get("text") is True:
        report["text"] = result_text(report)
    return report


def _edition_for(job: Job, envelope: Source) -> Edition | None:
    """The edition a job names, with its options and state checked."""
    if job.edition is None:
        return None
    shop = _shop_editions(envelope)
    if job.edition not in (*BUILT_IN, *shop):
        allowed = ", ".join((*BUILT_IN, *shop))
        _refuse("edition-unknown", "edition", job.edition, "choose-one", allowed=allowed)
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
        _refuse("list-expected", "editions", "", "send-again")
    editions = {}
    for source in given:
        edition = read_edition(source, local=True)
        if edition.id in BUILT_IN:
            _refuse("edition-id-taken", "edition.id", edition.id, "rename-edition")
        editions[edition.id] = edition
    return editions


def _check_edition(envelope: Source) -> Entry:
    edition = read_edition(envelope.get("edition") or {}, local=True)
    if edition.id in BUILT_IN:
        _refuse("edition-id-taken", "edition.id", edition.id, "rename-edition")
    return {"format": "wedgewright.edition-check/1", "edition": _edition_entry(edition)}


def _list_editions(envelope: Source) -> Entry:
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


def _demonstration(_envelope: Source) -> Entry:
    job = json.loads(package_text("job/demonstration.json"))
    return {"format": "wedgewright.demonstration/1", "job": job}


def _read_order(envelope: Source) -> Entry:
    line, bases = envelope.get("line"), envelope.get("bases", "360")
    if not isinstance(line, str):
        _refuse("text-expected", "line", str(line), "type-text")
    if bases not in ("360", "180"):
        _refuse("choice-unknown", "bases", str(bases), "choose-one", allowed="360, 180")
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
        _refuse_all(faults)
    return orders, notes


def _eye(envelope: Source) -> Eye:
    eye = envelope.get("eye")
    if eye not in EYES:
        _refuse("choice-unknown", "eye", str(eye), "choose-one", allowed=", ".join(EYES))
    return "right" if eye == "right" else "left"


def _touch(envelope: Source) -> Entry:
    """Where the target was touched on the dial, as a reading at the instrument's step."""
    eye, faults = _eye(envelope), list[Fault]()
    fields = Fields(envelope, "", faults)
    job = envelope.get("job")
    given = job.get("instrument") if isinstance(job, Mapping) else None
    instrument = read_instrument(Fields(given or {}, "instrument", faults))
    x, y = fields.number("x", "-60", "60"), fields.number("y", "-60", "60")
    if faults or x is None or y is None:
        _refuse_all(faults or [Fault(code="number-missing", field="x", fix="type-number")])
    return _reading(eye, snap_to_step(Prism(x, y), instrument.prism_step), instrument)


def _refuse_all(faults: list[Fault]) -> NoReturn:
    raise RefusedError(tuple(faults))


def _step(envelope: Source) -> Entry:
    """The reading moved by whole steps; where nothing is read yet, from the expected point."""
    eye, faults = _eye(envelope), list[Fault]()
    job = read_job(_job_source(envelope))
    fields = Fields(envelope, "", faults)
    right = fields.number("right", "-" + MAXIMUM_STEPS, MAXIMUM_STEPS) or Decimal(0)
    up = fields.number("up", "-" + MAXIMUM_STEPS, MAXIMUM_STEPS) or Decimal(0)
    fine = fields.flag("fine")
    case = case_of(job, None)
    if faults or eye not in case.dues:
        _refuse_all(faults or [Fault(code="eye-not-there", field=eye, fix="order-eye-first")])
    step = job.instrument.fine_step if fine else job.instrument.prism_step
    first = job.readings.of(eye).prism
    start = first.seen if first else snap_to_step(case.dues[eye].expected, step)
    return _reading(eye, start + Prism(right * step, up * step), job.instrument)


def _reading(eye: Eye, seen: Prism, instrument: Instrument) -> Entry:
    """A reading as the job document writes it, horizontal first, both always there."""
    places = 2 if instrument.fine_step >= Decimal("0.01") else 3
    across, along = horizontal_word(eye, seen.x) or "in", vertical_word(seen.y) or "up"
    return {
        "format": "wedgewright.reading/1",
        "eye": eye,
        "prism": [
            {"amount": fixed(abs(seen.x), places), "base": across},
            {"amount": fixed(abs(seen.y), places), "base": along},
        ],
    }
