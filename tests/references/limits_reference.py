"""Each edition's limits, written from the sources again: not from the project's edition files.

Everything is a Decimal: dioptres, prism dioptres, degrees, millimetres. `None`: the edition sets no limit.
Keys of the sources stand in README.md beside this file; [M] marks figures known from memory only.

Between two printed ranges that leave a gap (0.25 and 0.375, 6.00 and 6.25) the stricter neighbour holds:
common practice.
"""

from __future__ import annotations

from decimal import Decimal

D = Decimal

ANSI = ("ansi-z80.1-2010", "ansi-z80.1-2015", "ansi-z80.1-2020")
ANSI_SWITCH_VERTICAL = D("3.375")  # S1 S2 S3 (printed 3.37 in places)
ANSI_SWITCH_HORIZONTAL = D("2.75")  # S1 S2 S3 S4
ANSI_SWITCH_LENS = D("3.375")  # S1 S2 S3
ANSI_SWITCH_PROGRESSIVE_HORIZONTAL = {"3.75": D("3.75"), "3.375": D("3.375")}  # S4 prints 3.75 (1999); 3.375 [M]
ISO_21987_SWITCH = {"horizontal": D("3.25"), "vertical": D("5.00")}  # [M]


# --- ANSI Z80.1: 2010 and 2015 printed (S1 S2 S3), 2020 assumed unchanged [M] ------------------------------------------


def ansi_power(strongest: D, design: str) -> D:
    """Power along the meridian of highest absolute power. S1 S2 S3."""
    switch, low = (D("8.00"), D("0.16")) if design == "progressive" else (D("6.50"), D("0.13"))
    return low if abs(strongest) <= switch else abs(strongest) * 2 / 100


def ansi_cylinder(cylinder: D, design: str) -> D:
    """Cylinder. S1 S2 S3; progressive 0.16 since 2005, S5."""
    size = abs(cylinder)
    if design == "progressive":
        return D("0.16") if size <= 2 else D("0.18") if size <= D("3.5") else size * 5 / 100
    return D("0.13") if size <= 2 else D("0.15") if size <= D("4.5") else size * 4 / 100


def ansi_axis(cylinder: D) -> D | None:
    """Axis, by cylinder; not defined below 0.12. S1 S2."""
    size = abs(cylinder)
    if size < D("0.12"):
        return None
    return next((D(limit) for top, limit in (("0.25", 14), ("0.50", 7), ("0.75", 5), ("1.50", 3)) if size <= D(top)), D(2))


def add_in_two_steps(add: D) -> D:
    """Add: ANSI S1 S2 S3 S4, and ISO 8980-2 [M]."""
    return D("0.12") if add <= 4 else D("0.18")


ANSI_LENS_PRISM = D("0.33")  # vector error at the prism reference point, uncut or unmounted. S1 S2 S3
ANSI_LENS_MM = D("1.0")  # any direction, above 3.375 D. S1 S2 S3
ANSI_PAIR = {"vertical": D("0.33"), "horizontal": D("0.67")}  # all designs. S1 S2 S3 S4; progressive after 1999 [M]
ANSI_PAIR_MM = {"vertical": D("1.0"), "horizontal": D("2.5")}  # single vision and multifocal. S1 S2 S3 S4
ANSI_PROGRESSIVE_MM = D("1.0")  # each reference point. S4; 2010-2020 [M]
ANSI_EACH_LENS_HORIZONTAL = D("0.33")  # the method of 8.5.2 moves each lens until 1/3 prism dioptre shows. S6


# --- ISO 21987, mounted ------------------------------------------------------------------------------------------------


def iso_21987_prism(direction: str, component: D, power: D) -> D:
    """Imbalance of the pair, by the prescribed component and the larger power of the pair. [M], S14.

    Up to the switch a fixed figure; above it what 2.0 mm (horizontal) or 1.0 mm (vertical) of displacement make.
    """
    row = 0 if component <= 2 else 1 if component <= 10 else 2
    low, beyond, per_dioptre = {
        "horizontal": (("0.67", "1.00", "1.25"), ("0", "0.33", "0.58"), "0.2"),
        "vertical": (("0.50", "0.75", "1.00"), ("0", "0.25", "0.50"), "0.1"),
    }[direction]
    if abs(power) <= ISO_21987_SWITCH[direction]:
        return D(low[row])
    return D(beyond[row]) + D(per_dioptre) * abs(power)


def iso_21987_axis(cylinder: D) -> D | None:
    """Axis, by cylinder, as EN ISO 21987 is practised. S8."""
    size = abs(cylinder)
    if size < D("0.125"):
        return None
    steps = (("0.25", 16), ("0.50", 9), ("0.75", 6), ("1.50", 4), ("2.50", 3))
    return next((D(limit) for top, limit in steps if size <= D(top)), D(2))


# --- ISO 8980-1 and -2, uncut [M] --------------------------------------------------------------------------------------

_POWER_STEPS = ("3", "6", "9", "12", "20")
_CYLINDER_STEPS = ("0.75", "4", "6")
_SINGLE = {  # power, then cylinder up to 0.75, 4.00, 6.00 and above
    "3": ("0.12", "0.09", "0.12", "0.18", "0.25"),
    "6": ("0.12", "0.12", "0.12", "0.18", "0.25"),
    "9": ("0.12", "0.12", "0.18", "0.18", "0.25"),
    "12": ("0.18", "0.12", "0.18", "0.25", "0.25"),
    "20": ("0.25", "0.18", "0.25", "0.25", "0.25"),
    "more": ("0.37", "0.25", "0.25", "0.37", "0.37"),
}
_VARYING = {
    "3": ("0.12", "0.12", "0.18", "0.18", "0.25"),
    "6": ("0.12", "0.12", "0.18", "0.18", "0.25"),
    "9": ("0.18", "0.18", "0.18", "0.18", "0.25"),
    "12": ("0.18", "0.18", "0.18", "0.25", "0.25"),
    "20": ("0.25", "0.18", "0.25", "0.25", "0.25"),
    "more": ("0.37", "0.25", "0.25", "0.37", "0.37"),
}


def _step(value: D, tops: tuple[str, ...]) -> str:
    return next((top for top in tops if abs(value) <= D(top)), "more")


def iso_8980_power(strongest: D, design: str) -> D:
    """Each principal meridian, by the largest principal power. [M]"""
    table = _VARYING if design == "progressive" else _SINGLE
    return D(table[_step(strongest, _POWER_STEPS)][0])


def iso_8980_cylinder(strongest: D, cylinder: D, design: str) -> D:
    """Cylinder, by the largest principal power and the cylinder. [M]; plano and low cylinder 0.09: S14's sister GB 10810.1."""
    table = _VARYING if design == "progressive" else _SINGLE
    column = [*_CYLINDER_STEPS, "more"].index(_step(cylinder, _CYLINDER_STEPS))
    return D(table[_step(strongest, _POWER_STEPS)][1 + column])


def iso_8980_axis(cylinder: D) -> D:
    """Axis of an uncut lens, 2004. [M]"""
    return next((D(limit) for top, limit in (("0.50", 7), ("0.75", 5), ("1.50", 3)) if abs(cylinder) <= D(top)), D(2))


def iso_8980_prism(direction: str, component: D, strongest: D) -> D:
    """Prism at the design or prism reference point, by the ordered component and the largest principal power. [M]"""
    fixed = D("0.25") if component <= 2 else D("0.37") if component <= 10 else D("0.50")
    return fixed + {"horizontal": D("0.1"), "vertical": D("0.05")}[direction] * abs(strongest)


# --- N.J. Admin. Code 13:35-5.2 (S7) -----------------------------------------------------------------------------------

NJ_PAIR = D("0.50")  # total, vertical and horizontal
NJ_LENS = D("0.25")  # per lens, vertical and horizontal


def nj_power(strongest: D) -> D:
    """Power: 0-6 ±0.12, 6.25-12 2 %, above 12 ±0.25. S7"""
    size = abs(strongest)
    return D("0.12") if size < D("6.25") else size * 2 / 100 if size <= 12 else D("0.25")


def nj_axis(cylinder: D) -> D | None:
    """Axis: 0.12-0.37 ±3°, 0.50-1.00 ±2°, 1.12 and above ±1°. S7"""
    size = abs(cylinder)
    if size < D("0.12"):
        return None
    return D(3) if size <= D("0.37") else D(2) if size <= 1 else D(1)


# --- by the edition's name ---------------------------------------------------------------------------------------------


def power_limit(edition: str, strongest: D, design: str) -> D | None:
    """Limit of the power along the strongest meridian."""
    if edition in ANSI:
        return ansi_power(strongest, design)
    if edition.startswith("iso-8980"):
        return iso_8980_power(strongest, design)
    return nj_power(strongest) if edition.startswith("nj") else None


def cylinder_limit(edition: str, strongest: D, cylinder: D, design: str) -> D | None:
    """Limit of the cylinder."""
    if edition in ANSI:
        return ansi_cylinder(cylinder, design)
    return iso_8980_cylinder(strongest, cylinder, design) if edition.startswith("iso-8980") else None


def axis_limit(edition: str, cylinder: D) -> D | None:
    """Limit of the axis."""
    if edition in ANSI:
        return ansi_axis(cylinder)
    if edition == "iso-21987":
        return iso_21987_axis(cylinder)
    return iso_8980_axis(cylinder) if edition.startswith("iso-8980") else nj_axis(cylinder)


def add_limit(edition: str, add: D) -> D | None:
    """Limit of the add."""
    return add_in_two_steps(add) if edition in (*ANSI, "iso-8980-2") else None


def pair_limit(edition: str, direction: str, component: D, power: D) -> D | None:
    """Limit of a mounted pair's prism, vertical or horizontal."""
    if edition in ANSI:
        return ANSI_PAIR[direction]
    if edition == "iso-21987":
        return iso_21987_prism(direction, component, power)
    return NJ_PAIR if edition.startswith("nj") else None


def lens_limit(edition: str, direction: str, component: D, strongest: D) -> D | None:
    """Limit of a single uncut lens's prism in one direction (ANSI: of the vector error)."""
    if edition in ANSI:
        return ANSI_LENS_PRISM
    if edition.startswith("iso-8980"):
        return iso_8980_prism(direction, component, strongest)
    return NJ_LENS if edition.startswith("nj") else None
