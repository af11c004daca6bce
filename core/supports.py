"""Supports of one rigid body, as the forces and couples that each can put on it.

A force's direction is that of the force on the body: a roller's points from its track into the body, a
cable's points to its anchor. A link's force counts positive when the link is in tension.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import cos, isfinite, sin
from typing import Final

import numpy as np
from numpy.typing import NDArray

from .errors import InputError
from .triples import ZERO, Triple, crossed, less, scaled, size, triple

Array = NDArray[np.float64]

X: Final[Triple] = (1.0, 0.0, 0.0)
Y: Final[Triple] = (0.0, 1.0, 0.0)
Z: Final[Triple] = (0.0, 0.0, 1.0)
SHEET_AXES: Final = (X, Y, Z)

PLANAR_KINDS: Final = ("pin", "roller", "slot", "cable", "link", "fixed", "drive")
SPATIAL_KINDS: Final = (
    "held",
    "ball",
    "bearing",
    "thrust bearing",
    "hinge",
    "roller",
    "slot",
    "cable",
    "link",
    "fixed",
    "drive",
)
COMPONENTS: Final = ("fx", "fy", "fz", "mx", "my", "mz")
ONE_SIDED: Final = {"roller": "push", "cable": "pull"}
# Turned axes typed to four digits are still meant to be square to each other.
SQUARE_TOLERANCE: Final = 1e-3


@dataclass(frozen=True, slots=True)
class Hold:
    """One unit force or couple that a support can put on the body.

    Parameters
    ----------
    support : str
        Name of the support.
    component : str
        Which of its forces or couples: fx, fy, fz, mx, my, mz, force, tension, torque, radial 1, ...
    direction : tuple of float
        Unit vector of the force or couple on the body [-].
    point : tuple of float
        Point where the force acts [m].
    couple : bool
        Whether it is a couple.
    one_sided : str
        "push" or "pull" when it can only act along `direction`, else empty.
    """

    support: str
    component: str
    direction: Triple
    point: Triple
    couple: bool = False
    one_sided: str = ""


def short_name(name: str) -> str:
    """Return a support's name at a length that leaves room for a sentence.

    Parameters
    ----------
    name : str
        Name of the support.

    Returns
    -------
    str
        The name, its middle left out when it has more than 20 characters.

    Notes
    -----
    Both ends stay, as names often differ in the last word or number only.

    References
    ----------
    None needed.
    """
    return name if len(name) <= 20 else f"{name[:8]}...{name[-9:]}"


def planar_support(
    name: str,
    kind: str,
    point: Sequence[float] | Array,
    *,
    angle: float | None = None,
    to: Sequence[float] | Array | None = None,
) -> tuple[Hold, ...]:
    """Return what a support of a planar problem can put on the body.

    Parameters
    ----------
    name : str
        Name of the support.
    kind : str
        One of pin, roller (pushes only), slot (both ways), cable (pulls only), link, fixed, drive (a couple).
    point : array, shape (3,)
        Point of the body where it acts [m].
    angle : float, optional
        Direction of the force on the body, from x, counter-clockwise positive; for roller, slot and cable
        [rad].
    to : array, shape (3,), optional
        Anchor of a cable, far end of a link [m].

    Returns
    -------
    tuple of Hold
        Its forces and couples.

    Raises
    ------
    InputError
        When the kind is unknown, or what it needs is missing, or what it can't use is given.

    Notes
    -----
    Positive values: forces along +x and +y or along the angle, couples counter-clockwise, links in tension.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Statics, modeling the action of supports in
    two-dimensional analysis.
    """
    if kind not in PLANAR_KINDS:
        raise InputError(
            "kind", "one of " + ", ".join(PLANAR_KINDS), kind, where=f"support {short_name(name)}"
        )
    at = _point(point, name)
    if kind in ("roller", "slot", "cable", "link"):
        along = _planar_direction(name, kind, at, angle, to)
        label = "tension" if kind in ("link", "cable") else "force"
        return (Hold(name, label, along, at, False, ONE_SIDED.get(kind, "")),)
    if angle is not None or to is not None:
        given = "angle" if angle is not None else "to"
        raise InputError(given, f"left out, as a {kind} has none", where=f"support {short_name(name)}")
    forces = (Hold(name, "fx", X, at), Hold(name, "fy", Y, at))
    couple = Hold(name, "mz", Z, at, True)
    if kind == "pin":
        return forces
    return (*forces, couple) if kind == "fixed" else (couple,)


def _planar_direction(
    name: str, kind: str, at: Triple, angle: float | None, to: Sequence[float] | Array | None
) -> Triple:
    """Return the direction of a force from its angle or from its far end."""
    where = f"support {short_name(name)}"
    if to is not None and kind in ("roller", "slot"):
        raise InputError("to", f"left out, as a {kind} has no far end", remedy="Give `angle`", where=where)
    if angle is not None and kind == "link":
        raise InputError("angle", "left out, as a link's two ends tell it", remedy="Give `to`", where=where)
    if to is not None and angle is not None:
        raise InputError("angle", "left out when the anchor is given", angle, where=where)
    if to is not None:
        return _toward(name, kind, at, to)
    if angle is None:
        asked = {"cable": "given, or `to`: the anchor", "link": "given: the far end of the link"}
        argument = "to" if kind == "link" else "angle"
        rule = asked.get(kind, "given: the direction of the force on the body")
        raise InputError(argument, rule, where=where)
    if not isfinite(angle):
        raise InputError("angle", "a finite number", angle, where=where)
    # along a sheet axis the other part is a zero, not what is left of rounding pi
    across, up = (0.0 if abs(part) < 1e-15 else part for part in (cos(angle), sin(angle)))
    return (across, up, 0.0)


def spatial_support(
    name: str,
    kind: str,
    point: Sequence[float] | Array,
    *,
    direction: Sequence[float] | Array | None = None,
    to: Sequence[float] | Array | None = None,
    components: Sequence[str] = (),
    axes: Array | None = None,
) -> tuple[Hold, ...]:
    """Return what a support of a problem in space can put on the body.

    Parameters
    ----------
    name : str
        Name of the support.
    kind : str
        held (the components listed), ball (3 forces), bearing (2 radial forces), thrust bearing (radial and
        axial), hinge (3 forces and the 2 couples across its axis), roller (pushes only), slot (both ways),
        cable (pulls only), link, fixed, drive (a couple).
    point : array, shape (3,)
        Point of the body where it acts [m].
    direction : array, shape (3,), optional
        Force on the body for roller, slot and cable; axis for bearings, hinge and drive; any length [-].
    to : array, shape (3,), optional
        Anchor of a cable, far end of a link [m].
    components : sequence of str
        For held: any of fx, fy, fz, mx, my, mz.
    axes : ndarray, shape (3, 3), optional
        For held: turned axes of the components, unit vectors in columns [-].

    Returns
    -------
    tuple of Hold
        Its forces and couples.

    Raises
    ------
    InputError
        When the kind is unknown, or what it needs is missing, or what it can't use is given.

    Notes
    -----
    The two radial directions of a bearing are sheet axes when its axis is one, else square to it and to each
    other; its radial load is the root of the sum of the squares either way.

    References
    ----------
    J. L. Meriam, L. G. Kraige, Engineering Mechanics: Statics, modeling the action of forces in
    three-dimensional analysis.
    """
    where = f"support {short_name(name)}"
    if kind not in SPATIAL_KINDS:
        raise InputError("kind", "one of " + ", ".join(SPATIAL_KINDS), kind, where=where)
    at = _point(point, name)
    uses = {"held": ("components", "axes"), "link": ("to",), "cable": ("to", "direction")}
    allowed = uses.get(kind, () if kind in ("ball", "fixed") else ("direction",))
    given = {"direction": direction, "to": to, "components": components or None, "axes": axes}
    for argument, value in given.items():
        if value is not None and argument not in allowed:
            raise InputError(argument, f"left out, as a {kind} has none", where=where)
    if kind == "held":
        return _held(name, at, components, axes)
    if kind in ("ball", "fixed"):
        return _held(name, at, COMPONENTS[: 3 if kind == "ball" else 6], None)
    if to is not None and direction is not None:
        raise InputError("direction", "left out when the anchor is given", where=where)
    if to is None and direction is None:
        rule = "given: its axis" if kind in ("bearing", "thrust bearing", "hinge", "drive") else "given"
        raise InputError("to" if kind == "link" else "direction", rule, where=where)
    along = _toward(name, kind, at, to) if to is not None else _unit(direction, name)
    if kind in ("roller", "slot", "cable", "link"):
        label = "tension" if kind in ("link", "cable") else "force"
        return (Hold(name, label, along, at, False, ONE_SIDED.get(kind, "")),)
    return (Hold(name, "torque", along, at, True),) if kind == "drive" else _axle(name, kind, at, along)


def _axle(name: str, kind: str, at: Triple, axis: Triple) -> tuple[Hold, ...]:
    """Return what a bearing or hinge about an axis holds."""
    across = _across(axis)
    on_sheet_axes = all(direction in SHEET_AXES for direction in across)
    ends = [("x", "y", "z")[d.index(1.0)] for d in across] if on_sheet_axes else [" 1", " 2"]
    force, couple = ("f", "m") if on_sheet_axes else ("radial", "cross moment")
    holds = [Hold(name, force + end, d, at) for end, d in zip(ends, across, strict=True)]
    if kind != "bearing":
        label = "f" + "xyz"[SHEET_AXES.index(axis)] if axis in SHEET_AXES else "axial"
        holds.append(Hold(name, label, axis, at))
    if kind == "hinge":
        holds += [Hold(name, couple + end, d, at, True) for end, d in zip(ends, across, strict=True)]
    return tuple(holds)


def _across(axis: Triple) -> tuple[Triple, Triple]:
    """Return two unit vectors square to an axis and to each other, sheet axes when they can be."""
    sizes = [abs(part) for part in axis]
    largest = sizes.index(max(sizes))
    if sizes[largest] == 1.0 or sum(sizes) - sizes[largest] <= 1e-15:
        first, second = (SHEET_AXES[i] for i in range(3) if i != largest)
        return first, second
    guide = SHEET_AXES[sizes.index(min(sizes))]
    one = crossed(axis, guide)
    one = scaled(1.0 / size(one), one)
    return one, crossed(axis, one)


def _held(name: str, at: Triple, components: Sequence[str], axes: Array | None) -> tuple[Hold, ...]:
    """Return the listed components, along the sheet's axes or along turned ones."""
    where = f"support {short_name(name)}"
    if not components:
        raise InputError("components", "one or more of " + ", ".join(COMPONENTS), where=where)
    for position, component in enumerate(components):
        if component not in COMPONENTS:
            raise InputError("components", "any of " + ", ".join(COMPONENTS), component, where=where)
        if component in components[:position]:
            raise InputError("components", "listed once each", component, where=where)
    along = SHEET_AXES if axes is None else _turned_axes(axes, where)
    return tuple(
        Hold(name, component, along["xyz".index(component[1])], at, component[0] == "m")
        for component in components
    )


def _turned_axes(axes: Array, where: str) -> tuple[Triple, Triple, Triple]:
    """Return the columns of a rotation, refusing axes that are not square to each other."""
    if axes.shape != (3, 3) or float(np.abs(axes.T @ axes - np.eye(3)).max()) > SQUARE_TOLERANCE:
        raise InputError("axes", "three unit vectors in columns, square to each other", where=where)
    left, _, right = np.linalg.svd(axes)
    exact = left @ right
    return triple(exact[:, 0]), triple(exact[:, 1]), triple(exact[:, 2])


def _point(point: Sequence[float] | Array, name: str) -> Triple:
    """Return a point as plain floats, refusing what is not one."""
    if len(point) != 3 or not all(isfinite(part) for part in point):
        raise InputError("point", "three finite coordinates", where=f"support {short_name(name)}")
    return triple(point)


def _unit(direction: Sequence[float] | Array | None, name: str) -> Triple:
    """Return a direction at length one."""
    vector = ZERO if direction is None else triple(direction)
    length = size(vector)
    if length == 0.0 or not isfinite(length):
        raise InputError("direction", "a finite vector other than zero", where=f"support {short_name(name)}")
    x, y, z = scaled(1.0 / length, vector)
    # No minus zeros: directions are compared with the sheet's axes.
    return (x + 0.0, y + 0.0, z + 0.0)


def _toward(name: str, kind: str, at: Triple, to: Sequence[float] | Array) -> Triple:
    """Return the direction from the body's point to the far end of a cable or link."""
    end = _point(to, name)
    arm = less(end, at)
    if size(arm) <= 1e-12 * max(size(at), size(end)):
        raise InputError(
            "to", f"another point than the {kind}'s point on the body", where=f"support {short_name(name)}"
        )
    return _unit(arm, name)
