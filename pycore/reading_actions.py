"""Readings by touch and by step keys: where the target then stands, as the job writes it."""

from collections.abc import Mapping
from decimal import Decimal

from pycore.bench.setting import snap_to_step
from pycore.case import case_of
from pycore.decimals import decimal_places, fixed
from pycore.envelope import Source, checked, eye_of, job_source, refuse
from pycore.job.bench import (
    TENTH,
    Instrument,
    read_instrument,
    read_place,
    read_place_object,
    taken_by_compensator,
)
from pycore.job.document import Job, read_job
from pycore.job.fields import Fields
from pycore.names import Entry
from pycore.optics.prism import Eye, Prism, horizontal_word, vertical_word

MAXIMUM_STEPS = "400"
SIZES = ("step", "tenth", "fine")


def touch(envelope: Source, fields: Fields) -> Entry:
    """Where the target was touched on the dial, as a reading at the instrument's step."""
    eye = eye_of(envelope)
    job = fields.raw("job")
    given = job.get("instrument") if isinstance(job, Mapping) else None
    instrument = read_instrument(Fields(given or {}, "instrument", fields.faults))
    touched = _touched(fields)
    fields.raw("eye")
    checked(fields)
    return _reading(
        eye, instrument.turned(snap_to_step(touched, instrument.prism_step)), instrument
    )


def step(envelope: Source, fields: Fields) -> Entry:
    """The target moved by whole steps, tenths or fine steps, to the right and up as it is seen.

    Where nothing is read yet it starts from the reading put aside last, else from the expected
    point.
    """
    eye = eye_of(envelope)
    moved, size = _steps(fields)
    for key in ("job", "eye"):
        fields.raw(key)
    checked(fields)
    job = read_job(job_source(envelope))
    length = _length(size, job.instrument)
    start = _start(job, eye, length)
    return _reading(eye, start + job.instrument.turned(moved.times(length)), job.instrument)


def place(_envelope: Source, fields: Fields) -> Entry:
    """A place on the rings that no lens's reading is: touched (`x`, `y`), or `from` another one
    by steps. Returns it as text in prism dioptres, `x` to the right and `y` up."""
    instrument = read_instrument(fields.child("instrument") or Fields({}, "", []))
    start = fields.child("from")
    if start is None:
        found = snap_to_step(_touched(fields), instrument.prism_step)
    else:
        moved, size = _steps(fields)
        found = read_place_object(start) + moved.times(_length(size, instrument))
    checked(fields)
    places = _places(found, instrument)
    return {
        "format": "wedgewright.place/1",
        "x": fixed(found.x, places),
        "y": fixed(found.y, places),
    }


def check_instrument(_envelope: Source, fields: Fields) -> Entry:
    """What the looks at a known prism settle of this lens meter."""
    from pycore.instrument_action import answer  # here, so that the start does not wait for it

    return answer(fields)


def _touched(fields: Fields) -> Prism:
    for name in ("x", "y"):
        if not fields.has(name):
            fields.refuse("number-missing", name, "", "type-number")
    return read_place(fields)


def _steps(fields: Fields) -> tuple[Prism, str]:
    """How many steps to the right and up, and of which size."""
    right = fields.count("right", "-" + MAXIMUM_STEPS, MAXIMUM_STEPS) or Decimal(0)
    up = fields.count("up", "-" + MAXIMUM_STEPS, MAXIMUM_STEPS) or Decimal(0)
    fine, size = fields.flag("fine"), fields.word("size", SIZES)
    return Prism(right, up), size or ("fine" if fine else "step")


def _length(size: str, instrument: Instrument) -> Decimal:
    """One step of a size, in prism dioptres."""
    lengths = {"step": instrument.prism_step, "tenth": TENTH, "fine": instrument.fine_step}
    return lengths[size]


def _start(job: Job, eye: Eye, length: Decimal) -> Prism:
    """What is seen of a lens before a step, named by its base, in prism dioptres."""
    due = case_of(job, None).dues.get(eye)
    if due is None:
        refuse("eye-not-there", eye, "", "order-eye-first")
    reading, instrument = job.readings.of(eye), job.instrument
    if reading.prism:
        return reading.prism.seen
    taken = taken_by_compensator(reading.compensator, instrument.compensator)
    if reading.repeats:
        lens = reading.repeats[-1].lens_prism(instrument)
        return instrument.turned(instrument.place_of(lens - taken))
    place_due = instrument.place_of(due.expected - taken)
    return instrument.turned(snap_to_step(place_due, length))


def _reading(eye: Eye, seen: Prism, instrument: Instrument) -> Entry:
    """A reading as the job document writes it, horizontal first, both always there."""
    places = _places(seen, instrument)
    across, along = horizontal_word(eye, seen.x) or "in", vertical_word(seen.y) or "up"
    return {
        "format": "wedgewright.reading/1",
        "eye": eye,
        "prism": [
            {"amount": fixed(abs(seen.x), places), "base": across},
            {"amount": fixed(abs(seen.y), places), "base": along},
        ],
    }


def _places(seen: Prism, instrument: Instrument) -> int:
    """As many decimals as the step and the reading need, two at least."""
    return max(2, *(decimal_places(part) for part in (seen.x, seen.y, instrument.prism_step)))
