"""What a lens shows on the lens meter after something went wrong with it: physics in numpy, many hypotheses at once.

A `Lenses` value is one lens under N hypotheses (first index). What is free (a displacement, a zero error) enters as
loadings on latent values with independent normal priors: four that both lenses may have in common (the zero's x and y, a
layout error, the thinning where it is not known), three of the lens's own fault (two lengths, a power), and three of a
second fault that it has beside it. Prism in Δ seen from the
front, x right, y up; powers in D; lengths in mm.

Sources: p(r) = p0 − F r ("A matrix formalism for decentration problems", AJOPO 1976;53:27-33); a turn changes F to R F Rᵀ;
signatures of wrong readings: shop practice, as vectors in ISO 8429:1986.
"""

from __future__ import annotations

from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
ZERO, LAYOUT, THINNING, OWN, POWER = slice(0, 2), 2, 3, slice(4, 6), 6
COMMON, LATENTS = 4, 10
OWN_LATENTS = LATENTS - COMMON
SECOND = np.array([0, 1, 2, 3, 7, 8, 9, 4, 5, 6])  # the latents with those of the own and of the second fault exchanged
PRISM, MEAN, CYLINDER, ADD, PLACE = slice(0, 2), 2, slice(3, 5), 5, slice(6, 8)
MEASURED = 8  # prism x and y, mean power, both parts of the cylinder, add, place x and y
MIRROR = np.array([-1.0, 1.0])
FLIP = np.array([1.0, -1.0])


@dataclass(frozen=True, kw_only=True)
class Lenses:
    """One lens under N hypotheses: as it was made and laid out, and (once `shown`) what the lens meter shows of it."""

    prism: Floats  # N × 2, prescribed part as made
    thinning: Floats  # N × 2
    thinning_load: Floats  # N × 2, on the latent thinning
    power: Floats  # N × 2 × 2, of the lens as it lies
    add: Floats  # N
    moved: Floats  # N × 2 × latents: what a displacement adds at the ordered point
    own_variance: Floats  # N × 6, of the lens's own latents
    at_point: Floats  # N × 2, prism at the ordered point of the frame
    at_point_load: Floats
    read: Floats  # N × 2, prism read
    read_load: Floats
    seen: Floats  # N × 2 × 2, power as it is seen
    mean_shift: Floats  # N, added to the mean power
    broad: Floats  # N × measured: further variance, where nothing definite is known

    def __len__(self) -> int:
        return len(self.add)

    def take(self, places: NDArray[np.int64]) -> Lenses:
        """Some of the hypotheses, in this order, also several times."""
        return Lenses(**{field.name: getattr(self, field.name)[places] for field in fields(self)})


def joined(parts: list[Lenses]) -> Lenses:
    """All hypotheses of several values, one after the other."""
    return Lenses(**{field.name: np.concatenate([getattr(part, field.name) for part in parts]) for field in fields(Lenses)})


def made(prism: Floats, thinning: Floats, thinning_load: Floats, power: Floats, add: float) -> Lenses:
    """One lens made exactly so, not yet shown."""
    nothing, no_load = np.zeros((1, 2)), np.zeros((1, 2, LATENTS))
    return Lenses(
        prism=prism[None], thinning=thinning[None], thinning_load=thinning_load[None], power=power[None], add=np.array([add]),
        moved=no_load, own_variance=np.zeros((1, OWN_LATENTS)), at_point=nothing, at_point_load=no_load, read=nothing, read_load=no_load,
        seen=power[None], mean_shift=np.zeros(1), broad=np.zeros((1, MEASURED)),
    )  # fmt: skip


def as_second(lenses: Lenses) -> Lenses:
    """The latents of the lens's own and of its second fault exchanged: an act between two exchanges is the second's."""
    return replace(
        lenses,
        moved=lenses.moved[:, :, SECOND],
        at_point_load=lenses.at_point_load[:, :, SECOND],
        read_load=lenses.read_load[:, :, SECOND],
        own_variance=lenses.own_variance[:, SECOND[COMMON:] - COMMON],
    )


# --- making and layout ----------------------------------------------------------------------------------------------------


def displaced(lenses: Lenses, direction: Floats, latent: int, variance: float) -> Lenses:
    """The lens sits off in the frame along a direction by a latent length: q = e + F d / 10."""
    moved, own = lenses.moved.copy(), lenses.own_variance.copy()
    moved[:, :, latent] += lenses.power @ direction / 10
    if latent >= COMMON:
        own[:, latent - COMMON] = variance
    return replace(lenses, moved=moved, own_variance=own)


def turned(lenses: Lenses, angles_deg: Floats) -> Lenses:
    """The lens turned counter-clockwise in its frame: every hypothesis by every angle."""
    copies = lenses.take(np.repeat(np.arange(len(lenses)), len(angles_deg)))
    turn = turns(np.tile(angles_deg, len(lenses)))
    return replace(
        copies,
        prism=times(turn, copies.prism),
        thinning=times(turn, copies.thinning),
        thinning_load=times(turn, copies.thinning_load),
        moved=turn @ copies.moved,
        power=turn @ copies.power @ np.swapaxes(turn, 1, 2),
    )


def turns(angles_deg: Floats) -> Floats:
    """Rotation matrices, counter-clockwise."""
    along = np.exp(1j * np.deg2rad(angles_deg))
    return np.stack([np.stack([along.real, -along.imag], -1), np.stack([along.imag, along.real], -1)], -2)


def times(matrix: Floats, vectors: Floats) -> Floats:
    """Each matrix times its vector."""
    product: Floats = np.einsum("nij,nj->ni", matrix, vectors)
    return product


# --- on the lens meter ------------------------------------------------------------------------------------------------------


def shown(lenses: Lenses) -> Lenses:
    """The lens laid on the stop at its ordered point, read properly."""
    at_point, load = lenses.prism + lenses.thinning, lenses.moved.copy()
    load[:, :, THINNING] += lenses.thinning_load
    return replace(lenses, at_point=at_point, at_point_load=load, read=at_point, read_load=load, seen=lenses.power)


def read_off(lenses: Lenses, place_mm: Floats, spread_mm: Floats) -> Lenses:
    """Read at another point than marked: q = q0 − F r / 10, each part of r with a spread."""
    load, own = lenses.read_load.copy(), lenses.own_variance.copy()
    load[:, :, OWN] -= lenses.power / 10
    own[:, :2] = np.square(spread_mm)
    return replace(lenses, read=lenses.read - lenses.power @ place_mm / 10, read_load=load, own_variance=own)


def read_at_centre(lenses: Lenses, spread_mm: float) -> Lenses:
    """Read where there is no prism, or thereabouts."""
    load, own = np.zeros_like(lenses.read_load), lenses.own_variance.copy()
    load[:, :, OWN] = -lenses.power / 10
    own[:, :2] = spread_mm**2
    return replace(lenses, read=np.zeros_like(lenses.read), read_load=load, own_variance=own)


def read_mirrored(lenses: Lenses) -> Lenses:
    """In for out and out for in; powers as they are."""
    return replace(lenses, read=lenses.read * MIRROR, read_load=lenses.read_load * MIRROR[:, None])


def read_from_front(lenses: Lenses, mean_shift: float, spread_d: float) -> Lenses:
    """The front on the stop: base and axis mirrored, the front vertex power read."""
    own = lenses.own_variance.copy()
    own[:, 2] = spread_d**2
    seen = lenses.seen * np.outer(MIRROR, MIRROR)
    return replace(read_mirrored(lenses), seen=seen, mean_shift=lenses.mean_shift + mean_shift, own_variance=own)


def upside_down(lenses: Lenses) -> Lenses:
    """Frame upside down on the table: every prism as its opposite, powers as they are."""
    return replace(
        lenses,
        read=-lenses.read, read_load=-lenses.read_load, at_point=-lenses.at_point, at_point_load=-lenses.at_point_load,
    )  # fmt: skip


def not_square(lenses: Lenses, angles_deg: Floats) -> Lenses:
    """Frame turned on the table: every hypothesis by every angle."""
    copies = lenses.take(np.repeat(np.arange(len(lenses)), len(angles_deg)))
    turn = turns(np.tile(angles_deg, len(lenses)))
    back = np.swapaxes(turn, 1, 2)
    return replace(
        copies,
        read=times(turn, copies.read), read_load=turn @ copies.read_load,
        at_point=times(turn, copies.at_point), at_point_load=turn @ copies.at_point_load,
        power=turn @ copies.power @ back, seen=turn @ copies.seen @ back,
    )  # fmt: skip


def offset(lenses: Lenses, prism: Floats) -> Lenses:
    """A known prism added by the instrument, wherever the lens is read."""
    return replace(lenses, read=lenses.read + prism, at_point=lenses.at_point + prism)


def with_zero(lenses: Lenses) -> Lenses:
    """The latent zero error added by the instrument, wherever the lens is read."""
    read, at_point = lenses.read_load.copy(), lenses.at_point_load.copy()
    read[:, :, ZERO] += np.eye(2)
    at_point[:, :, ZERO] += np.eye(2)
    return replace(lenses, read_load=read, at_point_load=at_point)


# --- as measured --------------------------------------------------------------------------------------------------------------


def cylinder_parts(power: Floats) -> Floats:
    """(Fyy − Fxx)/2 and Fxy of each matrix."""
    return np.stack([(power[..., 1, 1] - power[..., 0, 0]) / 2, power[..., 0, 1]], -1)


def measured(lenses: Lenses, due: Floats, to_mm: Floats) -> tuple[Floats, Floats]:
    """Means (N × measured) and loadings (N × measured × latents) of all that can be read of the lens.

    `due`: Δ at the ordered point; `to_mm`: see `slid_by`. Place: where the lens shows what is due.
    """
    means, loads = np.zeros((len(lenses), MEASURED)), np.zeros((len(lenses), MEASURED, LATENTS))
    means[:, PRISM], loads[:, PRISM] = lenses.read, lenses.read_load
    means[:, MEAN] = np.trace(lenses.seen, axis1=1, axis2=2) / 2 + lenses.mean_shift
    loads[:, MEAN, [POWER, SECOND[POWER]]] = 1
    means[:, CYLINDER] = cylinder_parts(lenses.seen)
    means[:, ADD] = lenses.add
    means[:, PLACE] = times(to_mm, lenses.at_point - due)
    loads[:, PLACE] = to_mm @ lenses.at_point_load
    return means, loads


WEAKEST_D = 0.5


def slid_by(power: Floats, both: bool) -> Floats:
    """Matrices from a missing prism (Δ) to the way to where it is found (mm): r = 10 F⁻¹ Δp, slid both ways; or slid up and
    down only, until the vertical part is right: r = 10 Δp / Fyy. Nothing where that power is weaker than WEAKEST_D."""
    if not both:
        weak = np.abs(power[:, 1, 1]) < WEAKEST_D
        found = np.zeros_like(power)
        found[:, 1, 1] = np.where(weak, 0.0, 10 / np.where(weak, 1.0, power[:, 1, 1]))
        return found
    weak = np.abs(np.linalg.eigvalsh(power)).min(-1) < WEAKEST_D
    inverted: Floats = np.linalg.inv(np.where(weak[:, None, None], np.eye(2), power))
    return np.where(weak[:, None, None], 0.0, 10 * inverted)
