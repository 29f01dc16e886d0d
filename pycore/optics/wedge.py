"""The wedge between both surfaces that makes a prism: exact, with the thin formula beside it."""

import math


def wedge_tangent(prism: float, index: float) -> float:
    """Tangent of the angle between both surfaces that deviates light by a prism.

    Arguments: `prism` prism dioptres; `index`. Returns a pure number: mm of thickness for each
    mm. Light enters square to one surface. Source: Snell's law, tan α = sin δ / (n - cos δ) with
    tan δ = P / 100 (facts 4.8).

    >>> round(50 * wedge_tangent(10.0, 1.5), 3)
    9.853
    """
    hypotenuse = math.hypot(1.0, prism / 100.0)
    return prism / 100.0 / (index * hypotenuse - 1.0)


def thin_wedge_tangent(prism: float, index: float) -> float:
    """The same by the thin formula, P / (100 (n - 1)); 0.4 % too much at 5 Δ, 6 % at 20.

    Arguments: `prism` prism dioptres; `index`. Returns a pure number. Source: facts 4.8.

    >>> round(50 * thin_wedge_tangent(3.0, 1.498), 2)
    3.01
    """
    return prism / (100.0 * (index - 1.0))
