"""Whether a set of supports holds a body, and each in one way only; named motions when not.

Judged from the balance equations themselves, by singular values. Moments are divided by a length of the
support geometry and each unknown is scaled to a column of length one, so that millimetres and tonnes judge
like metres and kilograms.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import combinations
from math import atan2, degrees
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .errors import PhysicsError
from .supports import SHEET_AXES, Hold, short_name
from .triples import Triple, add, crossed, dotted, less, scaled, size, triple

Array = NDArray[np.float64]

# Directions typed as decimals miss each other by rounding only; below this the equations are singular.
SINGULAR: Final = 1e-9
# Above this condition number a millionth of the geometry turns the reactions over.
LARGEST_CONDITION: Final = 1e6
# A support takes part in a self-balanced set of reactions when its share is above rounding.
PART_OF_IT: Final = 1e-6
# A list of supports and components longer than this leaves out the components, to fit a cell's text.
LONGEST_LIST: Final = 110
# Rows of the six balance equations that planar work uses.
PLANAR_ROWS: Final = (0, 1, 5)
AXIS_NAMES: Final = ("x", "y", "z")


@dataclass(frozen=True, slots=True, eq=False)
class Equations:
    """The balance equations of a body: one column for each unknown, scaled.

    Parameters
    ----------
    matrix : ndarray, shape (3, n) or (6, n)
        Columns of length one; moment rows divided by `length` [-].
    holds : sequence of Hold
        Unknown reactions, the first columns.
    motions : sequence of str
        Names of the unknown motions, the last columns.
    about : tuple of float
        Point about which the moment rows are taken [m].
    length : float
        Length that divides the moment rows [m].
    twists : sequence of pair of tuple of float
        Velocity of `about` and spin of each unknown motion at unit rate [m/s or m, rad/s or 1].
    """

    matrix: Array
    holds: Sequence[Hold]
    motions: Sequence[str]
    about: Triple
    length: float
    twists: Sequence[tuple[Triple, Triple]] = ()

    @property
    def planar(self) -> bool:
        """Whether there are three equations."""
        return len(self.matrix) == 3

    @property
    def supports(self) -> Array:
        """Columns of the reactions alone."""
        return self.matrix[:, : len(self.holds)]


def factorised(equations: Equations) -> tuple[Array, Array, Array, float]:
    """Return the singular value decomposition of balance equations that have one answer.

    Parameters
    ----------
    equations : Equations
        Balance equations.

    Returns
    -------
    tuple
        Left vectors, singular values, right vectors transposed, condition number [-].

    Raises
    ------
    PhysicsError
        When a motion is left free, when supports fight each other, or when it is one but for rounding.

    Notes
    -----
    Singular below 1e-9 of the largest singular value; refused as ill-conditioned above 1e6.

    References
    ----------
    G. H. Golub, C. F. Van Loan, Matrix Computations, the singular value decomposition and numerical rank.
    """
    count, unknowns = equations.matrix.shape
    if unknowns == 0:
        raise PhysicsError("", "The body has no support and its motion is given: there is nothing to solve")
    left, values, right = np.linalg.svd(equations.matrix)
    rank = int((values > SINGULAR * values[0]).sum())
    if rank < count:
        raise _left_free(equations, left, right, rank)
    if unknowns > count:
        raise _too_many(equations, right[rank:])
    condition = float(values[0] / values[-1])
    if condition > LARGEST_CONDITION:
        motion = _motion(equations, left[:, -1:], 10.0 / condition)
        raise PhysicsError(
            "",
            f"The supports hold the body only just: it is almost free to {motion}, condition number "
            f"{condition:.2g}; reactions would follow from rounding",
            remedy="Check the points and angles of the supports",
        )
    return left, values, right, condition


def _left_free(equations: Equations, left: Array, right: Array, rank: int) -> PhysicsError:
    """Return the refusal that names the motion which the supports leave free."""
    count, unknowns = equations.matrix.shape
    free = _unasked(equations, left[:, rank:])
    motion = _motion(equations, free, 10.0 * SINGULAR)
    ways = count - rank
    lines = _lines_of_action(equations, free)
    text = f"{lines}, so the body is" if lines else "The supports leave the body"
    text += f" free to {motion}" + (f" (one of {ways} free motions)" if ways > 1 else "")
    if not lines and rank < unknowns:
        stuck = _stuck(equations, right[rank:])
        how = f"cannot be found together with {stuck[0]}" if stuck else "share a load in no definite way"
        text += f", while {_fighting(equations, right[rank:])} {how}"
    turns = motion.startswith("rotate") and not equations.motions
    return PhysicsError(
        "", text, remedy="Add a support or a drive, or ask for alpha" if turns else "Add a support"
    )


def _unasked(equations: Equations, free: Array) -> Array:
    """Return the motions that the supports leave free, less those whose rate is an unknown anyway."""
    supports = equations.supports
    if not equations.twists or not supports.size:
        return free
    left, values, _ = np.linalg.svd(supports)
    loose = left[:, int((values > SINGULAR * values[0]).sum()) :]
    asked = np.linalg.qr(np.array([_vector(equations, *twist) for twist in equations.twists]).T)[0]
    # An asked motion is taken off only where the supports leave it free as it is: cosine one.
    basis, cosines, _ = np.linalg.svd(loose.T @ asked)
    unasked: Array = loose @ basis[:, int((cosines > 1.0 - 1e-9).sum()) :]
    return unasked if unasked.size else free


def _vector(equations: Equations, velocity: Triple, omega: Triple) -> Array:
    """Return a motion as a left vector of the scaled equations, of length one."""
    turn = scaled(equations.length, omega)
    vector = np.array((velocity[0], velocity[1], turn[2]) if equations.planar else (*velocity, *turn))
    unit: Array = vector / np.sqrt(vector @ vector)
    return unit


def _lines_of_action(equations: Equations, free: Array) -> str:
    """Word what three or more planar forces have in common when they leave one motion free."""
    holds = equations.holds
    if not equations.planar or free.shape[1] != 1 or len(holds) < 3 or any(hold.couple for hold in holds):
        return ""
    names = _joined(list(dict.fromkeys(short_name(hold.support) for hold in holds)))
    velocity, omega = _twist(equations, free[:, 0])
    if abs(omega[2]) * equations.length <= 1e-6 * size(velocity):
        return f"The lines of action of {names} are parallel"
    point = _center(equations, velocity, omega)
    return f"The lines of action of {names} meet at {_place(equations, point)}"


def _twist(equations: Equations, vector: Array) -> tuple[Triple, Triple]:
    """Return velocity of the reference point and spin of a virtual motion from a left singular vector."""
    if equations.planar:
        x, y, turn = (float(part) for part in vector)
        return (x, y, 0.0), (0.0, 0.0, turn / equations.length)
    return triple(vector[:3]), scaled(1.0 / equations.length, triple(vector[3:]))


def _center(equations: Equations, velocity: Triple, omega: Triple) -> Triple:
    """Return the point of a motion's axis nearest to the reference point."""
    offset = scaled(1.0 / dotted(omega, omega), crossed(omega, velocity))
    return add(equations.about, offset)


def _motion(equations: Equations, free: Array, tolerance: float) -> str:
    """Name a free motion: one that a designer would name if there is such, else the general one."""
    supports = equations.supports
    asked = np.array([_vector(equations, *twist) for twist in equations.twists])
    for name, velocity, omega in _named_motions(equations):
        vector = _vector(equations, velocity, omega)
        if asked.size and float(np.abs(asked @ vector).max()) > 1.0 - 1e-9:
            continue
        if not supports.size or float(np.abs(vector @ supports).max()) <= tolerance:
            return name
    return _general_motion(equations, *_twist(equations, free[:, 0]))


def _named_motions(equations: Equations) -> list[tuple[str, Triple, Triple]]:
    """Return the motions that have a plain name: along the axes, about supports, about lines through two."""
    axes = 2 if equations.planar else 3
    zero = (0.0, 0.0, 0.0)
    named = [(f"slide along {AXIS_NAMES[i]}", SHEET_AXES[i], zero) for i in range(axes)]
    points = {hold.support: hold.point for hold in equations.holds}
    if equations.planar:
        return named + [
            (f"rotate about support {short_name(name)}", *_turn_about(equations, point, SHEET_AXES[2]))
            for name, point in points.items()
        ]
    for (first, start), (second, end) in combinations(points.items(), 2):
        line = less(end, start)
        if size(line) > 1e-9 * equations.length:
            about = f"rotate about the line through supports {short_name(first)} and {short_name(second)}"
            named.append((about, *_turn_about(equations, start, scaled(1.0 / size(line), line))))
    for name, point in points.items():
        for axis, label in zip(SHEET_AXES, AXIS_NAMES, strict=True):
            about = f"rotate about support {short_name(name)}, axis along {label}"
            named.append((about, *_turn_about(equations, point, axis)))
    return named


def _turn_about(equations: Equations, point: Triple, axis: Triple) -> tuple[Triple, Triple]:
    """Return velocity of the reference point and spin of a unit turn about an axis through a point."""
    omega = scaled(1.0 / equations.length, axis)
    return crossed(omega, less(equations.about, point)), omega


def _general_motion(equations: Equations, velocity: Triple, omega: Triple) -> str:
    """Word any motion: a slide with its direction, a turn with its center, a screw with its axis."""
    spin, speed = size(omega) * equations.length, size(velocity)
    if spin <= 1e-6 * speed:
        if equations.planar:
            angle = degrees(atan2(velocity[1], velocity[0])) % 180.0
            return f"slide along {angle:.4g} deg from x"
        return f"slide along {_direction(velocity)}"
    point = _center(equations, velocity, omega)
    if equations.planar:
        return f"rotate about {_place(equations, point)}"
    advance = dotted(velocity, omega) / dotted(omega, omega)
    screw = f"move as a screw of {advance:.4g} m/rad"
    verb = "rotate" if abs(advance) <= 1e-6 * equations.length else screw
    return f"{verb} about the axis through {_place(equations, point)} along {_direction(omega)}"


def _direction(vector: Triple) -> str:
    """Word a direction at length one, its largest part positive."""
    largest = max(vector, key=abs)
    x, y, z = scaled(1.0 / (size(vector) * (1.0 if largest > 0 else -1.0)), vector)
    return "(" + ", ".join(f"{0.0 if abs(part) < 1e-9 else part:.4g}" for part in (x, y, z)) + ")"


def _place(equations: Equations, point: Triple) -> str:
    """Word a point, rounding around zero shown as zero."""
    floor = 1e-9 * equations.length
    parts = point[:2] if equations.planar else point
    return "(" + ", ".join(f"{0.0 if abs(part) < floor else part:.4g}" for part in parts) + ") m"


def _fighting(equations: Equations, null: Array) -> str:
    """Return the supports whose reactions can balance each other without any load, with their components."""
    share = np.sqrt((null * null).sum(axis=0))
    parts: dict[str, list[str]] = {}
    for hold, part in zip(equations.holds, share[: len(equations.holds)], strict=True):
        if part > PART_OF_IT:
            parts.setdefault(hold.support, []).append(hold.component)
    text = _joined([f"{short_name(name)} ({', '.join(components)})" for name, components in parts.items()])
    return text if len(text) <= LONGEST_LIST else _joined([short_name(name) for name in parts])


def _stuck(equations: Equations, null: Array) -> list[str]:
    """Return the unknown motions that take part in what the equations leave open."""
    held = np.sqrt((null * null).sum(axis=0))[len(equations.holds) :] > PART_OF_IT
    return [name for name, stuck in zip(equations.motions, held, strict=True) if stuck]


def _too_many(equations: Equations, null: Array) -> PhysicsError:
    """Return the refusal that names the supports which hold the same motion."""
    stuck = _stuck(equations, null)
    if stuck:
        text = f"{stuck[0]} cannot be unknown: the supports hold the body against it"
        return PhysicsError("", text, remedy="Give its value, or free the supports")
    text = (
        f"Too many supports by {len(null)}: {_fighting(equations, null)} work against each other, "
        "so their share depends on stiffness"
    )
    return PhysicsError("", text, remedy="Free one, for example a pin to a slot")


def _joined(names: Sequence[str]) -> str:
    """Join names for a sentence, at most three of them."""
    shown = list(names[:3])
    if len(names) > 3:
        return ", ".join(shown) + f" and {len(names) - 3} more"
    return shown[0] if len(shown) == 1 else ", ".join(shown[:-1]) + " and " + shown[-1]
