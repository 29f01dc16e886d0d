"""Answers `imagine`: what the dials would show if one cause were the case.

The answer: {`format`, `cause`, `choices` (the codes there are), `eyes`, `possible`, `sentence`, `right` and `left` PRISM as read
(null where the eye is not ordered or it cannot happen), `scenes` with the dials}.
"""

import math

from pycore.bench.cause_imagined import eyes_of, imagined
from pycore.bench.cause_lens import Lens, held_lenses
from pycore.bench.cause_table import AS_ORDERED, cause_table
from pycore.bench.expected import Due
from pycore.bench.region import region_of
from pycore.case import Case
from pycore.decimals import from_float
from pycore.job.bench import taken_by_compensator
from pycore.names import Entry, prism_entry
from pycore.optics.prism import EYES, Eye, Prism
from pycore.report import reading_uncertainty
from pycore.scenes.dial import DialView, close_scene, dial_scene
from pycore.words import say

FORMAT = "wedgewright.imagined/1"
BOTH = "both"


def imaginable() -> tuple[str, ...]:
    """The codes of all causes that can be imagined."""
    return (AS_ORDERED, *cause_table().causes)


def imagined_entry(case: Case, code: str, eye: str) -> Entry:
    """What would be seen. Arguments: `case`; `code` of the cause; `eye` right, left or both."""
    asked = next((each for each in EYES if each == eye), None)
    table = cause_table().in_state(case.job.state)
    held = held_lenses(case.job, case.dues)
    eyes = eyes_of(held, table, code, asked)
    pictures = imagined(held, table, code, eyes)
    where = BOTH if len(eyes) > 1 else eyes[0]
    entry: Entry = {
        "format": FORMAT,
        "cause": code,
        "choices": list(imaginable()),
        "eyes": list(eyes),
        "possible": bool(pictures),
        "sentence": say(f"causes.{code}", eye=say(f"eyes.{where}")),
        **dict.fromkeys(EYES),
        "scenes": {},
    }
    for each, (lens, (x, y)) in pictures.items():
        prism = Prism(from_float(x), from_float(y))
        entry[each] = prism_entry(each, prism)
        entry["scenes"][each] = _scenes(case, each, lens, prism)
    return entry


def _scenes(case: Case, eye: Eye, lens: Lens, prism: Prism) -> Entry:
    job, due_ = case.job, case.dues[eye]
    setting = job.readings.of(eye).compensator
    view = DialView(
        due=due_,
        instrument=job.instrument,
        read=prism,
        sightings=(prism,),
        compensator=taken_by_compensator(setting, job.instrument.compensator),
        region=region_of(case.matter, eye) if case.matter else None,
        uncertainty=reading_uncertainty(case, eye),
        axis_deg=_axis_deg(due_, lens),
    )
    return {"dial": dial_scene(view), "close": close_scene(view)}


def _axis_deg(due_: Due, lens: Lens) -> float:
    """The axis as the target would show it: that of the power's form as ordered."""
    if due_.power is None or not due_.power.cylinder:
        return 180.0
    sign = math.copysign(1.0, due_.power.cylinder)
    twice = math.degrees(math.atan2(-lens.j45 * sign, lens.j0 * sign))
    return round(twice / 2.0, 6) % 180.0 or 180.0
