"""An outside reference for a lens's thickness: implicit surfaces, a turned frame, a general root finder.

Nothing here is shared with the core: the power is a numpy matrix and its principal directions its eigenvectors, the
toric is the equation of a torus, the wedge's angle is found by refracting a ray (Snell's law in vector form) until it
is deviated as wanted, the back is turned by scipy's Rotation, and the depth is found by scipy's Brent.

Frame: x to the observer's right, y up, depth towards the eye from the front pole, mm. Sources: F = (n - 1) / r;
F2 = Fv - F1 / (1 - t F1 / n) (any textbook of ophthalmic lenses); Snell's law; the edge formula of the domain facts,
section 4 item 8, as the thin limit.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq
from scipy.spatial.transform import Rotation

Vector = NDArray[np.float64]


def refracted(direction: Vector, normal: Vector, ratio: float) -> Vector:
    """Snell's law for unit vectors; `normal` on the side the light comes from; `ratio` n1 / n2."""
    cosine = -float(direction @ normal)
    inside = 1.0 - ratio**2 * (1.0 - cosine**2)
    return ratio * direction + (ratio * cosine - math.sqrt(inside)) * normal


def wedge_rad(prism: float, index: float) -> float:
    """The angle of the wedge that deviates light square to its front by a prism, by tracing and Brent."""

    def miss(angle: float) -> float:
        back_normal = np.array([math.sin(angle), 0.0, -math.cos(angle)])
        out = refracted(np.array([0.0, 0.0, 1.0]), back_normal, index)
        return abs(100.0 * out[0] / out[2]) - prism

    return float(brentq(miss, 0.0, math.asin(0.99 / index), xtol=1e-14)) if prism else 0.0


def power_matrix(sphere: float, cylinder: float, axis_deg: float) -> Vector:
    """S I + C (unit vector across the axis) its transpose."""
    across = np.array([-math.sin(math.radians(axis_deg)), math.cos(math.radians(axis_deg))])
    return sphere * np.eye(2) + cylinder * np.outer(across, across)


@dataclass(frozen=True)
class ReferenceLens:
    """Powers in dioptres, thickness in mm, prism (x, y) in prism dioptres."""

    index: float
    front_d: float
    sphere: float
    cylinder: float
    axis_deg: float
    thickness_mm: float
    prism: tuple[float, float]

    def turned(self) -> Rotation:
        """From the back's own frame to the lens's: towards the base the back lies deeper."""
        amount = math.hypot(*self.prism)
        angle = wedge_rad(amount, self.index)
        x, y = (self.prism[0] / amount, self.prism[1] / amount) if amount else (1.0, 0.0)
        return Rotation.from_rotvec(angle * np.array([y, -x, 0.0]))

    def back(self) -> tuple[float, float, Vector]:
        """Curvatures (the greater size first) in 1/mm and the direction of the first."""
        at_back = self.front_d / (1.0 - self.thickness_mm / 1000.0 / self.index * self.front_d)
        second = power_matrix(self.sphere, self.cylinder, self.axis_deg) - at_back * np.eye(2)
        values, vectors = np.linalg.eigh(-second / (1000.0 * (self.index - 1.0)))
        order = np.argsort(-np.abs(values), kind="stable")
        return float(values[order[0]]), float(values[order[1]]), vectors[:, order[0]]

    def thickness(self, x: float, y: float) -> float:
        """Thickness along the front normal at the reference point."""
        steep, flat, first = self.back()
        turned = self.turned()
        across = np.array([-first[1], first[0]])

        def miss(depth: float) -> float:
            local = turned.inv().apply([x, y, depth - self.thickness_mm])
            u, v, w = float(local[:2] @ first), float(local[:2] @ across), float(local[2])
            return w - torus_depth(steep, flat, u, v)

        front = self.front_d / (1000.0 * (self.index - 1.0))
        front_depth = torus_depth(front, front, math.hypot(x, y), 0.0)
        return float(brentq(miss, -60.0, 60.0, xtol=1e-13, rtol=1e-14)) - front_depth


    def thicknesses(self, x: Vector, y: Vector) -> Vector:
        """The same for arrays of places, by bisection in place of Brent's method."""
        steep, flat, first = self.back()
        into, across = self.turned().inv().as_matrix(), np.array([-first[1], first[0]])
        low, high = np.full(x.shape, -60.0), np.full(x.shape, 60.0)
        for _ in range(48):
            depth = (low + high) / 2
            local = into @ np.stack([x, y, depth - self.thickness_mm])
            u, v = first @ local[:2], across @ local[:2]
            behind = local[2] > depths(steep, flat, u, v)
            low, high = np.where(behind, low, depth), np.where(behind, depth, high)
        front = self.front_d / (1000.0 * (self.index - 1.0))
        return (low + high) / 2 - depths(front, front, np.hypot(x, y), np.zeros_like(x))


def depths(steep: float, flat: float, u: Vector, v: Vector) -> Vector:
    """`torus_depth` for arrays."""
    arc = np.zeros_like(u) if abs(steep) < 1e-12 else 1 / steep - np.sign(steep) * np.sqrt(np.maximum(1 / steep**2 - u * u, 0.0))
    if abs(flat) < 1e-12:
        return arc
    return 1 / flat - np.sign(flat) * np.sqrt(np.maximum((1 / flat - arc) ** 2 - v * v, 0.0))


def torus_depth(steep: float, flat: float, u: float, v: float) -> float:
    """Depth of a torus by its radii: the arc of radius 1/steep along u, carried round the circle of radius 1/flat."""
    arc = 0.0 if abs(steep) < 1e-12 else 1 / steep - math.copysign(math.sqrt(max(1 / steep**2 - u * u, 0.0)), steep)
    if abs(flat) < 1e-12:
        return arc
    radius = 1 / flat
    return radius - math.copysign(math.sqrt(max((radius - arc) ** 2 - v * v, 0.0)), flat)


def spherical_thickness(lens: ReferenceLens, x: Vector, y: Vector) -> Vector:
    """The same in closed form for spherical backs, for arrays: a turned sphere is a sphere with its centre moved."""
    curvature, _, _ = lens.back()
    pole = np.array([0.0, 0.0, lens.thickness_mm])
    centre = pole + lens.turned().apply([0.0, 0.0, 1.0 / curvature])
    side = math.copysign(1.0, curvature)
    back = centre[2] - side * np.sqrt(1 / curvature**2 - (x - centre[0]) ** 2 - (y - centre[1]) ** 2)
    radius = 1000.0 * (lens.index - 1.0) / lens.front_d
    front = radius - np.sqrt(radius**2 - x**2 - y**2)
    return back - front
