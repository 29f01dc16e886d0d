"""Further looks at a lens, beside its readings, and what they showed, as written down."""

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import chain

from pycore.job.fields import Fields
from pycore.optics.prism import EYES, Eye

MAXIMUM_LOOKS = 20
LOOKS: Mapping[str, tuple[str, ...]] = {
    "reread-upright": ("same-again", "as-due", "other"),
    "lens-out": ("centred", "off-centre"),
    "half-turn": ("turned-over", "not-turned-over"),
    "mark-afresh": ("as-due", "as-due-elsewhere", "same-again", "other"),
    "measure-place": ("as-ordered", "off"),
    "order-slip": ("agrees", "eyes-exchanged", "base-differs", "other-differs"),
    "engraving": ("right-way", "exchanged", "none-found"),
    "read-axis": ("as-due", "mirrored", "crossed", "other"),
    "edge-thickness": ("as-ordered", "opposite", "neither"),
    "other-side": ("back-first", "front-first"),
    "meter-key": ("right", "wrong"),
    "compensator-scale": ("as-entered", "opposite"),
}
OF_THE_PAIR = ("lens-out", "order-slip", "engraving", "meter-key", "compensator-scale")


@dataclass(frozen=True, slots=True)
class Look:
    """One further look: `look` its code, `eye` the lens (None for the bench or the pair),
    `result` what it showed."""

    look: str
    eye: Eye | None
    result: str


def read_looks(fields: Fields) -> tuple[Look, ...]:
    """Read the looks of a job. Arguments: `fields` of the job. Returns them in their order."""
    looks = []
    for item in fields.children("looks", MAXIMUM_LOOKS):
        code = item.word("look", tuple(LOOKS))
        allowed = LOOKS.get(code or "") or tuple(dict.fromkeys(chain(*LOOKS.values())))
        result, eye = item.word("result", allowed), item.word("eye", EYES)
        for name, choices in (("look", tuple(LOOKS)), ("result", allowed)):
            if not item.has(name):
                item.refuse("choice-missing", name, "", "choose-one", allowed=", ".join(choices))
        item.finish()
        if code and result:
            looks.append(Look(code, _eye(eye), result))
    return tuple(looks)


def _eye(word: str | None) -> Eye | None:
    return next((eye for eye in EYES if eye == word), None)
