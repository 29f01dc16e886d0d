"""An outside reference for the bench's arithmetic, by another route than the core's and sharing no code with it.

Prism vectors are complex numbers (real: to the observer's right, imaginary: up), powers are numpy 2×2
matrices made by turning a diagonal matrix, exact rules are fractions. Everything works on one value or on
an array of them.

Sources: ISO 8429:1986 (seen from the front, 0 at the observer's right, counter-clockwise, the same for both
eyes); vector addition of thin prisms; the power matrix of "A matrix formalism for decentration problems",
AJOPO 1976;53:27-33; the technical brief "Understanding Prism-Thinning", 1998.
"""

from __future__ import annotations

import cmath
import math
from decimal import ROUND_HALF_EVEN, Context, Decimal
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

Complexes = NDArray[np.complex128]
Floats = NDArray[np.float64]

# ISO 8429:1986, as in the flashcards "360-degree laboratory reference system" (row WE08).
BASE_OF_WORD = {
    ("right", "in"): 0,
    ("right", "out"): 180,
    ("left", "in"): 180,
    ("left", "out"): 0,
    ("right", "up"): 90,
    ("left", "up"): 90,
    ("right", "down"): 270,
    ("left", "down"): 270,
}
EYES = ("right", "left")


# --- prism vectors ----------------------------------------------------------------------------------------------------


def vector(amount: Any, base_deg: Any) -> Any:
    """Prism vector(s) in prism dioptres from amount(s) and base(s) in degrees, 0 to 360."""
    return np.asarray(amount) * np.exp(1j * np.deg2rad(np.asarray(base_deg, dtype=np.float64)))


def vector_of_word(eye: str, amount: float, word: str) -> complex:
    """One prism with its base in words, in prism dioptres; exact."""
    return {0: 1, 90: 1j, 180: -1, 270: -1j}[BASE_OF_WORD[eye, word]] * complex(amount)


def vector_of_180(eye: str, amount: float, degrees: float, side: str) -> complex:
    """One prism in the 180 notation: the word tells which end of the meridian the base is (course OPH 142)."""
    if side in ("in", "out"):
        return vector_of_word(eye, amount, side)
    return complex(vector(amount, degrees if side == "up" else degrees + 180))


def base_of(prism: complex) -> float:
    """Base in degrees, 0 (included) to 360; meaningless for a prism of 0."""
    return math.degrees(cmath.phase(prism)) % 360


def turn_between(first_deg: float, second_deg: float) -> float:
    """How far two directions lie apart, in degrees."""
    return abs((first_deg - second_deg + 180) % 360 - 180)


def horizontal_word(eye: str, x: float) -> str | None:
    """In, out, or None for neither (the table of ISO 8429 above)."""
    return None if x == 0 else {(True, True): "in", (False, False): "in"}.get((eye == "right", x > 0), "out")


def vertical_word(y: float) -> str | None:
    """Up, down, or None for neither."""
    return None if y == 0 else ("up" if y > 0 else "down")


def quadrant(eye: str, prism: complex, nothing: float = 5e-10) -> str:
    """The quadrant's name; components below `nothing` prism dioptres count as 0."""
    x, y = (0 if abs(part) < nothing else part for part in (prism.real, prism.imag))
    return "-".join(word for word in (vertical_word(y), horizontal_word(eye, x)) if word) or "none"


def pair_difference(right: complex, left: complex) -> tuple[float, float]:
    """Vertical (+ = right base up relative to the left) and horizontal (+ = base in) of the pair, prism dioptres.

    Like vertical bases subtract, like horizontal bases add: ISO 4007:2018 3.7.18. In words, not as a difference.
    """
    up = {eye: prism.imag for eye, prism in zip(EYES, (right, left), strict=True)}
    inward = {"right": right.real, "left": -left.real}
    return up["right"] - up["left"], inward["right"] + inward["left"]


# --- thinning ---------------------------------------------------------------------------------------------------------

THINNING_SHARE = {"two-thirds": Fraction(2, 3), "six-tenths": Fraction(6, 10), "none": Fraction(0)}


def thinning_amount(rule: str, right_add: str, left_add: str) -> Decimal:
    """Base-down thinning of both lenses, prism dioptres, to 0.01: 2/3 or 0.6 of the smaller add.

    Shares: the brief of 1998, also a lab training note of 2016 (row WE54). The smaller add, and rounding to
    0.01 half-even before use: common practice.
    """
    exact = THINNING_SHARE[rule] * min(Fraction(right_add), Fraction(left_add))
    hundredths = Context(prec=30).divide(Decimal(exact.numerator * 100), Decimal(exact.denominator))
    return hundredths.to_integral_value(ROUND_HALF_EVEN) / 100


# --- powers -----------------------------------------------------------------------------------------------------------


def power_matrix(sphere: Any, cylinder: Any, axis_deg: Any) -> Floats:
    """Power matrix (or matrices, first index) in dioptres: diag(S, S + C), along and across the axis, turned by it."""
    sphere, cylinder, axis_deg = np.broadcast_arrays(
        *(np.asarray(value, dtype=np.float64) for value in (sphere, cylinder, axis_deg))
    )
    along = np.exp(1j * np.deg2rad(axis_deg))
    turn = np.stack([np.stack([along.real, -along.imag], -1), np.stack([along.imag, along.real], -1)], -2)
    upright = np.zeros((*sphere.shape, 2, 2))
    upright[..., 0, 0], upright[..., 1, 1] = sphere, sphere + cylinder
    turned: Floats = turn @ upright @ np.swapaxes(turn, -1, -2)
    return turned


def along(matrix: Floats, meridian_deg: float) -> Any:
    """The power along a meridian, dioptres: the quadratic form m·F·m."""
    direction = np.exp(1j * np.deg2rad(meridian_deg))
    unit = np.array([direction.real, direction.imag])
    return np.einsum("i,...ij,j->...", unit, matrix, unit)


def spherocylinder(matrix: Floats, sign: int) -> tuple[Any, Any, Any]:
    """Sphere, cylinder and axis (0 to 180) in the plus (+1) or minus (-1) form, by the eigenvectors."""
    values, vectors = np.linalg.eigh(matrix)
    first = 0 if sign > 0 else 1  # the axis lies along the weaker principal meridian in the plus form
    axis = np.rad2deg(np.arctan2(vectors[..., 1, first], vectors[..., 0, first])) % 180
    return values[..., first], values[..., 1 - first] - values[..., first], axis


def prism_at(start: Any, matrix: Floats, offset_mm: Any) -> Any:
    """Prism(s) away from where the lens shows `start`: p0 - F r; offsets as complex mm, to the right and up."""
    offset_cm = np.asarray(offset_mm) / 10
    pulled = np.einsum("...ij,...j->...i", matrix, np.stack([offset_cm.real, offset_cm.imag], -1))
    return start - (pulled[..., 0] + 1j * pulled[..., 1])


def optical_centre_mm(prism: Any, matrix: Floats) -> Any:
    """Where the optical centre lies seen from the point showing `prism`: F⁻¹ p, as complex mm. Singular F raises."""
    prism = np.asarray(prism)
    solved = np.linalg.solve(matrix, np.stack([prism.real, prism.imag], -1)[..., None])[..., 0] * 10
    return solved[..., 0] + 1j * solved[..., 1]


# --- the prism compensator --------------------------------------------------------------------------------------------


def read_through_compensator(seen: complex, scale: complex, sense: str) -> complex:
    """The lens's prism from what the target shows and what stands on the scale (facts of the trade, from memory).

    `lens-prism`: the scale reads the lens's prism at null, lens = scale + seen.
    `own-base`: the scale reads the compensator's own base, lens = seen - scale.
    """
    return seen + {"lens-prism": scale, "own-base": -scale}[sense]


def setting_to_centre(expected: complex, sense: str, maximum: float) -> tuple[complex, complex]:
    """What must stand on the scale for the target to come to the centre, and what is then still seen.

    Nothing is left unless the compensator ends at `maximum` prism dioptres; then it goes as far as it can.
    """
    amount = abs(expected)
    taken = expected if amount <= maximum else expected / amount * maximum
    return {"lens-prism": taken, "own-base": -taken}[sense], expected - taken


def setting_onto_rings(expected: complex, rings: float, sense: str, maximum: float) -> tuple[complex, complex] | None:
    """The smallest setting that brings the target back to the outermost ring, and what is then seen (row WE84)."""
    amount = abs(expected)
    if amount <= rings:
        return None
    setting, left = setting_to_centre(expected / amount * (amount - rings), sense, maximum)
    return setting, expected / amount * rings + left
