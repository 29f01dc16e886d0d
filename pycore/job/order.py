"""The order for each eye as it was written: power, prism with its bases, positions."""

from dataclasses import dataclass, field
from decimal import Decimal
from typing import Any

from pycore.decimals import NumberError, read_decimal
from pycore.errors import Note
from pycore.job.body import Lens, Segment, Surfacing, read_lens, read_segment, read_surfacing
from pycore.job.fields import Fields
from pycore.optics.power import Power
from pycore.optics.prism import Eye, Prism, Word, base_of_word, from_base, total

MAXIMUM_COMPONENTS = 8
WORDS: tuple[Word, ...] = ("in", "out", "up", "down")
OPPOSITE = {"up": "down", "down": "up", "in": "out", "out": "in"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Component:
    """One prism as written: `amount` in prism dioptres, its base in degrees 0 to 360.

    `word` keeps in, out, up or down where that is what was written, else "".
    """

    amount: Decimal
    base_deg: Decimal
    word: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Target:
    """What a lens is verified against: power (D), add (D), prism, as one source states it.

    `prism` is None where the source says nothing about prism.
    """

    power: Power | None = None
    add: Decimal | None = None
    prism: tuple[Component, ...] | None = None
    includes_thinning: bool = False

    @property
    def prism_total(self) -> Prism:
        """The components added as vectors, in prism dioptres; none written is no prism."""
        return total(from_base(part.amount, part.base_deg) for part in self.prism or ())


@dataclass(frozen=True, slots=True, kw_only=True)
class EyeOrder:
    """One eye's line of the order. Distances and heights in mm, heights from the lowest line."""

    eye: Eye
    prescribed: Target
    stated: Target | None = None
    partner: bool = False
    pd_mm: Decimal | None = None
    pd_for: str | None = None
    near_pd_mm: Decimal | None = None
    prp_height_mm: Decimal | None = None
    fitting_height_mm: Decimal | None = None
    cross_above_prp_mm: Decimal | None = None
    segment: Segment | None = None
    surfacing: Surfacing | None = None
    lens: Lens = field(default_factory=Lens)

    @property
    def verified(self) -> Target:
        """What is verified against: the maker's stated values where given, else the order."""
        return self.stated or self.prescribed


def base_in_180(degrees: Decimal, side: str, eye: Eye) -> Decimal | None:
    """The base in 0 to 360 of a base in the 180 notation with its word.

    Arguments: `degrees` 0 to 180; `side` up or down, and in or out at 0 and 180; `eye`.
    Returns degrees, or None where the word does not fit. Source: US community-college
    opticianry course OPH 142 (facts section 2).

    >>> base_in_180(Decimal(37), "down", "left")
    Decimal('217')
    """
    if degrees in (0, 180):
        return base_of_word(eye, side) if side in ("in", "out") else None  # type: ignore[arg-type]
    if side not in ("up", "down"):
        return None
    return degrees if side == "up" else degrees + 180


def read_base(fields: Fields, eye: Eye) -> tuple[Decimal, str] | None:
    """Read the `base` of one prism: a word, 0 to 360, or the 180 notation with its word.

    Arguments: `fields` of the prism; `eye`. Returns degrees and the word written, or None.
    """
    given: Any = fields.raw("base")
    if isinstance(given, dict):
        inner = Fields(given, fields.at("base"), fields.faults)
        degrees = inner.number("degrees", "0", "180")
        side = inner.word("side", WORDS)
        inner.finish()
        if degrees is None or side is None:
            if not inner.has("side"):
                inner.refuse("side-missing", "side", "", "write-side")
            elif not inner.has("degrees"):
                inner.refuse("degrees-missing", "degrees", "", "write-degrees")
            return None
        base = base_in_180(degrees, side, eye)
        if base is None:
            fix = "write-in-out" if degrees in (0, 180) else "write-side"
            inner.refuse("side-does-not-fit", "side", side, fix, degrees=str(degrees))
            return None
        return base, ""
    word = fields.text("base")
    if word is None:
        return None
    if word in WORDS:
        return base_of_word(eye, word), word
    try:
        degrees = read_decimal(word)
    except NumberError:
        fields.refuse("base-unknown", "base", word, "write-base")
        return None
    if not 0 <= degrees <= 360:
        fields.refuse("number-out-of-range", "base", word, "check-number", low="0", high="360")
        return None
    return degrees % 360, ""


def read_component(fields: Fields, eye: Eye) -> Component | None:
    """Read one prism with its base. Arguments: `fields`, `eye`. Returns it, or None if refused."""
    amount = fields.number("amount", "0", "60")
    faults_before = len(fields.faults)
    base = read_base(fields, eye)
    fields.finish()
    if not fields.has("amount"):
        fields.refuse("amount-missing", "amount", "", "write-amount")
    elif base is None and amount and len(fields.faults) == faults_before:
        fields.refuse("base-missing", "base", "", "write-base")
    if amount is None or (base is None and amount):
        return None
    base_deg, word = base or (Decimal(0), "")
    return Component(amount=amount, base_deg=base_deg, word=word)


def read_components(fields: Fields, name: str, eye: Eye) -> tuple[Component, ...] | None:
    """Read a list of prisms under `name`; None where the list is absent."""
    if not fields.has(name):
        fields.raw(name)
        return None
    read = (read_component(item, eye) for item in fields.children(name, MAXIMUM_COMPONENTS))
    return tuple(part for part in read if part is not None)


def read_power(fields: Fields, notes: list[Note]) -> Power | None:
    """Read sphere, cylinder and axis (axis 0 counts as 180, with a note).

    Arguments: `fields` holding them; `notes` to add to. Returns a Power, or None.
    """
    sphere = fields.power("sphere")
    cylinder = fields.power("cylinder", "20")
    axis = fields.number("axis", "0", "180")
    if axis == 0:
        notes.append(Note(code="axis-zero", field=fields.at("axis")))
        axis = Decimal(180)
    if not fields.has("sphere"):
        if cylinder is not None:
            fields.refuse("sphere-missing", "sphere", "", "write-sphere")
        return None
    if cylinder and not fields.has("axis"):
        fields.refuse("axis-missing", "axis", "", "write-axis")
    if axis is not None and fields.has("axis") and not cylinder:
        notes.append(
            Note(code="axis-without-cylinder", field=fields.at("axis"), severity="warning")
        )
    if sphere is None:
        return None
    return Power(sphere, cylinder or Decimal(0), axis if cylinder and axis else Decimal(180))


def _read_target(fields: Fields, eye: Eye, notes: list[Note]) -> Target:
    return Target(
        power=read_power(fields, notes),
        add=fields.number("add", "0", "12"),
        prism=read_components(fields, "prism", eye),
    )


def _read_stated(fields: Fields, eye: Eye, notes: list[Note]) -> Target:
    target = _read_target(fields, eye, notes)
    includes = fields.flag("includes_thinning")
    fields.finish()
    return Target(
        power=target.power, add=target.add, prism=target.prism, includes_thinning=includes
    )


def _fill(stated: Target, prescribed: Target) -> Target:
    """Where the maker states nothing, the prescription still counts."""
    return Target(
        power=stated.power or prescribed.power,
        add=prescribed.add if stated.add is None else stated.add,
        prism=prescribed.prism if stated.prism is None else stated.prism,
        includes_thinning=stated.includes_thinning and stated.prism is not None,
    )


def read_eye(fields: Fields, eye: Eye, lens: Lens, notes: list[Note]) -> EyeOrder:
    """Read one eye of the order.

    Arguments: `fields` of the eye; `eye`; `lens` what the whole job says of the lens, which
    the eye's own fields overrule; `notes` to add to. Returns the eye's order.
    """
    prescribed = _read_target(fields, eye, notes)
    stated = fields.child("stated")
    segment, surfacing = fields.child("segment"), fields.child("surfacing")
    order = EyeOrder(
        eye=eye,
        prescribed=prescribed,
        stated=_fill(_read_stated(stated, eye, notes), prescribed) if stated else None,
        partner=fields.flag("partner"),
        pd_mm=fields.number("pd_mm", "15", "50"),
        pd_for=fields.word("pd_for", ("distance", "near")),
        near_pd_mm=fields.number("near_pd_mm", "15", "50"),
        prp_height_mm=fields.number("prp_height_mm", "0", "80"),
        fitting_height_mm=fields.number("fitting_height_mm", "0", "80"),
        cross_above_prp_mm=fields.number("cross_above_prp_mm", "-10", "20"),
        segment=read_segment(segment) if segment else None,
        surfacing=read_surfacing(surfacing) if surfacing else None,
        lens=read_lens(fields, lens),
    )
    fields.finish()
    return order
