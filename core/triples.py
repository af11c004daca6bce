"""Vectors of three plain floats, for the small sums of one body with a handful of supports.

An array of three numbers costs about a microsecond per operation, a tuple a tenth of that; a balance with a
few supports takes some hundred operations.
"""

from __future__ import annotations

from collections.abc import Iterable
from math import sqrt
from typing import TypeAlias

Triple: TypeAlias = tuple[float, float, float]

ZERO: Triple = (0.0, 0.0, 0.0)


def triple(values: Iterable[float]) -> Triple:
    """Return three numbers as plain floats.

    Parameters
    ----------
    values : iterable of float
        Three numbers, as an array or a list [any].

    Returns
    -------
    tuple of float
        The same numbers [any].

    Notes
    -----
    Raises Python's own error when there are not three.

    References
    ----------
    None needed.
    """
    x, y, z = values
    return (float(x), float(y), float(z))


def add(a: Triple, b: Triple) -> Triple:
    """Return a + b.

    Parameters
    ----------
    a, b : tuple of float
        Vectors [any].

    Returns
    -------
    tuple of float
        Sum [any].

    Notes
    -----
    Exact but for rounding.

    References
    ----------
    Definition of the sum of vectors.
    """
    return (a[0] + b[0], a[1] + b[1], a[2] + b[2])


def less(a: Triple, b: Triple) -> Triple:
    """Return a - b.

    Parameters
    ----------
    a, b : tuple of float
        Vectors [any].

    Returns
    -------
    tuple of float
        Difference [any].

    Notes
    -----
    Exact but for rounding.

    References
    ----------
    Definition of the difference of vectors.
    """
    return (a[0] - b[0], a[1] - b[1], a[2] - b[2])


def scaled(factor: float, a: Triple) -> Triple:
    """Return factor times a.

    Parameters
    ----------
    factor : float
        Number [any].
    a : tuple of float
        Vector [any].

    Returns
    -------
    tuple of float
        Product [any].

    Notes
    -----
    Exact but for rounding.

    References
    ----------
    Definition of the product of a number and a vector.
    """
    return (factor * a[0], factor * a[1], factor * a[2])


def crossed(a: Triple, b: Triple) -> Triple:
    """Return the cross product of a and b.

    Parameters
    ----------
    a, b : tuple of float
        Vectors [any].

    Returns
    -------
    tuple of float
        Cross product [product of both].

    Notes
    -----
    Right-handed.

    References
    ----------
    Definition of the cross product.
    """
    return (a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0])


def dotted(a: Triple, b: Triple) -> float:
    """Return the dot product of a and b.

    Parameters
    ----------
    a, b : tuple of float
        Vectors [any].

    Returns
    -------
    float
        Dot product [product of both].

    Notes
    -----
    Exact but for rounding.

    References
    ----------
    Definition of the dot product.
    """
    return a[0] * b[0] + a[1] * b[1] + a[2] * b[2]


def size(a: Triple) -> float:
    """Return the magnitude of a.

    Parameters
    ----------
    a : tuple of float
        Vector [any].

    Returns
    -------
    float
        Magnitude [same].

    Notes
    -----
    Free of overflow for any length that a machine has.

    References
    ----------
    Definition of the magnitude of a vector.
    """
    return sqrt(a[0] * a[0] + a[1] * a[1] + a[2] * a[2])


def scale_of(points: Iterable[Triple], center: Triple) -> float:
    """Return the greatest distance of any of the points from a center.

    Parameters
    ----------
    points : iterable of tuple of float
        Points [m].
    center : tuple of float
        Center [m].

    Returns
    -------
    float
        Greatest distance, 0 without points [m].

    Notes
    -----
    Used to make sizes comparable, not as a result.

    References
    ----------
    None needed.
    """
    return max((size(less(point, center)) for point in points), default=0.0)
