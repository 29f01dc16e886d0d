"""Makes the report of one job: what is due, what was read, the verdict, the pictures."""

from decimal import Decimal

import pycore
from pycore.bench.expected import (
    Due,
    notes_on_thinning,
    notes_on_thinning_found,
    read_first,
    read_prism,
    sightings_of,
    thinning_found,
)
from pycore.bench.matter import repeated_of
from pycore.bench.order_check import order_notes
from pycore.bench.point import point_of
from pycore.bench.region import region_of
from pycore.bench.setting import (
    Setting,
    automatic_display,
    on_rings,
    setting_onto_rings,
    setting_to_centre,
)
from pycore.bench.verdict_prism import lens_uncertainty
from pycore.case import Case
from pycore.contract import CONTRACT, REPORT_FORMAT
from pycore.decimals import fixed, snap
from pycore.errors import Note
from pycore.job.bench import taken_by_compensator
from pycore.job.order import EyeOrder
from pycore.names import (
    Entry,
    number,
    plain,
    power_entry,
    power_text,
    prism_entry,
    spoken,
    thinning_text,
)
from pycore.optics.power import Power, point_with_prism
from pycore.optics.prism import EYES, Eye, Prism
from pycore.report_instrument import instrument_entry, spread_entry, step_bases
from pycore.report_verdict import pair_entry, verdict_entry
from pycore.scenes.dial import DialView, close_scene, dial_scene
from pycore.words import say

SINGULAR = Decimal("0.25")  # dioptres; below, decentring would need centimetres


def report_of(case: Case, *, scenes: bool) -> Entry:
    """The report. Arguments: `case`; `scenes` whether to draw the dials. Returns the report."""
    job = case.job
    report: Entry = {
        "format": REPORT_FORMAT,
        "job": job.id,
        "edition": case.edition.id if case.edition else None,
        "made_by": {
            "program": pycore.__version__,
            "contract": CONTRACT,
            "edition_sha256": case.edition.sha256 if case.edition else None,
        },
        "state": job.state,
        "demonstration": job.demonstration,
        "instrument": instrument_entry(job.instrument),
    }
    for eye in EYES:
        order = job.order(eye)
        report[eye] = _lens_entry(case, order) if order else None
    report["order_lines"] = {order.eye: order_lines(order) for order in job.orders}
    report["read_first"] = _read_first(case)
    report["pair"] = pair_entry(job, case.dues)
    if case.verdict:
        report["verdict"] = verdict_entry(case.verdict)
    if scenes:
        report["scenes"] = {eye: _scenes(case, eye) for eye in case.dues}
    report["notes"] = [note_entry(note) for note in _notes(case)]
    return report


def _lens_entry(case: Case, order: EyeOrder) -> Entry:
    job, due_ = case.job, case.dues[order.eye]
    eye = order.eye
    read = read_prism(job, eye)
    error = read - due_.expected if read is not None else None
    point = point_of(job, order)
    entry: Entry = {
        "prescribed": prism_entry(eye, due_.prescribed),
        "thinning": prism_entry(eye, due_.thinning) if due_.thinning is not None else None,
        "expected": prism_entry(eye, due_.expected),
        "expected_known": "full" if due_.vertical_known else "horizontal",
        "stated_used": due_.stated_used,
        "partner": due_.partner,
        "power": power_entry(due_.power) if due_.power else None,
        "add": None if due_.add is None else number(due_.add),
        "point": {"task": point.task, "code": point.code, "params": point.params},
        "step_bases": step_bases(eye, job.instrument),
        "on_rings": on_rings(due_.expected, job.instrument),
        "compensator": _compensator_entry(case, due_),
        "oc_from_prp_mm": _optical_centre(order, due_),
        "read": prism_entry(eye, read) if read is not None else None,
        "error": prism_entry(eye, error) if error is not None else None,
    }
    if job.instrument.kind == "automatic":
        shown = automatic_display(due_, job.instrument)
        entry["meter"] = {"key": eye, **prism_entry(eye, shown)}
    spread = spread_entry(job, eye)
    if spread:
        entry["spread"] = spread
    return entry


def _compensator_entry(case: Case, due_: Due) -> Entry:
    instrument = case.job.instrument
    sense = instrument.compensator or "unknown"
    needed = not on_rings(due_.expected, instrument)
    usable = sense in ("lens-prism", "own-base")
    onto = setting_onto_rings(due_.expected, instrument) if usable else None
    full = setting_to_centre(due_.expected, instrument) if usable else None
    return {
        "needed": needed,
        "sense": sense,
        "full": _setting_entry(due_.eye, full) if full else None,
        "onto_rings": _setting_entry(due_.eye, onto) if onto else None,
    }


def _setting_entry(eye: Eye, setting: Setting) -> Entry:
    scale = prism_entry(eye, setting.scale)
    return {
        "amount": scale["amount"],
        "base": scale["base"],
        "notation_180": scale["notation_180"],
        "residual": prism_entry(eye, setting.residual),
        "beyond_maximum": setting.beyond_maximum,
        "shown": scale["shown"],
    }


def _optical_centre(order: EyeOrder, due_: Due) -> Entry | None:
    """The optical centre from the prism reference point, where decentring can give the prism."""
    if due_.power is None or order.lens.design == "progressive" or order.lens.aspheric:
        return None
    if not due_.vertical_known:
        return None
    # Where the lens shows no prism at all, seen from where it shows what is due.
    point = point_with_prism(due_.expected, Prism(Decimal(0), Decimal(0)), due_.power)
    if point is None or min(abs(power) for power in due_.power.principal) < SINGULAR:
        return None
    return {"right_mm": number(Decimal(point[0])), "up_mm": number(Decimal(point[1]))}


def order_lines(order: EyeOrder) -> list[str]:
    """The order as understood, in the cylinder form written, then in the other.

    Arguments: `order` of one eye. Returns one or two lines.
    """
    power = order.prescribed.power
    letter = say(f"letters.{order.eye}")
    tail = [_component_text(part) for part in _parts(order)]
    if order.prescribed.add:
        tail.append(say("text.add", number=fixed(order.prescribed.add, 2)))
    forms: list[Power | None] = [power]
    if power and power.cylinder:
        forms.append(power.transposed())
    return ["  ".join([letter, power_text(form) if form else "\u2013", *tail]) for form in forms]


def _parts(order: EyeOrder) -> list[tuple[str, str]]:
    parts = []
    for part in order.prescribed.prism or ():
        word = say(f"directions.{part.word}") if part.word else f"@{plain(part.base_deg)}"
        parts.append((fixed(part.amount, 2), word))
    return parts


def _component_text(part: tuple[str, str]) -> str:
    return say("text.component", amount=part[0], word=part[1])


def _read_first(case: Case) -> Entry | None:
    first = read_first(case.dues.get("right"), case.dues.get("left"))
    return {"eye": first, "code": "stronger-at-90"} if first else None


def _scenes(case: Case, eye: Eye) -> Entry:
    job, due_ = case.job, case.dues[eye]
    reading = job.readings.of(eye)
    axis = reading.axis or (due_.power.axis if due_.power else Decimal(180))
    view = DialView(
        due=due_,
        instrument=job.instrument,
        read=read_prism(job, eye),
        sightings=sightings_of(job, eye),
        current=reading.prism.lens_prism(job.instrument) if reading.prism else None,
        compensator=taken_by_compensator(reading.compensator, job.instrument.compensator),
        region=region_of(case.matter, eye) if case.matter else None,
        uncertainty=reading_uncertainty(case, eye),
        axis_deg=float(axis),
    )
    return {"dial": dial_scene(view), "close": close_scene(view)}


def reading_uncertainty(case: Case, eye: Eye) -> float:
    """One standard uncertainty of a lens's reading, prism dioptres. Arguments: `case`; `eye`."""
    if case.matter:
        return lens_uncertainty(case.matter, eye)
    return repeated_of(case.job, eye).uncertainty


def _notes(case: Case) -> list[Note]:
    job = case.job
    notes = [*job.notes, *order_notes(job), *notes_on_thinning(job)]
    if case.verdict:
        notes += case.verdict.notes
    for order in job.orders:
        due_ = case.dues[order.eye]
        if due_.power and _optical_centre(order, due_) is None and snap(due_.expected.amount):
            notes.append(_note_on_decentring(order, due_))
    found = thinning_found(case.dues, {eye: read_prism(job, eye) for eye in case.dues})
    if found is not None:
        notes += notes_on_thinning_found(case.dues, found, thinning_text(found))
    for eye in case.dues:
        notes += _notes_on_instrument(case, eye)
    if job.instrument.signs != (1, 1):
        notes.append(
            Note(
                code="target-not-with-base", field="instrument.target_direction", about="instrument"
            )
        )
    return notes


def _note_on_decentring(order: EyeOrder, due_: Due) -> Note:
    if order.lens.design == "progressive":
        code = "decentring-progressive"
    elif order.lens.aspheric:
        code = "decentring-aspheric"
    elif not due_.vertical_known:
        code = "decentring-thinning-unknown"
    else:
        code = "decentring-too-weak"
    return Note(code=code, field=f"{order.eye}.prism", params={"eye": order.eye}, about="layout")


def _notes_on_instrument(case: Case, eye: Eye) -> list[Note]:
    instrument, due_ = case.job.instrument, case.dues[eye]
    if on_rings(due_.expected, instrument) or instrument.kind == "automatic":
        return []
    if instrument.compensator is None:
        code, severity = "compensator-sense-not-settled", "ask"
    elif instrument.compensator == "none":
        code, severity = "off-rings-without-compensator", "warning"
    elif setting_to_centre(due_.expected, instrument).beyond_maximum:
        code, severity = "beyond-compensator", "note"
    else:
        return []
    return [
        Note(
            code=code,
            field="instrument.compensator",
            about="instrument",
            severity=severity,
            params={"eye": eye},
        )
    ]


def note_entry(note: Note) -> Entry:
    """A note as the report writes it. Arguments: `note`. Returns the entry."""
    return {
        "code": note.code,
        "field": note.field,
        "params": spoken(note.params),
        "severity": note.severity,
        "about": note.about,
    }
