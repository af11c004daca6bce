"""Axes: turned tensors, moments about any axis, principal axes, radius of gyration, flywheel moment."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ...core import drives, tensors
from ...core.errors import InputError, PhysicsError
from ...core.principal import principal
from ...core.tensors import shift_from_center, tensor_problem
from ...core.vectors import rotation_matrix
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..limits import NOT_NEGATIVE, POSITIVE
from ..reading.arguments import Scalar, Tensor, Vector
from ..units import kinds
from ..working import num, tensor_rows, vec
from .tensors import DYNAMICS, GROUP


def direction_of(argument: str, axis: Any) -> Any:
    """Return the direction of an axis given by a word x, y, z or by a vector; refuse one of no length."""
    if isinstance(axis, str):
        return np.eye(3)["xyz".index(axis)]
    if not axis.any(axis=-1).all():
        raise InputError(argument, "a direction: x, y, z or a vector that is not zero")
    return axis


def turned(inertia: Any, axis: Any, angle: Any) -> Any:
    return tensors.turned(inertia, rotation_matrix(direction_of("axis", axis), angle))


def turned_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    _, axis, angle = values
    rotation = rotation_matrix(direction_of("axis", axis), angle)
    return [
        f"Tensor of the body after it has turned by {num(np.degrees(angle))} deg about {axis_text(axis)} (active turn)",
        "I' = R I R^T, R =",
        *tensor_rows(rotation, ""),
        "I' =",
        *tensor_rows(answer),
    ]


def axis_text(axis: Any) -> str:
    return axis if isinstance(axis, str) else vec(axis)


def about_axis(inertia: Any, direction: Any, mass: Any, offset: Any) -> Any:
    """Moment of inertia about an axis through the tensor's point, or through a point at `offset` from G."""
    unit = direction_of("direction", direction)
    if (mass is None) != (offset is None):
        missing = "mass" if mass is None else "offset"
        raise InputError(missing, "given too: the parallel axis needs mass and offset")
    tensor = inertia if mass is None else shift_from_center(inertia, mass, offset)
    return tensors.axis_inertia(tensor, unit)


def about_axis_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    inertia, direction, mass, offset = values
    unit = direction_of("direction", direction)
    n = unit / np.linalg.norm(unit)
    through = tensors.axis_inertia(inertia, n)
    lines = [
        "Moment of inertia about an axis",
        f"n = {vec(n)}; n.I n = {num(through)} kg*m^2 through the point of the tensor",
    ]
    if mass is None:
        return lines
    distance = float(np.linalg.norm(np.cross(offset, n)))
    return [
        *lines,
        f"distance of the axis from the mass center = |d x n| = {num(distance)} m",
        f"I = {num(through)} + {num(mass)}*{num(distance)}^2 = {num(answer)} kg*m^2",
    ]


def principal_of(inertia: Any) -> PrincipalTerms:
    problem = tensor_problem(inertia)
    if problem:
        raise PhysicsError("", f"No body can have this tensor: {problem}")
    found = principal(inertia)
    return PrincipalTerms(found.moments, found.axes)


@dataclass(frozen=True, eq=False, slots=True)
class PrincipalTerms:
    """Principal moments (3,) [kg m^2] ascending, and axes (3, 3) [-] in columns, right-handed."""

    moments: Any
    axes: Any

    def __getattr__(self, label: str) -> Any:
        order = {"smallest": 0, "middle": 1, "largest": 2}
        if label in order:
            return self.moments[order[label]]
        raise AttributeError(label)


def principal_working(values: tuple[Any, ...], answer: PrincipalTerms) -> list[str]:
    inertia = values[0]
    left = answer.axes.T @ inertia @ answer.axes - np.diag(answer.moments)
    return [
        "Principal moments and axes: I e = I_k e",
        *(
            f"I{k + 1} = {num(answer.moments[k])} kg*m^2 about e{k + 1} = {vec(answer.axes[:, k])}"
            for k in range(3)
        ),
        f"Check: sum of the moments {num(answer.moments.sum())} = trace {num(np.trace(inertia))} kg*m^2",
        f"Largest term left off the diagonal: {num(np.abs(left).max())} kg*m^2",
    ]


def gyration(inertia: Any, mass: Any) -> Any:
    return tensors.radius_of_gyration(inertia, mass)


def gyration_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    inertia, mass = values
    return [
        "Radius of gyration about the same axis",
        f"k = sqrt(I / m) = sqrt({num(inertia)} / {num(mass)}) = {num(answer)} m",
    ]


def gd2_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    return [
        "Flywheel moment to moment of inertia",
        f"J = GD2 / 4 = {num(values[0])} / 4 = {num(answer)} kg*m^2",
    ]


def gd2_from_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    return ["Moment of inertia to flywheel moment", f"GD2 = 4 J = 4*{num(values[0])} = {num(answer)} kg*m^2"]


TENSOR = Arg("inertia", Tensor(kinds.INERTIA), "tensor of 3 x 3")
AXIS = Vector(kinds.RATIO, words_for=("x", "y", "z"))

FUNCTIONS = (
    CellFunction(
        name="RB_TURN",
        group=GROUP,
        line="Inertia tensor of a body after it has turned about an axis; sheet axes stay (active turn).",
        args=(
            TENSOR,
            Arg("axis", AXIS, "x, y, z or a direction vector"),
            Arg("angle", Scalar(kinds.ANGLE), "right-handed about the axis"),
        ),
        result=Result(
            (Field("inertia", kinds.INERTIA, "tensor after the turn, about the same point", Form.TENSOR),)
        ),
        kernel=turned,
        working=turned_working,
        source=f"{DYNAMICS}, rotation of axes",
        examples=(
            Example(
                '=RB_TURN({4.1,0,0;0,6.3,0;0,0,7.9}, "z", "35 deg")',
                "The bin's tensor along the sheet's axes when the table stands at 35 deg.",
            ),
        ),
    ),
    CellFunction(
        name="RB_AXIS_INERTIA",
        group=GROUP,
        line="Moment of inertia about any axis: through the tensor's point, or through a point off the mass center.",
        args=(
            TENSOR,
            Arg("direction", AXIS, "x, y, z or a direction vector"),
            Arg(
                "mass",
                Scalar(kinds.MASS),
                "mass, when the axis does not pass the mass center",
                POSITIVE,
                default=None,
            ),
            Arg("offset", Vector(kinds.LENGTH), "from a point of the axis to the mass center", default=None),
        ),
        result=Result((Field("inertia", kinds.INERTIA, "moment of inertia about the axis"),)),
        kernel=about_axis,
        working=about_axis_working,
        source=f"{DYNAMICS}, moment of inertia about any axis",
        examples=(
            Example(
                '=RB_AXIS_INERTIA({4.1,0,0;0,6.3,0;0,0,7.9}, "(1, 1, 0)")',
                "The bin about a skew lashing line through its mass center.",
            ),
        ),
    ),
    CellFunction(
        name="RB_PRINCIPAL",
        group=GROUP,
        line="Principal moments, ascending, and principal axes in columns, right-handed.",
        args=(TENSOR,),
        result=Result(
            (
                Field("moments", kinds.INERTIA, "three moments, ascending", Form.SPACE),
                Field("axes", None, "unit vectors in columns", Form.TENSOR, in_record=False),
                *(
                    Field(k, kinds.INERTIA, f"{k} principal moment")
                    for k in ("smallest", "middle", "largest")
                ),
            ),
            default="moments",
        ),
        kernel=principal_of,
        working=principal_working,
        source=f"{DYNAMICS}, principal axes",
        examples=(
            Example(
                '=RB_PRINCIPAL({12,-1.5,0;-1.5,9,0;0,0,20}, "largest")',
                "The stiffest axis of the bin against turning.",
            ),
        ),
    ),
    CellFunction(
        name="RB_RADIUS_OF_GYRATION",
        group=GROUP,
        line="Radius of gyration: sqrt(I / m), about the axis of I.",
        args=(
            Arg("inertia", Scalar(kinds.INERTIA), "moment of inertia about an axis", NOT_NEGATIVE),
            Arg("mass", Scalar(kinds.MASS), "mass", POSITIVE),
        ),
        result=Result((Field("radius", kinds.LENGTH, "radius of gyration"),)),
        kernel=gyration,
        working=gyration_working,
        source=f"{DYNAMICS}, radius of gyration",
        examples=(
            Example(
                '=RB_RADIUS_OF_GYRATION("29.2 kg*m^2", "38 kg", "mm")', "The bin about the tipper's hinge."
            ),
        ),
    ),
    CellFunction(
        name="RB_GD2",
        group=GROUP,
        line="Moment of inertia from a flywheel moment GD2 as catalogs print it: J = GD2 / 4.",
        args=(
            Arg(
                "gd2",
                Scalar(kinds.GD2),
                "flywheel moment, D the diameter of gyration; WR2 or WK2 is the inertia itself, in lb*ft^2",
                NOT_NEGATIVE,
            ),
        ),
        result=Result((Field("inertia", kinds.INERTIA, "moment of inertia"),)),
        kernel=drives.inertia_from_gd2,
        working=gd2_working,
        source="Common practice in motor catalogs",
        examples=(Example('=RB_GD2("0.16 kgf*m^2")', "Rotor inertia of the tipper's motor."),),
    ),
    CellFunction(
        name="RB_GD2_FROM",
        group=GROUP,
        line="Flywheel moment GD2 of a moment of inertia, to compare with a catalog: GD2 = 4 J.",
        args=(Arg("inertia", Scalar(kinds.INERTIA), "moment of inertia", NOT_NEGATIVE),),
        result=Result((Field("gd2", kinds.GD2, "flywheel moment"),)),
        kernel=drives.gd2_from_inertia,
        working=gd2_from_working,
        source="Common practice in motor catalogs",
        examples=(Example('=RB_GD2_FROM("0.04 kg*m^2")', "The same rotor in a catalog's terms."),),
    ),
)
