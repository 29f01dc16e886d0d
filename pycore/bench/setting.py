"""How must this bench's instrument be set, and what does it then show?"""

from dataclasses import dataclass
from decimal import ROUND_HALF_EVEN, Decimal

from pycore.bench.expected import Due
from pycore.decimals import snap
from pycore.job.bench import Instrument
from pycore.optics.prism import NO_PRISM, Prism


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """A compensator setting: what stands on the scale (`scale`, in the scale's own sense),
    what is left on the rings (`residual`), and whether the compensator's range ends first.

    Prisms in prism dioptres.
    """

    scale: Prism
    residual: Prism
    beyond_maximum: bool


def on_rings(expected: Prism, instrument: Instrument) -> bool:
    """Tell whether the target stays on the rings. Arguments: `expected` prism dioptres."""
    return snap(expected.amount) <= instrument.outermost_ring


def setting_to_centre(expected: Prism, instrument: Instrument) -> Setting:
    """The setting that brings the target to the centre, as far as the compensator goes.

    Arguments: `expected` what the lens shows without it, prism dioptres; `instrument`.
    Returns the Setting. Source: facts section 5, compensator (from memory).

    >>> meter = Instrument(compensator="own-base", compensator_maximum=Decimal(15))
    >>> setting_to_centre(Prism(Decimal(0), Decimal(8)), meter).scale.y
    Decimal('-8')
    """
    return _setting(expected, expected.amount, instrument)


def setting_onto_rings(expected: Prism, instrument: Instrument) -> Setting | None:
    """The smallest setting that brings the target back onto the outermost ring.

    Arguments and source as `setting_to_centre`. Returns None where it is on the rings anyway.

    >>> found = setting_onto_rings(Prism(Decimal(0), Decimal(8)), Instrument())
    >>> float(found.scale.amount), float(found.residual.amount)
    (3.0, 5.0)
    """
    if on_rings(expected, instrument):
        return None
    return _setting(expected, expected.amount - instrument.outermost_ring, instrument)


def _setting(expected: Prism, wanted: Decimal, instrument: Instrument) -> Setting:
    """Take `wanted` prism dioptres away along the lens's own base."""
    maximum = instrument.compensator_maximum
    beyond = maximum is not None and snap(wanted) > maximum
    taken = maximum if beyond and maximum is not None else wanted
    amount = expected.amount
    share = taken / amount if amount else Decimal(0)
    removed = expected.times(share) if share != 1 else expected
    own_sense = instrument.compensator == "own-base"
    return Setting(
        scale=-removed if own_sense else removed,
        residual=expected - removed if amount else NO_PRISM,
        beyond_maximum=beyond,
    )


def automatic_display(due: Due, instrument: Instrument) -> Prism:
    """What an automatic lens meter shows: the components rounded to its step.

    Arguments: `due`; `instrument` with its `prism_step`. Returns prism dioptres.
    """
    return snap_to_step(due.expected, instrument.prism_step)


def snap_to_step(prism: Prism, step: Decimal) -> Prism:
    """Round both components of a prism to a step, half-even, in prism dioptres.

    >>> snap_to_step(Prism(Decimal("2.80"), Decimal("-0.13")), Decimal("0.25"))
    Prism(x=Decimal('2.75'), y=Decimal('-0.25'))
    """
    return Prism(
        (prism.x / step).quantize(Decimal(1), ROUND_HALF_EVEN) * step + 0,
        (prism.y / step).quantize(Decimal(1), ROUND_HALF_EVEN) * step + 0,
    )
