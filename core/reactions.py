"""Support reactions of one rigid body in motion, in the plane and in space.

Sum of forces = m a_G and sum of moments = the general moment sum, for unknown reactions and, where asked, an
unknown angular acceleration. The answer is judged before it is given (determinacy), and after: the balance
is taken again about a second point.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .body import RigidBody
from .determinacy import PLANAR_ROWS, Equations, factorised
from .errors import InputError, PhysicsError
from .plain_balance import PlainBalance, plain_balance
from .states import Loads, Motion
from .supports import Hold, short_name
from .triples import ZERO, Triple, add, crossed, less, scale_of, scaled, size

Array = NDArray[np.float64]

# A one-sided support may miss by this part of the load: what rounding leaves of an exact zero.
ONE_SIDED_SLACK: Final = 1e-9
# Decimals of coordinates far from the origin carry rounding of this part of them.
COORDINATE_ROUNDING: Final = 1e-9
# Where the second balance is taken, from the mass center, in lengths of the arrangement.
CHECK_OFFSET: Final[Triple] = (0.71, -0.43, 0.59)


@dataclass(frozen=True, slots=True)
class Reaction:
    """One force or couple of a support on the body.

    Parameters
    ----------
    hold : Hold
        Support, component, direction, point.
    value : float
        Force [N] or couple [N m] along the direction.
    """

    hold: Hold
    value: float

    @property
    def support(self) -> str:
        """Name of the support."""
        return self.hold.support

    @property
    def component(self) -> str:
        """Which of the support's forces or couples this is."""
        return self.hold.component

    @property
    def vector(self) -> Triple:
        """Force [N] or couple [N m] on the body."""
        return scaled(self.value, self.hold.direction)


@dataclass(frozen=True, slots=True)
class Residual:
    """What the balance leaves over about a second point, from the results as given.

    Parameters
    ----------
    point : tuple of float
        The second point [m].
    force : tuple of float
        Forces less m a_G [N].
    moment : tuple of float
        Moments about the point less the moment sum about it [N m].
    relative : float
        The larger of both, as part of the forces and moments that enter [-].
    """

    point: Triple
    force: Triple
    moment: Triple
    relative: float


@dataclass(frozen=True, slots=True)
class SolvedReactions:
    """Reactions of all supports, the motion they go with, and the check of the balance.

    Parameters
    ----------
    reactions : tuple of Reaction
        One for each force and couple, in the order of the supports.
    alpha : tuple of float
        Angular acceleration, given or solved [rad/s^2].
    acceleration : tuple of float
        Acceleration of the mass center [m/s^2].
    rates : tuple of float
        Solved accelerations: about each free axis [rad/s^2], then along the free slide [m/s^2].
    weight : tuple of float
        Weight of the body [N].
    asked_force : tuple of float
        m a_G, what all forces add up to [N].
    asked_moment : tuple of float
        Moment sum about `about` that the motion asks for [N m].
    given_force : tuple of float
        Weight and loads together [N].
    given_moment : tuple of float
        Moment of weight and loads about `about` [N m].
    about : tuple of float
        Point about which the moments were taken to solve [m].
    condition : float
        Condition number of the scaled equations [-].
    residual : Residual
        Balance about a second point.
    """

    reactions: tuple[Reaction, ...]
    alpha: Triple
    acceleration: Triple
    rates: tuple[float, ...]
    weight: Triple
    asked_force: Triple
    asked_moment: Triple
    given_force: Triple
    given_moment: Triple
    about: Triple
    condition: float
    residual: Residual

    def value(self, support: str, component: str) -> float:
        """Return one force [N] or couple [N m] by support and component."""
        for reaction in self.reactions:
            if reaction.support == support and reaction.component == component:
                return reaction.value
        raise InputError("component", "one that the support holds", f"{support} {component}")

    def force_on_body(self, support: str) -> Triple:
        """Return the whole force [N] of one support on the body."""
        total = ZERO
        for reaction in self.reactions:
            if reaction.support == support and not reaction.hold.couple:
                total = add(total, reaction.vector)
        return total


def solve_reactions(
    body: RigidBody,
    motion: Motion,
    holds: Sequence[Hold],
    *,
    loads: Loads,
    gravity: Array,
    planar: bool,
) -> SolvedReactions:
    """Return the reactions of a body's supports in motion, with unknown accelerations where asked.

    Parameters
    ----------
    body : RigidBody
        Body as it stands at this instant.
    motion : Motion
        Motion at this instant; unknown angular accelerations and an unknown slide are solved too.
    holds : sequence of Hold
        What the supports can put on the body, from `planar_support` or `spatial_support`.
    loads : Loads
        Loads, without the weight.
    gravity : ndarray, shape (3,)
        Acceleration of free fall, pointing down; zero for no weight [m/s^2].
    planar : bool
        Three equations in the x-y plane, z of points being left out; else six.

    Returns
    -------
    SolvedReactions
        Forces and couples on the body, the accelerations, and the residual about a second point.

    Raises
    ------
    InputError
        When two supports have one name, or a planar problem has something out of the plane.
    PhysicsError
        When a motion is left free, when supports fight each other, when the geometry is as good as either,
        or when a support that only pushes or pulls would have to do the other.

    Notes
    -----
    sum F = m a_G, sum M_R = I alpha + omega x (I omega) + r_RG x m a_G about the mean R of the support
    points, solved by singular values. Rigid body, rigid supports, no friction but what the loads hold. In the
    plane the moments about x and y, which a body unsymmetric to the plane makes, are not shown.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, general equations of motion of a rigid body.
    """
    _check_names(holds)
    case = plain_balance(body, motion, loads, gravity, planar)
    about = _mean_point(case, holds, planar)
    length = _length(case, holds, about)
    given_force, given_moment = case.given(about)
    asked_force, asked_moment = case.asked(case.acceleration, case.alpha, about)
    wanted = (*less(asked_force, given_force), *scaled(1.0 / length, less(asked_moment, given_moment)))
    unknowns, condition = _unknowns(case, holds, about, length, wanted, planar)

    values, rates = unknowns[: len(holds)], tuple(unknowns[len(holds) :])
    alpha, acceleration = case.alpha, case.acceleration
    for unit, rate in zip(case.rates, rates, strict=True):
        alpha = add(alpha, scaled(rate, unit.axis))
        acceleration = add(acceleration, scaled(rate, unit.swing))
    reactions = tuple(Reaction(hold, value) for hold, value in zip(holds, values, strict=True))
    asked_force, asked_moment = case.asked(acceleration, alpha, about)
    scale = _force_scale(case, reactions, asked_force, alpha, length)
    _check_one_sided(reactions, scale)
    residual = _residual(case, reactions, acceleration, alpha, length, scale, planar)
    return SolvedReactions(
        reactions, alpha, acceleration, rates, case.weight, asked_force, asked_moment, given_force,
        given_moment, about, condition, residual,
    )  # fmt: skip


def _check_names(holds: Sequence[Hold]) -> None:
    """Refuse two supports of one name: their reactions could not be told apart."""
    seen: set[tuple[str, str]] = set()
    names: list[str] = []
    for hold in holds:
        key = (hold.support, hold.component)
        again = hold.support in names and names[-1] != hold.support
        if key in seen or again:
            raise InputError("supports", "named differently", hold.support, remedy="Rename one of them")
        seen.add(key)
        names.append(hold.support)


def _mean_point(case: PlainBalance, holds: Sequence[Hold], planar: bool) -> Triple:
    """Return the mean of the support points, each support's forces counted."""
    points = [hold.point for hold in holds if not hold.couple] or [case.center]
    share = 1.0 / len(points)
    x, y, z = (share * sum(part) for part in zip(*points, strict=True))
    return (x, y, 0.0 if planar else z)


def _length(case: PlainBalance, holds: Sequence[Hold], about: Triple) -> float:
    """Return the length that makes moments comparable with forces: how far supports and loads reach."""
    spread = scale_of([hold.point for hold in holds if not hold.couple], about)
    reach = scale_of([point for _, point in case.forces], about)
    rows = case.inertia
    gyration = ((rows[0][0] + rows[1][1] + rows[2][2]) / case.mass) ** 0.5 if case.mass > 0 else 0.0
    return max(spread, reach, gyration, COORDINATE_ROUNDING * size(about)) or 1.0


def _unknowns(
    case: PlainBalance,
    holds: Sequence[Hold],
    about: Triple,
    length: float,
    wanted: Sequence[float],
    planar: bool,
) -> tuple[list[float], float]:
    """Return reactions and unknown accelerations, and the condition number of their equations."""
    columns: list[tuple[float, ...]] = []
    for hold in holds:
        if hold.couple:
            columns.append((*ZERO, *scaled(1.0 / length, hold.direction)))
        else:
            arm = less(hold.point, about)
            columns.append((*hold.direction, *scaled(1.0 / length, crossed(arm, hold.direction))))
    for rate in case.rates:
        force, moment = case.asked_by(rate, about)
        columns.append((*scaled(-1.0, force), *scaled(-1.0 / length, moment)))
    if planar:
        columns = [tuple(column[row] for row in PLANAR_ROWS) for column in columns]
        wanted = [wanted[row] for row in PLANAR_ROWS]
    sizes = [sum(part * part for part in column) ** 0.5 for column in columns]
    for rate, norm in zip(case.rates, sizes[len(holds) :], strict=True):
        if norm == 0.0:
            raise PhysicsError("", f"{rate.name} cannot be unknown: the body has no inertia against it")
    matrix = np.array([[part / (n or 1.0) for part in c] for c, n in zip(columns, sizes, strict=True)]).T
    names = [rate.name for rate in case.rates]
    rows = 3 if planar else 6
    matrix = matrix.reshape(rows, len(columns))
    equations = Equations(matrix, holds, names, about, length, case.twists(about))
    left, values, right, condition = factorised(equations)
    answer = right.T @ ((left.T @ np.array(wanted)) / values)
    return [part / n + 0.0 for part, n in zip(answer.tolist(), sizes, strict=True)], condition


def _force_scale(
    case: PlainBalance, reactions: Sequence[Reaction], asked: Triple, alpha: Triple, length: float
) -> float:
    """Return the sum of all that enters the balance, as a force: what a residual is measured by."""
    total = size(asked) + (case.couple_size + size(add(case.times(alpha), case.gyroscopic))) / length
    for force, _ in case.forces:
        total += size(force)
    for reaction in reactions:
        total += abs(reaction.value) / (length if reaction.hold.couple else 1.0)
    return total


def _check_one_sided(reactions: Sequence[Reaction], scale: float) -> None:
    """Refuse a support that would have to act against the only way it can."""
    against = [r for r in reactions if r.hold.one_sided and r.value < -ONE_SIDED_SLACK * scale]
    if not against:
        return
    worst = min(against, key=lambda reaction: reaction.value)
    way, other = ("push", "pull") if worst.hold.one_sided == "push" else ("pull", "push")
    fate = "the body lifts off there" if way == "push" else "it goes slack"
    others = [short_name(reaction.support) for reaction in against if reaction is not worst]
    also = f"; the same holds for {', '.join(others[:3])}" if others else ""
    raise PhysicsError(
        "",
        f"Support {short_name(worst.support)} can only {way}, but the balance needs it to {other} with "
        f"{-worst.value:.6g} N: {fate}{also}",
        remedy="Check the direction of its force; use slot if it holds both ways, else leave it out"
        if way == "push"
        else "Check where its anchor is",
    )


def _residual(
    case: PlainBalance,
    reactions: Sequence[Reaction],
    acceleration: Triple,
    alpha: Triple,
    length: float,
    scale: float,
    planar: bool,
) -> Residual:
    """Return the balance about a second point, from vectors, without the matrix that was solved."""
    reach = max(length, scale_of([point for _, point in case.forces], case.center))
    point = add(case.center, scaled(reach, CHECK_OFFSET))
    if planar:
        point = (point[0], point[1], 0.0)
    force, moment = case.given(point)
    for reaction in reactions:
        vector = reaction.vector
        if reaction.hold.couple:
            moment = add(moment, vector)
        else:
            force = add(force, vector)
            moment = add(moment, crossed(less(reaction.hold.point, point), vector))
    asked_force, asked_moment = case.asked(acceleration, alpha, point)
    force, moment = less(force, asked_force), less(moment, asked_moment)
    if planar:
        force, moment = (force[0], force[1], 0.0), (0.0, 0.0, moment[2])
    arm = max(reach, scale_of([r.hold.point for r in reactions if not r.hold.couple], point))
    relative = max(size(force) / scale, size(moment) / (scale * arm)) if scale else 0.0
    return Residual(point, force, moment, relative)
