"""How the report writes the bench's instrument and the repeated readings of one lens."""

from decimal import Decimal

from pycore.bench.expected import sightings_of
from pycore.bench.matter import repeated_of
from pycore.decimals import decimal_places, fixed
from pycore.job.bench import TENTH, Instrument
from pycore.job.document import Job
from pycore.names import Entry, number, plain
from pycore.optics.prism import Eye, Prism, horizontal_word, vertical_word

_WAYS = {"right": (1, 0), "up": (0, 1), "left": (-1, 0), "down": (0, -1)}


def instrument_entry(instrument: Instrument) -> Entry:
    """What the page must know of the instrument: its steps as text in prism dioptres, how its
    target moves, when that was checked.

    Arguments: `instrument`. Returns the entry.

    >>> instrument_entry(Instrument())["steps"]
    {'step': '0.25', 'tenth': '0.1', 'fine': '0.05'}
    """
    return {
        "steps": {
            "step": plain(instrument.prism_step),
            "tenth": plain(TENTH),
            "fine": plain(instrument.fine_step),
        },
        "target_direction": instrument.target_direction,
        "mirrored": instrument.mirrored,
        "checked_on": instrument.checked_on,
    }


def step_bases(eye: Eye, instrument: Instrument) -> dict[str, str]:
    """The base that a step of the target to each side leads to.

    Arguments: `eye`; `instrument`. Returns in, out, up or down for right, up, left and down.

    >>> step_bases("right", Instrument(target_direction="away-from-base"))["up"]
    'down'
    """
    bases: dict[str, str] = {}
    for way, (right, up) in _WAYS.items():
        prism = instrument.turned(Prism(Decimal(right), Decimal(up)))
        bases[way] = horizontal_word(eye, prism.x) or vertical_word(prism.y) or ""
    return bases


def spread_entry(job: Job, eye: Eye) -> Entry | None:
    """How far apart repeated readings of one lens lie and how sure their mean is.

    Arguments: `job`; `eye`. Returns the entry in prism dioptres, or None for a single reading.
    `from` says whether the uncertainty is the readings' own or the bench's.
    """
    sightings = sightings_of(job, eye)
    if len(sightings) < 2:
        return None
    across, along = (
        max(parts) - min(parts)
        for parts in ([prism.x for prism in sightings], [prism.y for prism in sightings])
    )
    found = repeated_of(job, eye)
    places = max(2, *(decimal_places(part) for part in (across, along)))
    return {
        "count": found.count,
        "horizontal": number(across),
        "vertical": number(along),
        "uncertainty": found.uncertainty,
        "from": "bench" if found.scatter is None else "readings",
        "shown": {
            "horizontal": fixed(across, places),
            "vertical": fixed(along, places),
            "uncertainty": fixed(Decimal(found.uncertainty), 2),
        },
    }
