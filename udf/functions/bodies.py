"""Bodies: the roll-up of a parts list, plates by outline, and turning a whole body."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ...core.body import combine_arrays, inertia_about
from ...core.errors import InputError
from ...core.plates import section_body
from ...core.tensors import offset_tensor, turned
from ...core.vectors import rotation_matrix
from ..body_terms import BodyTerms, body_fields
from ..declaration import WHAT, Arg, CellFunction, Example, Field, Form, Result
from ..limits import POSITIVE
from ..reading.arguments import Scalar, Vector
from ..reading.bodies import AT_CENTER, AT_ORIGIN, BODY, MOMENTS, needs_space
from ..reading.outlines import Outline
from ..reading.parts import PARTS, PartsList
from ..units import kinds
from ..working import num, tensor_rows, vec
from .axes import axis_text, direction_of
from .tensors import DYNAMICS, GROUP


def is_center(about: Any) -> bool:
    return about is None or (isinstance(about, str) and about == AT_CENTER)


def rolled_up(parts: PartsList, about: Any) -> BodyTerms:
    """Sum a parts list; the tensor is about the mass center or about the point `about`."""
    body = combine_arrays(parts.masses, parts.centers, parts.inertias)
    if is_center(about):
        point, tensor = body.center, body.inertia
    else:
        point = np.zeros(3) if isinstance(about, str) else about
        tensor = inertia_about(body, point)
    table = Contributions(parts, point, tensor, body.mass)
    problem = (
        ""
        if is_center(about)
        else "one result when `about` is given: a body's record is about its mass center"
    )
    return BodyTerms(body.mass, body.center, tensor, table, record_problem=problem)


@dataclass(frozen=True, eq=False, slots=True)
class Contributions:
    """What each part adds to the mass and to the moments of inertia about a point; a table when looked at."""

    parts: Any
    point: Any
    tensor: Any
    mass: float

    def tensors(self) -> Any:
        """Return the tensor of each part about the point."""
        return self.parts.inertias + offset_tensor(self.parts.masses, self.parts.centers - self.point)

    def __iter__(self) -> Any:
        yield [
            "part",
            "mass [kg]",
            "of mass",
            *(f"{k} [kg*m^2]" for k in MOMENTS),
            *(f"of {k}" for k in MOMENTS),
        ]
        moments = np.diagonal(self.tensors(), axis1=1, axis2=2)
        whole = np.diagonal(self.tensor)
        shares = np.divide(moments, whole, out=np.zeros_like(moments), where=whole > 0.0)
        for name, m, own, share in zip(self.parts.names, self.parts.masses, moments, shares, strict=True):
            yield [name, m, m / self.mass, *own, *share]
        yield ["whole body", self.mass, 1.0, *whole, *(1.0 if w > 0.0 else 0.0 for w in whole)]


def rollup_working(values: tuple[Any, ...], answer: BodyTerms) -> list[str]:
    parts, point = answer.contributions.parts, answer.contributions.point
    tensors = answer.contributions.tensors()
    lines = [
        "Roll-up: m = sum m_i, m r_G = sum m_i r_i, I = sum (I_i + m_i ((d.d) E - d d^T)), d from the point"
    ]
    most = 40
    for name, m, c, t in list(zip(parts.names, parts.masses, parts.centers, tensors, strict=True))[:most]:
        lines.append(
            f"{name[:40]}: m = {num(m)} kg at {vec(c)} m; Ixx, Iyy, Izz about the point = "
            f"{', '.join(num(t[k, k]) for k in range(3))} kg*m^2"
        )
    if len(parts.names) > most:
        lines.append(f"... and {len(parts.names) - most} more rows")
    return [
        *lines,
        f"m = {num(answer.mass)} kg; mass center = {vec(answer.center)} m",
        f"Tensor about {vec(point)} m{' (the mass center)' if is_center(values[1]) else ''}, sheet axes:",
        *tensor_rows(answer.inertia),
        f"Residual: sum m_i (r_i - r_G) = "
        f"{vec((parts.masses[:, None] * (parts.centers - answer.center)).sum(axis=0))} kg*m",
    ]


def plate(outline: Any, thickness: Any, density: Any) -> BodyTerms:
    """Body of a flat plate in the x-y plane, thickness to both sides of z = 0."""
    for name, value in (("thickness", thickness), ("density", density)):
        if type(value) is not float:
            raise InputError(name, "one number for one plate; got a column")
    body = section_body(outline.section, thickness, density)
    return BodyTerms(body.mass, body.center, body.inertia)


def plate_working(values: tuple[Any, ...], answer: BodyTerms) -> list[str]:
    outline, thickness, density = values
    x, y = outline.corners[:, 0], outline.corners[:, 1]
    gross = abs(0.5 * float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y)))
    area = answer.mass / (density * thickness)
    return [
        "Plate by its outline: area and its moments from the corners, each side a trapezoid to the axis",
        f"outline of {len(x)} corners: A = |sum (x_i y_j - x_j y_i)| / 2 = {num(gross)} m^2",
        f"{len(outline.holes)} cut-outs and {len(outline.round_holes)} round holes leave {num(area)} m^2",
        f"m = A t density = {num(area)}*{num(thickness)}*{num(density)} = {num(answer.mass)} kg",
        f"mass center = {vec(answer.center)} m; tensor about it:",
        *tensor_rows(answer.inertia),
    ]


def moved(body: Any, axis: Any, angle: Any, through: Any) -> BodyTerms:
    """Body after an active turn about a line through a point."""
    rigid = needs_space(body)
    point = rigid.center if isinstance(through, str) and through == AT_CENTER else through
    if isinstance(point, str):
        point = np.zeros(3)
    direction = direction_of("axis", axis)
    for name, value in (("axis", direction), ("through", point)):
        if np.ndim(value) != 1:
            raise InputError(name, "one row: a body turns about one line; only `angle` may be a column")
    rotation = rotation_matrix(direction, angle)
    center = point + rotation @ (rigid.center - point)
    tensor = turned(rigid.inertia, rotation)
    if type(angle) is float:
        return BodyTerms(rigid.mass, center, tensor)
    problem = "given when columns are handed in: one result for each row"
    return BodyTerms(np.full(len(angle), rigid.mass), center, tensor, record_problem=problem)


def moved_working(values: tuple[Any, ...], answer: BodyTerms) -> list[str]:
    body, axis, angle, through = values
    rotation = rotation_matrix(direction_of("axis", axis), angle)
    where = f"the {through}" if isinstance(through, str) else f"{vec(through)} m"
    return [
        f"Body turned by {num(np.degrees(angle))} deg about {axis_text(axis)} through {where}",
        "r' = P + R (r - P), I' = R I R^T, R =",
        *tensor_rows(rotation, ""),
        f"m = {num(body.body.mass)} kg; mass center {vec(body.body.center)} m -> {vec(answer.center)} m",
        "tensor about the mass center, sheet axes:",
        *tensor_rows(answer.inertia),
    ]


FUNCTIONS = (
    CellFunction(
        name="RB_ROLLUP",
        group=GROUP,
        line="Mass, mass center and inertia tensor of a parts list with shapes, turns, cut-outs and patterns.",
        args=(
            Arg("parts", PARTS, "table with a header row; one part a row"),
            WHAT,
            Arg(
                "about",
                Vector(kinds.LENGTH, words_for=(AT_CENTER, AT_ORIGIN)),
                "point of the tensor; the mass center when omitted",
                default=None,
            ),
        ),
        result=Result(
            (
                *body_fields("mass center", "tensor about the point"),
                Field("contributions", None, "what each part adds", Form.TABLE, in_record=False),
            ),
        ),
        kernel=rolled_up,
        working=rollup_working,
        source=f"{DYNAMICS}, composite bodies",
        examples=(
            Example(
                '=RB_ROLLUP(B4:K12, "mass", , "kg")',
                "Mass of the tilting table with its bin from the parts list in B4:K12.",
            ),
        ),
    ),
    CellFunction(
        name="RB_PLATE",
        group=GROUP,
        line="Mass, mass center and tensor of a flat plate from its outline, with cut-outs and round holes.",
        args=(
            Arg("outline", Outline(), "corners x y, or a table loop, x, y, D for holes"),
            Arg("thickness", Scalar(kinds.LENGTH), "half of it on each side of the x-y plane", POSITIVE),
            Arg("density", Scalar(kinds.DENSITY), "density of the material", POSITIVE),
        ),
        result=Result(body_fields("mass center", "tensor about the mass center"), gathers=True),
        kernel=plate,
        working=plate_working,
        source="Moments of a polygon from its corners (Green's theorem); prism of uniform density",
        examples=(
            Example(
                '=RB_PLATE({0,0;0.6,0;0.6,0.25;0.15,0.4;0,0.4}, "12 mm", "7850 kg/m^3", "mass")',
                "Mass of the tipper's cheek plate from its corners.",
            ),
        ),
    ),
    CellFunction(
        name="RB_MOVE",
        group=GROUP,
        line="A whole body turned about a line: mass center and tensor go along; sheet axes stay.",
        args=(
            Arg("body", BODY, "mass, mass center and inertia, as RB_ROLLUP gives them"),
            Arg("axis", Vector(kinds.RATIO, words_for=("x", "y", "z")), "x, y, z or a direction vector"),
            Arg("angle", Scalar(kinds.ANGLE), "right-handed about the axis"),
            Arg("through", Vector(kinds.LENGTH, words_for=(AT_ORIGIN, AT_CENTER)), "a point of the line"),
        ),
        result=Result(body_fields("mass center", "tensor about the mass center")),
        kernel=moved,
        working=moved_working,
        source=f"{DYNAMICS}, rotation of axes",
        examples=(
            Example(
                '=RB_MOVE(B4:D14, "z", "35 deg", "(0, 0) m", "y", "mm")',
                "Height of the tilted table's mass center above its hinge.",
            ),
        ),
    ),
)
