"""All that has mass is one thing: a `RigidBody`."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray


@dataclass(frozen=True, eq=False, slots=True)
class RigidBody:
    """Mass, mass center and inertia tensor of a body, along the sheet's axes.

    Parameters
    ----------
    mass : float
        Mass [kg].
    center : ndarray, shape (3,)
        Position of the mass center [m].
    inertia : ndarray, shape (3, 3)
        Inertia tensor about the mass center [kg m^2], tensor form: an off-diagonal term is minus the
        integral of the product of its two coordinates.
    """

    mass: float
    center: NDArray[np.float64]
    inertia: NDArray[np.float64]
