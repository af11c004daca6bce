"""Newton's and Euler's equations of one body in plain floats, ready for a handful of supports."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .body import RigidBody
from .errors import InputError
from .states import Loads, Motion
from .triples import ZERO, Triple, add, crossed, dotted, less, scaled, triple

Array = NDArray[np.float64]
Rows = tuple[Triple, Triple, Triple]


@dataclass(frozen=True, slots=True)
class Rate:
    """One unknown acceleration: what a unit of it does.

    Parameters
    ----------
    name : str
        What it is called in a message.
    swing : tuple of float
        Acceleration that it gives the mass center [m/s^2 for each unit].
    axis : tuple of float
        Angular acceleration that it is [-]; zero for a slide.
    """

    name: str
    swing: Triple
    axis: Triple


@dataclass(frozen=True, slots=True)
class PlainBalance:
    """A body, its motion and its loads, in plain floats.

    Parameters
    ----------
    mass : float
        Mass [kg].
    center : tuple of float
        Mass center [m].
    inertia : tuple of tuple of float
        Rows of the inertia tensor about the mass center [kg m^2].
    point : tuple of float
        Point whose acceleration is given [m].
    alpha : tuple of float
        Known part of the angular acceleration [rad/s^2].
    acceleration : tuple of float
        Known part of the acceleration of the mass center [m/s^2].
    gyroscopic : tuple of float
        omega x I omega [N m].
    weight : tuple of float
        Weight [N].
    forces : sequence of pair of tuple of float
        Loads and the weight, each with its point [N, m].
    couple : tuple of float
        Sum of the couples [N m].
    couple_size : float
        Sum of the magnitudes of the couples [N m].
    rates : sequence of Rate
        Unknown accelerations.
    """

    mass: float
    center: Triple
    inertia: Rows
    point: Triple
    alpha: Triple
    acceleration: Triple
    gyroscopic: Triple
    weight: Triple
    forces: Sequence[tuple[Triple, Triple]]
    couple: Triple
    couple_size: float
    rates: Sequence[Rate]

    def times(self, vector: Triple) -> Triple:
        """Return the inertia tensor times a vector."""
        x, y, z = self.inertia
        return (dotted(x, vector), dotted(y, vector), dotted(z, vector))

    def asked(self, acceleration: Triple, alpha: Triple, about: Triple) -> tuple[Triple, Triple]:
        """Return m a_G [N] and the moment sum about a point [N m] that a motion asks for."""
        force = scaled(self.mass, acceleration)
        spin = add(self.times(alpha), self.gyroscopic)
        return force, add(spin, crossed(less(self.center, about), force))

    def asked_by(self, rate: Rate, about: Triple) -> tuple[Triple, Triple]:
        """Return force and moment about a point that a unit of an unknown acceleration asks for."""
        force = scaled(self.mass, rate.swing)
        return force, add(self.times(rate.axis), crossed(less(self.center, about), force))

    def given(self, about: Triple) -> tuple[Triple, Triple]:
        """Return the force of weight and loads [N] and their moment about a point [N m]."""
        total, moment = ZERO, self.couple
        for force, point in self.forces:
            total = add(total, force)
            moment = add(moment, crossed(less(point, about), force))
        return total, moment

    def twists(self, about: Triple) -> list[tuple[Triple, Triple]]:
        """Return velocity of a point and spin of each unknown motion at unit rate."""
        arm = less(about, self.point)
        return [
            (crossed(rate.axis, arm) if rate.axis != ZERO else rate.swing, rate.axis) for rate in self.rates
        ]


def plain_balance(
    body: RigidBody, motion: Motion, loads: Loads, gravity: Array, planar: bool
) -> PlainBalance:
    """Return a body, its motion and its loads in plain floats.

    Parameters
    ----------
    body : RigidBody
        Body as it stands at this instant.
    motion : Motion
        Motion at this instant.
    loads : Loads
        Loads without the weight.
    gravity : ndarray, shape (3,)
        Acceleration of free fall, pointing down [m/s^2].
    planar : bool
        Whether only the x-y plane counts; z of all points is then left out.

    Returns
    -------
    PlainBalance
        The same in plain floats, with the acceleration of the mass center.

    Raises
    ------
    InputError
        When a planar problem has gravity, a load or a motion out of the plane.

    Notes
    -----
    a_G = a_P + alpha x r_PG + omega x (omega x r_PG).

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, relative acceleration in rigid-body motion.
    """
    omega, alpha, pull = triple(motion.omega), triple(motion.alpha), triple(gravity)
    forces, points, couples = loads.forces.tolist(), loads.points.tolist(), loads.couples.tolist()
    center = triple(body.center)
    point = center if motion.point is None else triple(motion.point)
    given = triple(motion.acceleration)
    x, y, z = body.inertia.tolist()
    inertia = ((x[0], x[1], x[2]), (y[0], y[1], y[2]), (z[0], z[1], z[2]))
    if planar:
        _refuse_out_of_plane(pull, forces, couples, omega, alpha)
        center, point, given = _flat(center), _flat(point), _flat(given)
        points = [(px, py, 0.0) for px, py, _ in points]
        inertia = (ZERO, ZERO, (0.0, 0.0, z[2]))
    arm = less(center, point)
    swirl = add(crossed(alpha, arm), crossed(omega, crossed(omega, arm)))
    weight = scaled(float(body.mass), pull)
    acting = [(weight, center), *((_triple(f), _triple(p)) for f, p in zip(forces, points, strict=True))]
    couple, couple_size = ZERO, 0.0
    for one in couples:
        couple = add(couple, _triple(one))
        couple_size += dotted(_triple(one), _triple(one)) ** 0.5
    turns = [triple(axis) for axis in motion.free_turns]
    rates = [Rate("alpha", crossed(axis, arm), axis) for axis in turns]
    if motion.free_slide is not None:
        rates.append(Rate("the slide", triple(motion.free_slide), ZERO))
    spin = (dotted(inertia[0], omega), dotted(inertia[1], omega), dotted(inertia[2], omega))
    return PlainBalance(
        float(body.mass), center, inertia, point, alpha, add(given, swirl), crossed(omega, spin), weight,
        acting, couple, couple_size, rates,
    )  # fmt: skip


def _triple(values: Sequence[float]) -> Triple:
    """Return three plain floats as a tuple, without converting them again."""
    return (values[0], values[1], values[2])


def _flat(vector: Triple) -> Triple:
    """Return a vector without its z."""
    return (vector[0], vector[1], 0.0)


def _refuse_out_of_plane(
    gravity: Triple,
    forces: Sequence[Sequence[float]],
    couples: Sequence[Sequence[float]],
    omega: Triple,
    alpha: Triple,
) -> None:
    """Refuse what a planar balance would leave out without a word."""
    remedy = "Use the reactions in space"
    if gravity[2]:
        raise InputError("gravity", "in the x-y plane for a planar balance", remedy=remedy)
    for row, force in enumerate(forces, 1):
        if force[2]:
            raise InputError("loads", "forces in the x-y plane", remedy=remedy, where=f"force {row}")
    for row, couple in enumerate(couples, 1):
        if couple[0] or couple[1]:
            raise InputError("loads", "couples about z", remedy=remedy, where=f"couple {row}")
    for name, spin in (("omega", omega), ("alpha", alpha)):
        if spin[0] or spin[1]:
            raise InputError(name, "about z for a planar balance", remedy=remedy)
