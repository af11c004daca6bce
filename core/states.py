"""What a body does and what acts on it at an instant: motion and loads."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def _nothing() -> Array:
    """Return a table of no vectors."""
    return np.empty((0, 3))


@dataclass(frozen=True, slots=True, eq=False)
class Loads:
    """Loads on a body, the weight not among them.

    Parameters
    ----------
    forces : ndarray, shape (n, 3)
        Forces on the body [N].
    points : ndarray, shape (n, 3)
        Where they act [m].
    couples : ndarray, shape (m, 3)
        Couples on the body [N m].
    """

    forces: Array = field(default_factory=_nothing)
    points: Array = field(default_factory=_nothing)
    couples: Array = field(default_factory=_nothing)


@dataclass(frozen=True, slots=True, eq=False)
class Motion:
    """Motion of a body at an instant; what is unknown in it is solved with the reactions.

    Parameters
    ----------
    omega : ndarray, shape (3,)
        Angular velocity [rad/s].
    alpha : ndarray, shape (3,)
        Angular acceleration; of an unknown one the part that is known [rad/s^2].
    acceleration : ndarray, shape (3,)
        Acceleration of `point`; zero for a fixed one [m/s^2].
    point : ndarray, shape (3,), or None
        Point of the body whose acceleration is given; None for the mass center [m].
    free_turns : sequence of ndarray, shape (3,)
        Axes about which the angular acceleration is unknown, unit vectors; in the plane z [-].
    free_slide : ndarray, shape (3,), or None
        Direction in which the acceleration of `point` is unknown, a unit vector [-].
    """

    omega: Array
    alpha: Array
    acceleration: Array
    point: Array | None = None
    free_turns: Sequence[Array] = ()
    free_slide: Array | None = None
