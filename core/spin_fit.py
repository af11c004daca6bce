"""The motion of a body from the velocities of its points: instant center and best-fitting spin."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from .errors import InputError, PhysicsError
from .vectors import cross

Array = NDArray[np.float64]

# Velocities typed to three digits may disagree by half a unit of the third one.
RIGID_TOLERANCE = 5e-3
# Below this part of the speed, what turning adds is rounding.
TURN_TOLERANCE = 1e-9
# Points that leave their own line by less than this part of their extent lie on it.
LINE_TOLERANCE = 1e-6


@dataclass(frozen=True, slots=True, eq=False)
class InstantCenter:
    """Instant center of a planar motion, from two points of a body.

    Parameters
    ----------
    center : ndarray, shape (..., 3)
        Point of the body (or of its extension) that is at rest at this instant [m].
    omega : ndarray, shape (...)
        Angular velocity about z, counter-clockwise positive [rad/s].
    stretch : ndarray, shape (...)
        Speed at which the two points move apart; zero for a rigid body [m/s].
    misfit : ndarray, shape (...)
        `stretch` as part of the greater of the two speeds [-].
    """

    center: Array
    omega: Array
    stretch: Array
    misfit: Array


@dataclass(frozen=True, slots=True, eq=False)
class SpinFit:
    """Rigid motion that fits the velocities of several points best, and how well it fits.

    Parameters
    ----------
    omega : ndarray, shape (3,)
        Angular velocity [rad/s].
    centroid : ndarray, shape (3,)
        Mean of the points [m].
    velocity : ndarray, shape (3,)
        Velocity of the body at the centroid [m/s].
    residuals : ndarray, shape (n, 3)
        Given velocity less the fitted one, point by point [m/s].
    largest : float
        Largest magnitude among the residuals [m/s].
    worst : int
        Row of the point with the largest residual, counted from 0 [-].
    rms : float
        Root of the mean square of the residuals' magnitudes [m/s].
    misfit : float
        `largest` as part of the greatest given speed [-].
    """

    omega: Array
    centroid: Array
    velocity: Array
    residuals: Array
    largest: float
    worst: int
    rms: float
    misfit: float

    @property
    def rigid(self) -> bool:
        """Whether the points can belong to one rigid body, allowing for velocities typed to 3 digits."""
        return self.misfit <= RIGID_TOLERANCE


def instant_center(point_a: Array, velocity_a: Array, omega: Array | float) -> Array:
    """Return the instant center of a planar motion from one point's velocity and the spin.

    Parameters
    ----------
    point_a : ndarray, shape (..., 3)
        Position of point A, z = 0 [m].
    velocity_a : ndarray, shape (..., 3)
        Velocity of point A, z = 0 [m/s].
    omega : ndarray, shape (...), or float
        Angular velocity about z, counter-clockwise positive [rad/s].

    Returns
    -------
    ndarray, shape (..., 3)
        Position of the instant center [m].

    Raises
    ------
    PhysicsError
        When a spin is zero: a body that only translates has no instant center.

    Notes
    -----
    r_AC = k x v_A / omega. The center has no velocity at this instant, but in general it has acceleration.

    References
    ----------
    R. C. Hibbeler, Engineering Mechanics: Dynamics, instantaneous center of zero velocity.
    """
    spin = np.asarray(omega, dtype=np.float64)
    if not np.all(spin):
        raise PhysicsError(
            "omega",
            "other than zero, as a body that only translates has no instant center",
            0.0,
            remedy="Every point of it has the velocity of A",
        )
    center = np.empty(np.broadcast_shapes(point_a.shape, velocity_a.shape, (*spin.shape, 3)))
    center[..., 0] = point_a[..., 0] - velocity_a[..., 1] / spin
    center[..., 1] = point_a[..., 1] + velocity_a[..., 0] / spin
    center[..., 2] = point_a[..., 2]
    return center


def instant_center_two(
    point_a: Array,
    velocity_a: Array,
    point_b: Array,
    velocity_b: Array,
    *,
    tolerance: float = RIGID_TOLERANCE,
) -> InstantCenter:
    """Return the instant center of a planar motion from the velocities of two points of a body.

    Parameters
    ----------
    point_a, point_b : ndarray, shape (..., 3)
        Positions of the points, z = 0 [m].
    velocity_a, velocity_b : ndarray, shape (..., 3)
        Velocities of the points, z = 0 [m/s].
    tolerance : float
        Largest stretching speed that still counts as rigid, as part of the greater speed [-].

    Returns
    -------
    InstantCenter
        Center, spin, and by how much the two velocities miss those of a rigid body.

    Raises
    ------
    InputError
        When A and B are the same point.
    PhysicsError
        When the points move apart or together, or the body does not turn.

    Notes
    -----
    The difference of the velocities must be perpendicular to AB; its size over |AB| is the spin. This covers
    both velocities perpendicular to AB too, where their perpendiculars fall together and the ratio of the
    speeds decides. Within the tolerance the center is the mean of those found from A and from B.

    References
    ----------
    R. C. Hibbeler, Engineering Mechanics: Dynamics, instantaneous center of zero velocity.
    """
    arm, change = (point_b - point_a)[..., :2], (velocity_b - velocity_a)[..., :2]
    length = np.hypot(arm[..., 0], arm[..., 1])
    reach = np.maximum(np.abs(point_a[..., :2]).max(axis=-1), length)
    _refuse_rows(
        length <= 1e-12 * reach,
        lambda k: InputError(
            "point_b", "another point than point A, as one point cannot tell the spin", where=_row(length, k)
        ),
    )
    speeds = (np.hypot(v[..., 0], v[..., 1]) for v in (velocity_a, velocity_b))
    speed = np.maximum(*speeds)
    stretch = (change * arm).sum(axis=-1) / length
    turning = (arm[..., 0] * change[..., 1] - arm[..., 1] * change[..., 0]) / length
    misfit = np.abs(stretch) / np.where(speed > 0.0, speed, 1.0)
    _refuse_rows(
        misfit > tolerance,
        lambda k: PhysicsError(
            "", _stretch_sentence(np.ravel(stretch)[k], np.ravel(misfit)[k]), where=_row(misfit, k)
        ),
    )
    at_rest = "Both points are at rest, so the body is at rest and has no instant center"
    equal = "The two velocities are equal: the body only translates and has no instant center"
    _refuse_rows(speed == 0.0, lambda k: PhysicsError("", at_rest, where=_row(speed, k)))
    _refuse_rows(
        np.abs(turning) <= TURN_TOLERANCE * speed, lambda k: PhysicsError("", equal, where=_row(speed, k))
    )
    omega = turning / length
    center = np.zeros((*omega.shape, 3))
    middle, mean = point_a[..., :2] + arm / 2, (velocity_a + velocity_b) / 2
    center[..., 0] = middle[..., 0] - mean[..., 1] / omega
    center[..., 1] = middle[..., 1] + mean[..., 0] / omega
    return InstantCenter(center, omega, stretch, misfit)


def _refuse_rows(bad: Any, refusal: Callable[[int], Exception]) -> None:
    """Raise for the first row that breaks a rule."""
    if np.any(bad):
        raise refusal(int(np.argmax(np.ravel(bad))))


def _row(values: Any, position: int) -> str:
    """Name a row where there are several."""
    return f"row {position + 1}" if np.ndim(values) else ""


def _stretch_sentence(stretch: float, misfit: float) -> str:
    """Word by how much two velocities cannot belong to one rigid body."""
    way = "apart" if stretch > 0 else "together"
    return (
        f"A and B cannot belong to one rigid body: along AB they move {way} at {abs(stretch):.4g} m/s, "
        f"{100 * misfit:.3g} % of the greater speed; on a rigid body both have the same velocity along AB"
    )


def omega_from(points: Array, velocities: Array, *, planar: bool = False) -> SpinFit:
    """Return the rigid motion that fits the velocities of several points of a body best.

    Parameters
    ----------
    points : ndarray, shape (n, 3)
        Positions of the points [m].
    velocities : ndarray, shape (n, 3)
        Their velocities [m/s].
    planar : bool
        Whether the body moves in the x-y plane only, so that its spin is about z and two points suffice.

    Returns
    -------
    SpinFit
        Spin, velocity of the centroid, residuals; `rigid` judges whether they can be one rigid body.

    Raises
    ------
    InputError
        When the tables differ in length or hold fewer than 2 points (3 in space).
    PhysicsError
        When the points leave the spin undetermined: all in one place, or in space all on one line.

    Notes
    -----
    Least squares over all points with equal weight. The normal equations have the form of an inertia tensor
    of unit masses; they are solved in the points' principal axes, from a singular value decomposition.

    References
    ----------
    First principles: minimum of the sum of |v_i - v_c - omega x r_i|^2.
    """
    count = len(points)
    if points.shape != velocities.shape:
        raise InputError("velocities", f"as many rows as points ({count})", len(velocities))
    needed = 2 if planar else 3
    if count < needed:
        raise InputError("points", f"at least {needed} points{'' if planar else ' in space'}", count)
    centroid = points.mean(axis=0)
    velocity = velocities.mean(axis=0)
    arms = points - centroid
    relative = velocities - velocity
    moment = cross(arms, relative).sum(axis=0)
    omega = _planar_spin(arms, moment, points) if planar else _spatial_spin(arms, moment, points)
    residuals = relative - cross(omega, arms)
    sizes = np.sqrt((residuals * residuals).sum(axis=1))
    worst = int(sizes.argmax())
    speed = float(np.sqrt((velocities * velocities).sum(axis=1)).max())
    largest = float(sizes[worst])
    misfit = largest / speed if speed else 0.0
    rms = float(np.sqrt(np.mean(sizes * sizes)))
    return SpinFit(omega, centroid, velocity, residuals, largest, worst, rms, misfit)


def _refuse_one_place(extent: float, points: Array) -> None:
    """Refuse points that are one point but for rounding."""
    if extent <= 1e-12 * float(np.abs(points).max(initial=0.0)) or extent == 0.0:
        raise PhysicsError("", "All points are in one place, so their velocities cannot tell the spin")


def _planar_spin(arms: Array, moment: Array, points: Array) -> Array:
    """Return the best spin about z from the moment of the relative velocities."""
    polar = float((arms[:, :2] ** 2).sum())
    _refuse_one_place(float(np.sqrt(polar)), points[:, :2])
    return np.array([0.0, 0.0, float(moment[2]) / polar])


def _spatial_spin(arms: Array, moment: Array, points: Array) -> Array:
    """Return the best spin in space, refusing points on one line."""
    _, extents, axes = np.linalg.svd(arms, full_matrices=False)
    _refuse_one_place(float(extents[0]), points)
    if extents[1] <= LINE_TOLERANCE * extents[0]:
        line = axes[0] * (1.0 if axes[0][np.abs(axes[0]).argmax()] > 0 else -1.0)
        text = ", ".join(f"{part:.3g}" for part in line + 0.0)
        raise PhysicsError(
            "",
            f"The points lie on one line, along ({text}), so their velocities leave the spin about it open",
            remedy="Add a point off that line, or treat the motion as planar",
        )
    squares = extents * extents
    principal = squares.sum() - squares
    solved: Array = axes.T @ ((axes @ moment) / principal)
    return solved
