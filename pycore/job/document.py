"""The job document: one order with its lens, frame, instrument and readings, read whole."""

from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

from pycore.errors import Fault, Note, RefusedError
from pycore.job.bench import Instrument, Readings, read_instrument, read_readings
from pycore.job.body import (
    Frame,
    Lens,
    Place,
    Wear,
    read_frame,
    read_lens,
    read_places,
    read_wear,
)
from pycore.job.fields import Fields
from pycore.job.looks import Look, read_looks
from pycore.job.order import EyeOrder, read_eye
from pycore.optics.prism import EYES, Eye

FORMAT = "wedgewright.job/1"
MAXIMUM_POINTS = 200
PAIR_PD_MM = ("30", "100")
STATES = ("uncut", "edged", "mounted")
RULES = ("none", "two-thirds", "six-tenths", "amount", "unknown")


@dataclass(frozen=True, slots=True, kw_only=True)
class Thinning:
    """Prism thinning as the paperwork says: a rule, or an amount (prism dioptres) and base."""

    rule: str
    amount: Decimal | None = None
    base: str = "down"
    left_amount: Decimal | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Job:
    """One job of the bench, as frozen values. `notes` are what reading it had to say.

    `centration_shift_mm`: how far the reference point moves for each prism dioptre, opposite to
    the base, where the distances were taken without the prism; None for no shift. `field_limit`:
    the vertical imbalance (prism dioptres) whose zone is drawn.
    """

    id: str | None
    state: str
    edition: str | None
    edition_options: Mapping[str, str]
    decision_rule: str
    lens: Lens
    frame: Frame
    wear: Wear
    thinning: Thinning | None
    right: EyeOrder | None
    left: EyeOrder | None
    pd_mm: Decimal | None
    points: Mapping[Eye, tuple[Place, ...]]
    centration_shift_mm: Decimal | None
    field_limit: Decimal | None
    instrument: Instrument
    readings: Readings
    looks: tuple[Look, ...]
    demonstration: bool
    notes: tuple[Note, ...]

    def order(self, eye: Eye) -> EyeOrder | None:
        """The order of one eye, or None."""
        return self.right if eye == "right" else self.left

    @property
    def orders(self) -> tuple[EyeOrder, ...]:
        """The eyes that are ordered, right first."""
        return tuple(order for eye in EYES if (order := self.order(eye)))


def read_job(source: Mapping[str, Any]) -> Job:
    """Read a decoded job document into values, or refuse it with every fault at once.

    Arguments: `source` as `contract.decode` gives it. Returns the Job.
    Raises RefusedError with all faults. Source: the job document, version 1.

    >>> job = read_job({"format": "wedgewright.job/1", "state": "uncut",
    ...                 "right": {"sphere": "-2.00"}})
    >>> job.right.prescribed.power.sphere
    Decimal('-2.00')
    """
    faults: list[Fault] = []
    job = read_fields(Fields(source, "", faults))
    if faults:
        raise RefusedError(tuple(faults))
    return job


def read_fields(fields: Fields) -> Job:
    """Read a job's fields, leaving every fault with them. Arguments: `fields`. Returns the Job.

    The schema is made by the same walk (see `pycore.schema`).
    """
    notes: list[Note] = []
    if fields.text("format") != FORMAT:
        fields.refuse("format-unknown", "format", fields.raw("format"), "use-format", format=FORMAT)
    state = fields.word("state", STATES)
    if not fields.has("state"):
        fields.refuse("state-missing", "state", "", "choose-state", allowed=", ".join(STATES))
    lens_fields = fields.child("lens")
    lens = read_lens(lens_fields, Lens()) if lens_fields else Lens()
    if lens_fields:
        lens_fields.finish()
    instrument_fields = fields.child("instrument")
    instrument = read_instrument(instrument_fields) if instrument_fields else Instrument()
    eyes = {eye: _read_order(fields, eye, lens, notes) for eye in EYES}
    frame, wear, readings = fields.child("frame"), fields.child("wear"), fields.child("readings")
    job = Job(
        id=fields.text("id"),
        state=state or "uncut",
        edition=fields.text("edition"),
        edition_options=_read_options(fields),
        decision_rule=fields.word("decision_rule", ("simple", "guarded")) or "simple",
        lens=lens,
        frame=read_frame(frame) if frame else Frame(),
        wear=read_wear(wear) if wear else Wear(),
        thinning=_read_thinning(fields),
        right=eyes["right"],
        left=eyes["left"],
        pd_mm=fields.number("pd_mm", *PAIR_PD_MM),
        points=_read_points(fields),
        centration_shift_mm=fields.number("centration_shift_mm", "0", "1"),
        field_limit=fields.number("field_limit", "0.1", "10"),
        instrument=instrument,
        readings=read_readings(readings, instrument, notes) if readings else Readings(),
        looks=read_looks(fields),
        demonstration=fields.flag("demonstration"),
        notes=tuple(notes),
    )
    _read_signature(fields)
    _require_an_eye(fields, job)
    fields.finish()
    return job


def _read_order(fields: Fields, eye: Eye, lens: Lens, notes: list[Note]) -> EyeOrder | None:
    inner = fields.child(eye)
    return read_eye(inner, eye, lens, notes) if inner else None


def _read_points(fields: Fields) -> dict[Eye, tuple[Place, ...]]:
    """The points of each lens at which the prism is asked for."""
    inner = fields.child("points")
    if inner is None:
        return {}
    points = {eye: read_places(inner, eye, MAXIMUM_POINTS) for eye in EYES}
    inner.finish()
    return points


def _require_an_eye(fields: Fields, job: Job) -> None:
    given = [eye for eye in EYES if fields.has(eye)]
    partners = [order for order in job.orders if order.partner]
    if len(partners) == 2:
        fields.refuse("partner-twice", "left.partner", "", "choose-one-partner")
    typed = [eye for eye in given if _typed_sphere(fields, eye)]
    if not typed:
        where = f"{given[0]}.sphere" if given else "right.sphere"
        fields.refuse("sphere-missing", where, "", "write-sphere")


def _typed_sphere(fields: Fields, eye: Eye) -> bool:
    source = fields.raw(eye)
    sphere = source.get("sphere") if isinstance(source, Mapping) else None
    return sphere is not None and bool(str(sphere).strip())


def _read_options(fields: Fields) -> dict[str, str]:
    inner = fields.child("edition_options")
    if inner is None:
        return {}
    return {name: value for name in inner.names() if (value := inner.text(name))}


def _read_thinning(fields: Fields) -> Thinning | None:
    inner = fields.child("thinning")
    if inner is None:
        return None
    rule = inner.word("rule", RULES)
    thinning = Thinning(
        rule=rule or "unknown",
        amount=inner.number("amount", "0", "20"),
        base=inner.word("base", ("down", "up")) or "down",
        left_amount=inner.number("left_amount", "0", "20"),
    )
    if rule == "amount" and not inner.has("amount"):
        inner.refuse("amount-missing", "amount", "", "write-amount")
    if rule == "amount" and not inner.has("base"):
        inner.refuse("base-missing", "base", "", "write-base")
    if not inner.has("rule"):
        inner.refuse("choice-missing", "rule", "", "choose-one", allowed=", ".join(RULES))
    inner.finish()
    return thinning


def _read_signature(fields: Fields) -> None:
    """The sign-off travels with the job and is never judged; it only has to be well formed."""
    inner = fields.child("signed")
    if inner:
        inner.text("initials")
        inner.text("at")
        inner.finish()
