"""What each cause does to a lens: from the lens as due to the lens as made, held and read.

Every effect takes the lens, its site and the cause's row of the table, and answers with the
variants it may take, each with its weight; with none where the cause cannot happen here. What
physically each cause is stands in `cause_table.json` beside its prior.
"""

import math
from collections.abc import Callable, Iterator, Mapping
from functools import lru_cache

from pycore.angles import cosine, sine
from pycore.bench.cause_lens import Lens, Site
from pycore.bench.cause_seen import PowerParts, Vector
from pycore.bench.cause_table import Cause

Variants = list[tuple[float, Lens]]
Effect = Callable[[Lens, Site, Cause], Variants]
NEAR = 0.05  # prism dioptres: thinnings closer than this are not told apart


def _even(lenses: list[Lens]) -> Variants:
    return [(1.0 / len(lenses), lens) for lens in lenses]


def _with_prism(lens: Lens, px: float, py: float) -> Lens:
    return lens._replace(px=px, py=py)


def _reversed(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    return [(1.0, _with_prism(lens, -lens.px, -lens.py))]


def _mirrored(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    return [(1.0, _with_prism(lens, -lens.px, lens.py))]


def _flipped(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    return [(1.0, _with_prism(lens, lens.px, -lens.py))]


def _exchanged(lens: Lens, _site: Site, cause: Cause) -> Variants:
    if not lens.px or not lens.py:
        return []
    across, along = math.copysign(lens.py, lens.px), math.copysign(lens.px, lens.py)
    signed = cause.of("as_signed_numbers")
    return [
        (1.0 - signed, _with_prism(lens, across, along)),
        (signed, _with_prism(lens, lens.py, lens.px)),
    ]


def _added(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    amount = math.hypot(lens.px, lens.py)
    if not amount:
        return []
    factor = (abs(lens.px) + abs(lens.py)) / amount
    return [(1.0, _with_prism(lens, lens.px * factor, lens.py * factor))]


def _one_missing(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    if not lens.px or not lens.py:
        return []
    return _even([_with_prism(lens, lens.px, 0.0), _with_prism(lens, 0.0, lens.py)])


def _scaled(factor: float) -> Effect:
    def effect(lens: Lens, _site: Site, _cause: Cause) -> Variants:
        return [(1.0, _with_prism(lens, lens.px * factor, lens.py * factor))]

    return effect


def _angle_not_carried(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    signs = ((-1.0, 1.0), (-1.0, -1.0), (1.0, -1.0))
    return _even([_with_prism(lens, lens.px * x, lens.py * y) for x, y in signs])


def _wearers_view(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    return [(1.0, lens._replace(px=-lens.px, j45=-lens.j45))]


def _key_wrong(lens: Lens, site: Site, _cause: Cause) -> Variants:
    return [(1.0, lens._replace(sx=lens.sx - 2.0 * lens.px))] if site.automatic else []


def _from_front(lens: Lens, site: Site, cause: Cause) -> Variants:
    change, spread = site.front_power, 0.0
    if change is None:
        change, spread = 0.0, cause.of("usual_power_d")
    front = lens._replace(
        sx=-lens.sx - 2.0 * lens.px,
        j45=-lens.j45,
        mean=lens.mean + change,
        power_spread=spread,
        lying=lens.lies_with,
    )
    return [(1.0, front)]


def _thinned(factor: float) -> Effect:
    def effect(lens: Lens, _site: Site, _cause: Cause) -> Variants:
        return [] if lens.t_spread else [(1.0, lens._replace(t=lens.t * factor))]

    return effect


def _other_rule(lens: Lens, site: Site, _cause: Cause) -> Variants:
    if lens.t_spread or site.partnered:
        return []
    return _by_rules(lens, site.rules)


def _old_partner(lens: Lens, site: Site, _cause: Cause) -> Variants:
    if lens.t_spread or not site.partnered:
        return []
    return _by_rules(lens, (0.0, *site.rules))


def _by_rules(lens: Lens, rules: tuple[float, ...]) -> Variants:
    others = [lens._replace(t=t) for t in rules if abs(t - lens.t) > NEAR]
    return _even(others) if others else []


def _transposition(lens: Lens, site: Site, _cause: Cause) -> Variants:
    """One of three steps forgotten: the sphere, the sign, or the turn of the axis."""
    if not site.cylinder:
        return []
    turned = lens._replace(j0=-lens.j0, j45=-lens.j45)
    sphere_kept = lens._replace(mean=lens.mean - site.cylinder)
    sign_kept = turned._replace(mean=lens.mean + site.cylinder)
    return _even([sphere_kept, sign_kept, turned])


def _cylinder_sign(lens: Lens, site: Site, _cause: Cause) -> Variants:
    if not site.cylinder:
        return []
    return [(1.0, lens._replace(mean=lens.mean - site.cylinder, j0=-lens.j0, j45=-lens.j45))]


def _displaced(lens: Lens, _site: Site, cause: Cause) -> Variants:
    spread = cause.of("spread_mm")
    return _shifted(lens, lens.moved(spread, 0.0), lens.moved(0.0, spread))


def _pd_wrong(lens: Lens, _site: Site, cause: Cause) -> Variants:
    return _shifted(lens, lens.moved(cause.of("spread_mm"), 0.0))


def _height_wrong(lens: Lens, _site: Site, cause: Cause) -> Variants:
    return _shifted(lens, lens.moved(0.0, cause.of("spread_mm")))


def _shifted(lens: Lens, *columns: Vector) -> Variants:
    if not lens.has_power:
        return []
    return [(1.0, lens._replace(shifts=lens.shifts + columns))]


def _rotated(lens: Lens, _site: Site, cause: Cause) -> Variants:
    return [(weight, turned(lens, *turn)) for weight, turn in turns(cause.of("turn_deg"))]


def turns(spread_deg: float) -> Iterator[tuple[float, tuple[float, float]]]:
    """A normally spread turn as three narrower ones: weight, then middle and spread in degrees.

    Each is narrow enough to be taken as straight. With a sixth of the weight at each outer one,
    sqrt(3 v) away, the moments up to the fifth are those of the whole for any share v of the
    variance that the middles take; here 4/9.
    """
    middle_deg, narrow_deg = spread_deg * math.sqrt(4.0 / 3.0), spread_deg * math.sqrt(5.0) / 3.0
    for side, weight in ((-1.0, 1.0 / 6.0), (0.0, 2.0 / 3.0), (1.0, 1.0 / 6.0)):
        yield weight, (side * middle_deg, narrow_deg)


@lru_cache(maxsize=64)
def _direction(angle_deg: float) -> Vector:
    return cosine(angle_deg), sine(angle_deg)


def turned(lens: Lens, angle_deg: float, spread_deg: float) -> Lens:
    """The lens turned counter-clockwise, prism and axis alike. Angles in degrees."""
    once_x, once_y = _direction(angle_deg)
    x, y = lens.prism
    _, j0, j45 = _power_turned(lens[4:7], angle_deg)
    return lens._replace(
        px=x * once_x - y * once_y,
        py=x * once_y + y * once_x - lens.t,
        j0=j0,
        j45=j45,
        turned_deg=lens.turned_deg + angle_deg,
        turn_rad=math.hypot(lens.turn_rad, math.radians(spread_deg)),
        lying=lens.lying and _power_turned(lens.lying, angle_deg),
    )


def _power_turned(power: PowerParts, angle_deg: float) -> PowerParts:
    (mean, j0, j45), (x, y) = power, _direction(2.0 * angle_deg)
    return mean, j0 * x + j45 * y, j45 * x - j0 * y


def _read_at(lens: Lens, right_mm: float, up_mm: float, *spread_mm: Vector) -> Lens:
    """The lens read at another point, mm from the ordered one; p(r) = p0 - F r."""
    x, y = lens.moved(-right_mm, -up_mm)
    columns = tuple(lens.moved(-across, -along) for across, along in spread_mm)
    return lens._replace(sx=lens.sx + x, sy=lens.sy + y, slips=lens.slips + columns)


def _around(spread_mm: float) -> tuple[Vector, Vector]:
    return (spread_mm, 0.0), (0.0, spread_mm)


def _at_cross(lens: Lens, site: Site, cause: Cause) -> Variants:
    if site.design != "progressive" or not lens.has_power:
        return []
    up_mm, spread_mm = site.cross_mm, cause.of("spread_mm")
    across, along = _around(spread_mm)
    if up_mm is None:  # the chart is not at hand: usual values, common practice
        up_mm = cause.of("usual_up_mm")
        along = (0.0, math.hypot(spread_mm, cause.of("usual_spread_mm")))
    return [(1.0, _read_at(lens, 0.0, up_mm, across, along))]


def _at_optical_centre(lens: Lens, site: Site, cause: Cause) -> Variants:
    return [] if site.design == "progressive" else _target_centred(lens, site, cause)


def _target_centred(lens: Lens, _site: Site, cause: Cause) -> Variants:
    if not lens.has_power or lens.prism == (0.0, 0.0):
        return []
    reach_mm, (x, y) = cause.of("reach_mm"), lens.prism
    determinant = lens.mean**2 - lens.j0**2 - lens.j45**2
    right_mm = 10.0 * ((lens.mean + lens.j0) * x - lens.j45 * y)  # times the determinant, so that
    up_mm = 10.0 * ((lens.mean - lens.j0) * y - lens.j45 * x)  # plano lenses need no division
    if math.hypot(right_mm, up_mm) >= reach_mm * abs(determinant):
        return []
    columns = tuple(lens.moved(*each) for each in _around(cause.of("spread_mm")))
    return [(1.0, lens._replace(sx=-x, sy=-y, slips=columns))]


def _at_boxing_centre(lens: Lens, site: Site, cause: Cause) -> Variants:
    if not site.boxing or not any(site.boxing) or not lens.has_power:
        return []
    return [(1.0, _read_at(lens, *site.boxing, *_around(cause.of("spread_mm"))))]


def _at_segment(lens: Lens, site: Site, cause: Cause) -> Variants:
    if site.segment is None or not lens.has_power:
        return []
    point, own = site.segment
    read = _read_at(lens, *point)
    through = lens._replace(mean=lens.mean + lens.add)  # the segment's power moves the prism there
    spread = [through.moved(*each) for each in _around(cause.of("spread_mm"))]
    slips = (*lens.slips, *spread)
    return [(1.0, read._replace(sx=read.sx + own[0], sy=read.sy + own[1], slips=slips))]


def _elsewhere(lens: Lens, _site: Site, cause: Cause) -> Variants:
    if not lens.has_power:
        return []
    return [(1.0, _read_at(lens, 0.0, 0.0, *_around(cause.of("spread_mm"))))]


def _table_moved(lens: Lens, site: Site, cause: Cause) -> Variants:
    if not site.second or not lens.has_power:
        return []
    return [(1.0, _read_at(lens, 0.0, 0.0, (0.0, cause.of("spread_mm"))))]


def _none_of_these(lens: Lens, _site: Site, _cause: Cause) -> Variants:
    return [(1.0, lens._replace(broad=True))]


EFFECTS: Mapping[str, Effect] = {
    "read-at-fitting-cross": _at_cross,
    "read-at-optical-centre": _at_optical_centre,
    "read-at-boxing-centre": _at_boxing_centre,
    "read-at-segment": _at_segment,
    "read-elsewhere": _elsewhere,
    "table-moved": _table_moved,
    "target-centred": _target_centred,
    "read-from-front": _from_front,
    "meter-key-wrong": _key_wrong,
    "lens-displaced": _displaced,
    "layout-pd-wrong": _pd_wrong,
    "layout-height-wrong": _height_wrong,
    "lens-rotated": _rotated,
    "base-reversed": _reversed,
    "base-mirrored": _mirrored,
    "base-flipped": _flipped,
    "amounts-exchanged": _exchanged,
    "added-arithmetically": _added,
    "component-missing": _one_missing,
    "prism-missing": _scaled(0.0),
    "prism-doubled": _scaled(2.0),
    "split-twice": _scaled(0.5),
    "thinning-missing": _thinned(0.0),
    "thinning-doubled": _thinned(2.0),
    "thinning-base-up": _thinned(-1.0),
    "thinning-one-lens": _thinned(0.0),
    "thinning-other-rule": _other_rule,
    "thinning-of-old-partner": _old_partner,
    "cylinder-transposition": _transposition,
    "cylinder-sign": _cylinder_sign,
    "angle-not-carried": _angle_not_carried,
    "wearers-view-angle": _wearers_view,
    "side-word-wrong": _reversed,
    "none-of-these": _none_of_these,
}
