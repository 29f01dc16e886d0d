"""Tilted lenses by vectors, written apart from the core: lenses stand in the room, rays cross them.

Nothing of the core is used. The lens is put into the room by scipy's rotations and every surface
is an implicit one there (sphere, torus as a ring), met by bisection; light turns by keeping its
part along the surface. The wedge is found from the law of refraction by bisection, the toric's
curvatures by numpy's eigenvalues. Arrays hold one lens in each row. Lengths in mm.

Sources: law of refraction; torus as the locus at a fixed distance from a circle; front vertex and
back vertex power from any textbook of ophthalmic optics.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

Array = NDArray[np.float64]


def dot(first: Array, second: Array) -> Array:
    return np.einsum("...i,...i->...", first, second)


def turned_by_surface(ray: Array, normal: Array, before: Array, behind: Array) -> Array:
    """The direction behind a surface: n times the part along the surface stays."""
    normal = normal * np.sign(dot(ray, normal))[..., None]
    along = (before / behind)[..., None] * (ray - dot(ray, normal)[..., None] * normal)
    return along + np.sqrt(1.0 - dot(along, along))[..., None] * normal


def wedge_of(prism: Array, index: Array) -> Array:
    """The wedge (radians) behind which light that enters square is turned by `prism` (Δ)."""
    low, high = np.zeros_like(prism), np.arcsin(1.0 / index) - 1e-9
    for _ in range(80):
        middle = (low + high) / 2
        enough = np.tan(np.arcsin(index * np.sin(middle)) - middle) * 100 > prism
        low, high = np.where(enough, low, middle), np.where(enough, middle, high)
    return (low + high) / 2


def power_matrix(sphere: Array, cylinder: Array, axis_deg: Array) -> Array:
    """S·1 + C·w·wᵀ, w square to the axis."""
    turn = np.radians(axis_deg)
    across = np.stack([-np.sin(turn), np.cos(turn)], -1)
    return sphere[:, None, None] * np.eye(2) + cylinder[:, None, None] * across[:, :, None] * across[:, None, :]


def front_in_room(left_eye: Array, pantoscopic_deg: Array, wrap_deg: Array) -> Array:
    """The front's axes as columns: first bent about the upright, then tilted about the horizontal."""
    bent = np.where(left_eye, wrap_deg, -wrap_deg)
    return Rotation.from_euler("yx", np.stack([bent, pantoscopic_deg], -1), degrees=True).as_matrix()


@dataclass
class Lenses:
    """Lenses whose front poles lie at the origin of the room.

    `axes` (columns right, up, out) of the front; `back_axes` (columns steep meridian, flat
    meridian, out) and `back_pole` of the back; `steep`, `flat` its radii, positive where the
    centre lies towards the eye.
    """

    index: Array
    front_radius: Array
    axes: Array
    back_axes: Array
    back_pole: Array
    steep: Array
    flat: Array

    def back_value(self, point: Array) -> Array:
        """0 on the back surface, positive in front of it: distance from the ring, less its tube."""
        u, v, w = np.moveaxis(np.einsum("...ji,...j->...i", self.back_axes, point - self.back_pole), -1, 0)
        ring = np.sign(self.flat) * np.hypot(v, w + self.flat) - (self.flat - self.steep)
        return np.sign(self.steep) * (np.hypot(u, ring) - np.abs(self.steep))

    def back_normal(self, point: Array) -> Array:
        u, v, w = np.moveaxis(np.einsum("...ji,...j->...i", self.back_axes, point - self.back_pole), -1, 0)
        far = np.hypot(v, w + self.flat)
        ring = np.sign(self.flat) * far - (self.flat - self.steep)
        own = np.stack([u, ring * np.sign(self.flat) * v / far, ring * np.sign(self.flat) * (w + self.flat) / far], -1)
        own = np.einsum("...ij,...j->...i", self.back_axes, own)
        return own / np.sqrt(dot(own, own))[..., None]

    def front_normal(self, point: Array) -> Array:
        centre = -self.front_radius[:, None] * self.axes[..., 2]
        return (point - centre) / self.front_radius[:, None]

    def front_from(self, start: Array, ray: Array) -> Array:
        """Where a ray meets the front sphere, the crossing nearer to the pole."""
        away = start + self.front_radius[:, None] * self.axes[..., 2]
        half = dot(away, ray)
        root = np.sqrt(half**2 - dot(away, away) + self.front_radius**2)
        first, second = -half - root, -half + root
        nearer = np.where(np.abs(first) < np.abs(second), first, second)
        return start + nearer[:, None] * ray

    def back_from(self, start: Array, ray: Array, most_mm: float = 80.0) -> Array:
        """Where a ray inside the glass meets the back, by bisection."""
        low, high = np.full(len(start), -0.5), np.full(len(start), most_mm)
        reach = np.minimum(np.abs(self.steep), np.abs(self.flat)) * 0.9
        high = np.minimum(high, reach)
        for _ in range(90):
            middle = (low + high) / 2
            inside = self.back_value(start + middle[:, None] * ray) > 0
            low, high = np.where(inside, middle, low), np.where(inside, high, middle)
        return start + ((low + high) / 2)[:, None] * ray

    def through(self, start: Array, ray: Array) -> tuple[Array, Array]:
        """Light from in front: where it leaves the back, and which way."""
        air = np.ones(len(self.index))
        at_front = self.front_from(start, ray)
        inside = turned_by_surface(ray, self.front_normal(at_front), air, self.index)
        at_back = self.back_from(at_front, inside)
        return at_back, turned_by_surface(inside, self.back_normal(at_back), self.index, air)

    def prism_ahead(self) -> Array:
        """Prism (Δ, right and up) for light from straight ahead through the front pole."""
        start = np.zeros((len(self.index), 3))
        ray = np.tile([0.0, 0.0, -1.0], (len(self.index), 1))
        _, left = self.through(start, ray)
        return -100.0 * left[:, :2] / left[:, 2:]

    def prism_near(self, away_mm: float, centre_mm: Array) -> Array:
        """Prism (Δ, right and up) for the light of a near point straight ahead that then passes the eye's centre.

        The point lies `away_mm` in front of the front pole, the centre of rotation `centre_mm` behind it. Newton's
        method on where the light starts from the point, its slopes by neighbouring rays.
        """
        count, step = len(self.index), 1e-6
        point = np.tile([0.0, 0.0, away_mm], (count, 1))
        slopes = np.zeros((count, 2))

        def missed(slopes: Array) -> tuple[Array, Array]:
            ray = np.concatenate([slopes, -np.ones((count, 1))], -1)
            at, left = self.through(point, ray / np.sqrt(dot(ray, ray))[:, None])
            along = (-centre_mm - at[:, 2]) / left[:, 2]
            return (at + along[:, None] * left)[:, :2], left

        for _ in range(8):
            miss, left = missed(slopes)
            columns = [(missed(slopes + step * np.eye(2)[i])[0] - miss) / step for i in (0, 1)]
            slopes = slopes - np.linalg.solve(np.stack(columns, -1), miss[..., None])[..., 0]
        miss, left = missed(slopes)
        assert np.abs(miss).max() < 1e-9
        return -100.0 * left[:, :2] / left[:, 2:]

    def power_ahead(self, step_mm: float = 1e-3) -> Array:
        """Power matrix about that ray: how directions behind the lens grow with place there."""
        count = len(self.index)
        ray = np.tile([0.0, 0.0, -1.0], (count, 1))
        middle, _ = self.through(np.zeros((count, 3)), ray)
        places, turns = [], []
        for offset in ([step_mm, 0.0, 0.0], [0.0, step_mm, 0.0]):
            pair = [self.through(np.tile(sign * np.array(offset), (count, 1)), ray) for sign in (1.0, -1.0)]
            found = []
            for at, left in pair:
                # On the plane through the chief ray's exit, square to the line of sight.
                along = (middle - at)[:, 2] / left[:, 2]
                found.append(((at + along[:, None] * left)[:, :2], left[:, :2] / -left[:, 2:]))
            places.append((found[0][0] - found[1][0]) / (2 * step_mm))
            turns.append((found[0][1] - found[1][1]) / (2 * step_mm))
        place, turn = np.stack(places, -1), np.stack(turns, -1)
        return -1000.0 * turn @ np.linalg.inv(place)


def back_radii(power: Array, front_d: Array, thickness_mm: Array, index: Array) -> tuple[Array, Array, Array]:
    """Radii of the back (steep, flat) and the steep meridian's direction, from the back vertex power."""
    at_back = front_d / (1 - thickness_mm / 1000 / index * front_d)
    values, vectors = np.linalg.eigh(power - at_back[:, None, None] * np.eye(2))
    curvatures = -values / (1000 * (index[:, None] - 1))
    steep = np.abs(curvatures).argmax(-1)
    rows = np.arange(len(index))
    return 1 / curvatures[rows, steep], 1 / curvatures[rows, 1 - steep], vectors[rows, :, steep]


def worked(power: Array, prism: Array, front_d: Array, thickness_mm: Array, index: Array, axes: Array) -> Lenses:
    """Lenses with their prism worked in: the back turned about the point straight behind the pole."""
    amount = np.hypot(*prism.T)
    wedge = wedge_of(amount, index)
    base = np.divide(prism, amount[:, None], out=np.tile([1.0, 0.0], (len(index), 1)), where=amount[:, None] > 0)
    # Turned about the line square to the base, so that the thick side is the base.
    turn = Rotation.from_rotvec(wedge[:, None] * np.stack([-base[:, 1], base[:, 0], np.zeros(len(index))], -1)).as_matrix()
    steep, flat, along = back_radii(power, front_d, thickness_mm, index)
    own = np.zeros((len(index), 3, 3))
    own[:, :2, 0] = along
    own[:, 0, 1], own[:, 1, 1], own[:, 2, 2] = -along[:, 1], along[:, 0], 1.0
    return Lenses(
        index=index,
        front_radius=1000 * (index - 1) / front_d,
        axes=axes,
        back_axes=axes @ turn @ own,
        back_pole=-thickness_mm[:, None] * axes[..., 2],
        steep=steep,
        flat=flat,
    )


def decentred(
    power: Array, moved_mm: Array, front_d: Array, thickness_mm: Array, index: Array, axes: Array
) -> tuple[Lenses, Array]:
    """Lenses without wedge, looked at through the front at `moved_mm` (x, y) from their centre.

    `axes` is the front there. Returns them, that point at the room's origin, and the thickness
    there along the front's normal.
    """
    radius = 1000 * (index - 1) / front_d
    x, y = moved_mm.T
    out = np.stack([x, y, np.sqrt(radius**2 - x**2 - y**2) * np.sign(radius)], -1) / radius[:, None]
    # The smallest turn that brings the lens's own axis from straight ahead to where it stands.
    square = np.cross(out, [0.0, 0.0, 1.0])
    length = np.linalg.norm(square, axis=-1)
    turn = Rotation.from_rotvec(square / length[:, None] * np.arcsin(length)[:, None]).as_matrix()
    steep, flat, along = back_radii(power, front_d, thickness_mm, index)
    own = np.zeros((len(index), 3, 3))
    own[:, :2, 0] = along
    own[:, 0, 1], own[:, 1, 1], own[:, 2, 2] = -along[:, 1], along[:, 0], 1.0
    # Front centre, then the lens's own pole, then the back pole behind it.
    axis = (axes @ turn)[..., 2]
    pole = -radius[:, None] * axes[..., 2] + radius[:, None] * axis
    lenses = Lenses(index, radius, axes, axes @ turn @ own, pole - thickness_mm[:, None] * axis, steep, flat)
    behind = lenses.back_from(np.zeros((len(index), 3)), -axes[..., 2])
    return lenses, np.sqrt(dot(behind, behind))


def power_along_ray(lenses: Lenses, step_mm: float = 1e-3) -> Array:
    """Power matrix of a narrow pencil from straight ahead, on the plane square to the ray as it leaves.

    Right and up of that plane are the room's, turned by the shortest turn that brings straight ahead onto the ray.
    """
    count = len(lenses.index)
    ray = np.tile([0.0, 0.0, -1.0], (count, 1))
    middle, chief = lenses.through(np.zeros((count, 3)), ray)
    square = np.cross(ray, chief)
    sine = np.linalg.norm(square, axis=-1)
    angle = np.arctan2(sine, dot(ray, chief))
    turn = Rotation.from_rotvec(square / np.maximum(sine, 1e-15)[:, None] * angle[:, None]).as_matrix()
    places, turns = [], []
    for offset in ([step_mm, 0.0, 0.0], [0.0, step_mm, 0.0]):
        found = []
        for sign in (1.0, -1.0):
            at, left = lenses.through(np.tile(sign * np.array(offset), (count, 1)), ray)
            along = dot(middle - at, chief) / dot(left, chief)
            place = np.einsum("...ji,...j->...i", turn, at + along[:, None] * left - middle)
            found.append((place[:, :2], np.einsum("...ji,...j->...i", turn, left)[:, :2]))
        places.append((found[0][0] - found[1][0]) / (2 * step_mm))
        turns.append((found[0][1] - found[1][1]) / (2 * step_mm))
    place, direction = np.stack(places, -1), np.stack(turns, -1)
    return -1000.0 * direction @ np.linalg.inv(place)
