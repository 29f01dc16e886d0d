"""What should have been read and was not, and what this bench does not check at all?"""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from decimal import Decimal

from pycore.bench.matter import PAIR, Check, Matter
from pycore.bench.verdict_position import open_row, position_row
from pycore.bench.verdict_prism import (
    COMPONENTS,
    judged_as_vector,
    lens_row,
    lens_vertical_is_known,
    pair_decides_vertical,
    pair_row,
)
from pycore.optics.prism import Eye

# What no reading on a lens meter shows; always named beside a verdict (common practice).
NEVER_CHECKED = ("base-curve", "thickness", "impact", "material", "surface", "segment", "fit")
# Alternatives that must have been measured before a group can pass, by the option's value.
MILLIMETRES_NEEDED = ("both", "replace")


@dataclass(frozen=True, slots=True, kw_only=True)
class Missing:
    """Something not checked: `code`, with the check and the eye it is about where it is one.

    Only `to-be-read` keeps the verdict open; the others are listed beside it.
    """

    code: str
    check: str = ""
    eye: str = ""


def missing_of(matter: Matter, checks: Sequence[Check]) -> tuple[Missing, ...]:
    """Everything that was not checked. Arguments: `matter`; `checks` that were made."""
    made = {(check.id, check.eye, check.component) for check in checks if check.counts}
    return (
        *_prism(matter, made),
        *_millimetres(matter, made),
        *_power(matter, {(id_, eye) for id_, eye, _ in made}),
        *(Missing(code=code) for code in NEVER_CHECKED),
    )


Made = set[tuple[str, str, str | None]]


def _prism(matter: Matter, made: Made) -> Iterator[Missing]:
    for component in COMPONENTS:
        if not _pair_decides(matter, component):
            continue
        check = f"prism.{component}"
        if (check, PAIR, component) in made or _replaced(matter, component):
            continue
        code = "to-be-read" if pair_row(matter, component) else "no-limit"
        yield Missing(code=code, check=check, eye=PAIR)
    if matter.job.state == "mounted":
        return
    for eye in matter.own_eyes:
        if judged_as_vector(matter, eye):
            wanted: tuple[str | None, ...] = (None,)
        else:
            known = lens_vertical_is_known(matter, eye)
            wanted = ("horizontal", "vertical") if known else ("horizontal",)
        for part in wanted:
            if ("prism.lens", eye, part) not in made and not _position_decides(matter, eye):
                code = "to-be-read" if lens_row(matter, eye, part or "vertical") else "no-limit"
                yield Missing(code=code, check="prism.lens", eye=eye)


def _pair_decides(matter: Matter, component: str) -> bool:
    """Tell whether the pair's limit decides: always when mounted, else only for a vertical
    that no single lens can be judged by."""
    if matter.job.state == "mounted":
        return True
    return component == "vertical" and pair_decides_vertical(matter)


def _replaced(matter: Matter, component: str) -> bool:
    return matter.option("prism-alternatives") == "replace" and bool(open_row(matter, component))


def _position_decides(matter: Matter, eye: Eye) -> bool:
    return matter.option("prism-alternatives") == "replace" and bool(position_row(matter, eye))


def _millimetres(matter: Matter, made: Made) -> Iterator[Missing]:
    """Where the option chosen asks for millimetres as well, they must have been measured."""
    if matter.option("prism-alternatives") not in MILLIMETRES_NEEDED:
        return
    for component, check in (("vertical", "prp.height"), ("horizontal", "prp.distance")):
        opened = matter.job.state == "mounted" and open_row(matter, component)
        if opened and (check, PAIR, None) not in made:
            yield Missing(code="to-be-read", check=check, eye=PAIR)
    for eye in matter.own_eyes:
        if position_row(matter, eye) and ("prp.position", eye, None) not in made:
            yield Missing(code="to-be-read", check="prp.position", eye=eye)


def _power(matter: Matter, made: set[tuple[str, str]]) -> Iterator[Missing]:
    for eye in matter.own_eyes:
        due = matter.dues[eye]
        if due.power is None:
            continue
        sizes = {
            "power": due.power.strongest,
            "cylinder": abs(due.power.cylinder),
            "add": due.add or Decimal(0),
        }
        wanted = ["power", "cylinder"]
        wanted += ["axis"] * bool(due.power.cylinder) + ["add"] * bool(due.add)
        for check in wanted:
            if matter.row(check, sizes, eye=eye) is None:
                yield Missing(code="no-limit", check=check, eye=eye)
            elif (check, eye) not in made:
                yield Missing(code="not-read", check=check, eye=eye)
