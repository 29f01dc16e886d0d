"""An exact ray trace through a spectacle lens, in numpy, written apart from the core and by another route.

The core finds points on its surfaces by depth functions and step-by-step search, one at a time. Here a surface is an
implicit function of space, G(x, y, z) = 0 (a sphere, or a torus as the polynomial of fourth degree), normals are its
gradient written out by hand, the wedge comes from solving for the reading by bisection (no formula for the wedge), the
refraction is done with angles and tangential parts, and the foot of the normal is found by least squares over the
surface. Whole arrays of lenses go through at once.

Frame: x to the observer's right, y up, z towards the observer; the front's pole at the origin; mm; prism dioptres.

Sources: law of refraction; the torus, any book on geometry; step-along vergence for the back
vertex power; the lens on the stop: back surface square to the axis, through the point marked on the front.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def unit(vector: Array) -> Array:
    """Vectors of length 1, along the last axis."""
    return vector / np.linalg.norm(vector, axis=-1, keepdims=True)


def rodrigues(axis: Array, angle: Array) -> Array:
    """Rotation matrices about unit axes (last axis 3) by angles in radians."""
    x, y, z = np.moveaxis(axis, -1, 0)
    zero = np.zeros_like(x)
    cross = np.stack([np.stack([zero, -z, y], -1), np.stack([z, zero, -x], -1), np.stack([-y, x, zero], -1)], -2)
    sine, cosine = np.sin(angle)[..., None, None], np.cos(angle)[..., None, None]
    return np.eye(3) + sine * cross + (1 - cosine) * (cross @ cross)


def shortest_turn(direction: Array) -> Array:
    """Rotation matrices that take +z to each direction by the shortest way."""
    z = np.array([0.0, 0.0, 1.0])
    axis = np.cross(np.broadcast_to(z, direction.shape), direction)
    sine = np.linalg.norm(axis, axis=-1)
    angle = np.arctan2(sine, direction[..., 2])
    axis = np.where(sine[..., None] > 1e-300, axis / np.maximum(sine, 1e-300)[..., None], np.array([1.0, 0.0, 0.0]))
    return rodrigues(axis, angle)


def refracted(ray: Array, normal: Array, before: Array, behind: Array) -> Array:
    """Snell's law by the angles: sin(out) = n1/n2 sin(in), in the plane of ray and normal."""
    cosine = np.sum(ray * normal, -1)
    tangential = ray - cosine[..., None] * normal
    sine = np.linalg.norm(tangential, axis=-1)
    towards = np.where(sine[..., None] > 1e-300, tangential / np.maximum(sine, 1e-300)[..., None], 0.0)
    turned = np.arcsin(np.clip(before / behind * sine, -1.0, 1.0))
    out = np.sin(turned)[..., None] * towards + np.cos(turned)[..., None] * normal
    return np.where((before / behind * sine < 1.0)[..., None], out, np.nan)


@dataclass
class Torus:
    """Tori (spheres among them) with the pole at the origin and z along the normal there, in their own frame.

    `tube`: radius of the arc that is carried round, in the plane of x; `ring`: radius of the circle its pole runs along;
    mm, positive with the centre at negative z. The torus: the distance d of a point from the axis of turning (which is
    parallel to x, at z = -ring) obeys (d - (ring - tube))² + x² = tube². No plane ones: a radius is at most 10 km.
    """

    tube: Array
    ring: Array

    def _parts(self, at: Array) -> tuple[Array, Array]:
        from_axis = np.sign(self.ring) * np.hypot(at[..., 1], at[..., 2] + self.ring)
        return from_axis, from_axis - (self.ring - self.tube)

    def value(self, at: Array) -> Array:
        """G, zero on the surface; about the height above it, in mm."""
        _, within = self._parts(at)
        return ((within - self.tube) * (within + self.tube) + at[..., 0] ** 2) / (2 * self.tube)

    def gradient(self, at: Array) -> Array:
        """The gradient of G, pointing to the observer."""
        from_axis, within = self._parts(at)
        share = within / self.tube
        return np.stack([at[..., 0] / self.tube, share * at[..., 1] / from_axis, share * (at[..., 2] + self.ring) / from_axis], -1)


def _bent(curvature: Array) -> Array:
    """Curvatures in 1/mm of which none is quite flat."""
    return np.where(np.abs(curvature) < 1e-7, 1e-7, curvature)


@dataclass
class Lenses:
    """Many lenses at once: powers in dioptres, thickness in mm, prism in prism dioptres."""

    sphere: Array
    cylinder: Array
    axis_deg: Array
    front_d: Array
    thickness: Array
    index: Array
    prism_x: Array
    prism_y: Array

    def __post_init__(self) -> None:
        at_back = 1 / (1 / np.where(self.front_d == 0, 1e-300, self.front_d) - self.thickness / 1000 / self.index)
        along = -(self.sphere - at_back) / (1000 * (self.index - 1))
        across = -(self.sphere + self.cylinder - at_back) / (1000 * (self.index - 1))
        # The steeper arc is carried round the flatter circle (tyre form).
        steep_is_across = np.abs(across) >= np.abs(along)
        steep, flat = np.where(steep_is_across, across, along), np.where(steep_is_across, along, across)
        self.back = Torus(1 / _bent(steep), 1 / _bent(flat))
        turn = np.deg2rad(self.axis_deg + np.where(steep_is_across, 90.0, 0.0))
        about_z = np.broadcast_to(np.array([0.0, 0.0, 1.0]), (*turn.shape, 3))
        self.meridian = rodrigues(about_z, turn)
        self.front_curvature = self.front_d / (1000 * (self.index - 1))
        self.wedge = self._wedge()
        base = np.arctan2(self.prism_y, self.prism_x)
        lean = np.stack([np.sin(self.wedge) * np.cos(base), np.sin(self.wedge) * np.sin(base), np.cos(self.wedge)], -1)
        self.back_pole = -self.thickness[..., None] * lean
        self.back_turn = shortest_turn(lean) @ self.meridian

    def _wedge(self) -> Array:
        """The angle between the surfaces' normals at the pole for which a ray along the back's normal reads the prism."""
        wanted = np.hypot(self.prism_x, self.prism_y)
        low, high = np.zeros_like(wanted), np.arcsin(1 / self.index) * (1 - 1e-12)
        for _ in range(100):
            middle = (low + high) / 2
            short = 100 * np.tan(np.arcsin(np.clip(self.index * np.sin(middle), 0, 1)) - middle) < wanted
            low, high = np.where(short, middle, low), np.where(short, high, middle)
        return (low + high) / 2

    def front_at(self, x: Array, y: Array) -> tuple[Array, Array]:
        """The front's points above x, y and its normals."""
        bend = self.front_curvature
        root = np.sqrt(1 - bend**2 * (x**2 + y**2))
        point = np.stack([x, y, -bend * (x**2 + y**2) / (1 + root)], -1)
        return point, np.stack([bend * x, bend * y, root], -1)

    def back_own(self, point: Array) -> Array:
        """Points in the back surface's own frame."""
        return np.einsum("...ij,...i->...j", self.back_turn, point - self.back_pole)

    def foot(self, marked: Array) -> Array:
        """The back surface's normals that pass through the marked points, by Newton's method on all four conditions.

        Unknown: a point b of the back (own frame) and a length k with b + k grad G(b) = q and G(b) = 0.
        """
        q = self.back_own(marked)
        b, k = q * np.array([1.0, 1.0, 0.0]), q[..., 2] / 2
        for _ in range(60):
            gradient = self.back.gradient(b)
            residual = np.concatenate([b + k[..., None] * gradient - q, self.back.value(b)[..., None]], -1)
            jacobian = np.zeros((*k.shape, 4, 4))
            for column in range(3):  # the second derivatives by central differences
                step = np.zeros(3)
                step[column] = 1e-4
                second = (self.back.gradient(b + step) - self.back.gradient(b - step)) / 2e-4
                jacobian[..., :3, column] = k[..., None] * second + np.eye(3)[column]
                jacobian[..., 3, column] = gradient[..., column]
            jacobian[..., :3, 3] = gradient
            move = np.linalg.solve(jacobian, residual[..., None])[..., 0]
            b, k = b - move[..., :3], k - move[..., 3]
            if np.nanmax(np.abs(move)) < 1e-13:
                break
        return np.einsum("...ij,...j->...i", self.back_turn, unit(self.back.gradient(b)))

    def reading(self, x: Array, y: Array) -> Array:
        """What a lens meter reads at the points x, y marked on the front: (x, y) prism dioptres, along the last axis.

        The lens is really turned until its back is square to the meter's axis; then the ray along the axis is refracted.
        """
        marked, normal = self.front_at(x, y)
        axis = self.foot(marked)
        turned_back = np.swapaxes(shortest_turn(axis), -1, -2)
        normal = np.einsum("...ij,...j->...i", turned_back, normal)
        straight = np.broadcast_to(np.array([0.0, 0.0, 1.0]), normal.shape)
        left = refracted(straight, normal, self.index, np.ones_like(self.index))
        return 100 * left[..., :2] / left[..., 2:]
