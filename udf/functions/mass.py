"""Mass: shapes, tensors, the parallel axis, and the roll-up of a parts list."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ...core.body import combine_arrays, inertia_about
from ...core.errors import InputError, PhysicsError
from ...core.shapes import complete_sizes, shape_body, shape_mass, shape_named
from ...core.tensors import (
    offset_tensor,
    shift_from_center,
    shift_moment_from_center,
    shift_moment_to_center,
    shift_to_center,
    tensor_from_terms,
    tensor_problem,
)
from .. import kinds
from ..arguments import Offset, Scalar, Tensor, Vector
from ..bodies import INTEGRALS, MOMENTS, PRODUCT_WORDS, PRODUCTS, TENSOR_TERMS, products_form
from ..declaration import WHAT, Arg, CellFunction, Example, Field, Form, Result
from ..limits import NOT_NEGATIVE, POSITIVE
from ..parts import PARTS, read_parts
from ..sizes import Sizes
from ..words import Choice, Text
from ..working import num, tensor_rows, vec

GROUP = "Mass"
DYNAMICS = "Meriam, Kraige: Dynamics, appendix B (mass moments of inertia)"
AT_CENTER, AT_ORIGIN = "mass center", "origin"


@dataclass(frozen=True, eq=False, slots=True)
class BodyTerms:
    """Mass [kg], center [m] and tensor [kg m^2] under the names that `what` takes."""

    mass: Any
    center: Any
    inertia: Any
    contributions: Any = None
    products: str = TENSOR_TERMS
    record_problem: str = ""  # why the whole record must not be handed out

    def __getattr__(self, label: str) -> Any:
        if label == "offset":
            return self.center
        if label in ("x", "y", "z"):
            return self.center[..., "xyz".index(label)]
        if label in (*MOMENTS, *PRODUCTS):
            return self.inertia[..., "xyz".index(label[1]), "xyz".index(label[2])]
        raise AttributeError(label)


TERM_FIELDS = (
    *(Field(k, kinds.INERTIA, f"moment of inertia about {k[1]}") for k in MOMENTS),
    *(Field(k, kinds.INERTIA, "product of inertia, as a tensor term") for k in PRODUCTS),
    Field("products", None, "form of the products", Form.TEXT),
)


def shape_terms(shape: str, mass: Any, sizes: dict[str, Any]) -> BodyTerms:
    found = shape_body(shape, mass, sizes)
    return BodyTerms(np.asarray(mass) + np.zeros(found.inertia.shape[:-2]), found.offset, found.inertia)


def shape_text(shape: str, sizes: dict[str, Any]) -> list[str]:
    """Return name, datum and sizes of a shape, first row."""
    row = shape_named(shape)
    full = {k: np.ravel(v)[0] for k, v in complete_sizes(row, sizes).items()}
    given = ", ".join(f"{k} = {num(v)} {'rad' if k == 'angle' else 'm'}" for k, v in full.items())
    return [f"{row.name[0].upper()}{row.name[1:]}. {row.datum}", *([given] if given else []), *row.working]


def shape_working(values: tuple[Any, ...], answer: BodyTerms) -> list[str]:
    shape, mass, sizes = values
    inertia, offset = answer.inertia.reshape(-1, 3, 3)[0], answer.center.reshape(-1, 3)[0]
    rows = len(answer.inertia.reshape(-1, 3, 3))
    lines = [
        *shape_text(shape, sizes),
        f"m = {num(np.ravel(mass)[0])} kg; mass center from the datum = {vec(offset)} m",
        "Tensor about the mass center, along the shape's axes:",
        *tensor_rows(inertia),
    ]
    return lines if rows == 1 else [*lines, f"Row 1 of {rows}; the other rows go the same way."]


def mass_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    shape, density, sizes = values
    first, rows = np.ravel(answer)[0], np.size(answer)
    rho = np.ravel(density)[0]
    lines = [
        *shape_text(shape, sizes)[:3],
        f"m = density * volume = {num(rho)} kg/m^3 * {num(first / rho)} m^3 = {num(first)} kg",
    ]
    return lines if rows == 1 else [*lines, f"Row 1 of {rows}; the other rows go the same way."]


def from_terms(Ixx: Any, Iyy: Any, Izz: Any, Ixy: Any, Iyz: Any, Izx: Any, products: str | None) -> Any:
    form = products_form("products", products, [Ixy, Iyz, Izx])
    return tensor_from_terms(Ixx, Iyy, Izz, Ixy, Iyz, Izx, products=form)


def checked_terms(Ixx: Any, Iyy: Any, Izz: Any, Ixy: Any, Iyz: Any, Izx: Any, products: str | None) -> Any:
    """Tensor from its terms, refused when no body can have it."""
    for name, value in zip((*MOMENTS, *PRODUCTS), (Ixx, Iyy, Izz, Ixy, Iyz, Izx), strict=True):
        if type(value) is not float:
            raise InputError(name, "one number; a column makes no single tensor")
    tensor = from_terms(Ixx, Iyy, Izz, Ixy, Iyz, Izx, products)
    problem = tensor_problem(tensor)
    if problem:
        raise PhysicsError("", f"No body can have this tensor: {problem}")
    return tensor


def terms_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    word = values[6]
    how = {
        None: "No products of inertia: z, y and x are principal axes",
        TENSOR_TERMS: "Products given as tensor terms: they stand in the tensor as they are",
        INTEGRALS: "Products given as integrals of xy dm: the tensor holds minus them",
    }[word]
    return [how, "Inertia tensor =", *tensor_rows(answer)]


def scalar_arm(offset: Any) -> Any:
    """Return the distance from the z axis for a planar parallel axis step."""
    if type(offset) is np.ndarray and offset.shape[-1:] == (3,) and offset.ndim <= 2:
        return np.hypot(offset[..., 0], offset[..., 1])
    return offset


def shifted(inertia: Any, mass: Any, offset: Any) -> Any:
    if is_tensor(inertia):
        return shift_from_center(inertia, mass, need_vector(offset))
    return shift_moment_from_center(inertia, mass, scalar_arm(offset))


def shifted_back(inertia: Any, mass: Any, offset: Any) -> Any:
    if is_tensor(inertia):
        result = shift_to_center(inertia, mass, need_vector(offset))
        problem = tensor_problem(result)
        if problem:
            raise PhysicsError("", f"The tensor is too small for this mass and offset: {problem}")
        return result
    result = shift_moment_to_center(inertia, mass, scalar_arm(offset))
    if np.any(np.asarray(result) < 0.0):
        raise PhysicsError(
            "",
            "The inertia is smaller than mass * offset^2, so it cannot be about an axis at this offset",
            remedy="Check whether it is already about the mass center",
        )
    return result


def is_tensor(inertia: Any) -> bool:
    return type(inertia) is np.ndarray and inertia.shape == (3, 3)


def need_vector(offset: Any) -> Any:
    if type(offset) is float or offset.shape[-1:] != (3,):
        raise InputError(
            "offset",
            "a vector x y z for a tensor; a distance does not tell the direction",
            remedy="Give the offset of the mass center in three cells",
        )
    if offset.ndim != 1:
        raise InputError("offset", "one vector for a tensor; a column of tensors cannot be given")
    return offset


def shift_working(values: tuple[Any, ...], answer: Any, back: bool = False) -> list[str]:
    inertia, mass, offset = values
    sign = "-" if back else "+"
    title = (
        "Parallel axis, from the parallel axis at the offset to the mass center"
        if back
        else "Parallel axis, from the mass center to the parallel axis at the offset"
    )
    if is_tensor(inertia):
        return [
            title,
            f"I' = I {sign} m ((d.d) E - d d^T), d = {vec(offset)} m, m = {num(mass)} kg",
            "m ((d.d) E - d d^T) =",
            *tensor_rows(offset_tensor(mass, offset)),
            "I' =",
            *tensor_rows(answer),
        ]
    d = scalar_arm(offset)
    return [
        title,
        f"I' = I {sign} m d^2 = {num(inertia)} {sign} {num(mass)}*{num(d)}^2 = {num(answer)} kg*m^2",
    ]


def judged(inertia: Any) -> str:
    problem = tensor_problem(inertia)
    return "OK" if problem is None else problem


def judged_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    moments = np.linalg.eigvalsh(values[0])
    low, middle, high = (num(m) for m in moments)
    return [
        "A body's tensor is symmetric, its principal moments are not negative, and none exceeds the sum of the others",
        f"principal moments {low}, {middle}, {high} kg*m^2",
        f"{low} + {middle} = {num(moments[0] + moments[1])} against {high}",
        str(answer),
    ]


def is_center(about: Any) -> bool:
    return about is None or (isinstance(about, str) and about == AT_CENTER)


def rolled_up(data: Any, about: Any) -> BodyTerms:
    """Sum a parts list; the tensor is about the mass center or about the point `about`."""
    parts = read_parts("parts", data)
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


SHAPE = Arg("shape", Text(example="tube"), "name of the shape, like tube, box, solid cylinder, disk, cone")
SIZES = Arg("sizes", Sizes(), "sizes by label")
INERTIA = Arg(
    "inertia", Tensor(kinds.INERTIA, planar=True), "one moment of inertia, or the tensor", NOT_NEGATIVE
)
MASS = Arg("mass", Scalar(kinds.MASS), "mass", POSITIVE)
SHIFTED = Result((Field("inertia", kinds.INERTIA, "shifted inertia", Form.TENSOR),))
OFFSET = Arg("offset", Offset(kinds.LENGTH), "distance of the axes, or vector to the mass center")

FUNCTIONS = (
    CellFunction(
        name="RB_SHAPE",
        group=GROUP,
        line="Inertia tensor of a shape about its mass center; also offset of the mass center from the datum.",
        args=(SHAPE, MASS, SIZES),
        result=Result(
            (
                Field("inertia", kinds.INERTIA, "tensor about the mass center", Form.TENSOR, in_record=False),
                Field("offset", kinds.LENGTH, "mass center from the datum", Form.VECTOR, in_record=False),
                Field("mass", kinds.MASS, "mass"),
                *(Field(k, kinds.LENGTH, f"mass center from the datum along {k}") for k in "xyz"),
                *TERM_FIELDS,
            ),
            default="inertia",
        ),
        kernel=shape_terms,
        working=shape_working,
        source=f"{DYNAMICS}; each shape names its own source",
        examples=(
            Example(
                '=RB_SHAPE("tube", "18.4 kg", "OD 114.3 mm; ID 101.7 mm; L 520 mm", "Izz", "kg*mm^2")',
                "The tipper's hinge tube about its own axis.",
            ),
        ),
    ),
    CellFunction(
        name="RB_SHAPE_MASS",
        group=GROUP,
        line="Mass of a shape from its density and sizes.",
        args=(SHAPE, Arg("density", Scalar(kinds.DENSITY), "density of the material", POSITIVE), SIZES),
        result=Result((Field("mass", kinds.MASS, "mass"),)),
        kernel=shape_mass,
        working=mass_working,
        source=f"{DYNAMICS}; volumes of solids",
        examples=(
            Example(
                '=RB_SHAPE_MASS("tube", "7850 kg/m^3", "OD 114.3 mm; ID 101.7 mm; L 520 mm")',
                "What the hinge tube weighs in steel.",
            ),
        ),
    ),
    CellFunction(
        name="RB_TENSOR",
        group=GROUP,
        line="Inertia tensor from its six terms, with the form of the products told.",
        args=(
            *(
                Arg(k, Scalar(kinds.INERTIA), f"moment of inertia about {k[1]}", NOT_NEGATIVE)
                for k in MOMENTS
            ),
            *(
                Arg(k, Scalar(kinds.INERTIA), "product of inertia; 0 when omitted", default=0.0)
                for k in PRODUCTS
            ),
            Arg(
                "products",
                Choice((TENSOR_TERMS, INTEGRALS), PRODUCT_WORDS),
                "form of the products; needed when one is not zero",
                default=None,
            ),
        ),
        result=Result((Field("inertia", kinds.INERTIA, "tensor, tensor form", Form.TENSOR),)),
        kernel=checked_terms,
        working=terms_working,
        source=f"{DYNAMICS}, products of inertia",
        examples=(
            Example(
                '=RB_TENSOR("12 kg*m^2", "9 kg*m^2", "20 kg*m^2", "1.5 kg*m^2", 0, 0, "integrals")',
                "The bin's tensor from a CAD report that prints integrals.",
            ),
        ),
    ),
    CellFunction(
        name="RB_SHIFT",
        group=GROUP,
        line="Parallel axis: from the mass center to the parallel axis (or point) at the offset.",
        args=(INERTIA, MASS, OFFSET),
        result=SHIFTED,
        kernel=shifted,
        working=shift_working,
        source=f"{DYNAMICS}, parallel axis theorem",
        examples=(
            Example('=RB_SHIFT("6.1 kg*m^2", "38 kg", "780 mm")', "The bin about the hinge of the tipper."),
        ),
    ),
    CellFunction(
        name="RB_SHIFT_BACK",
        group=GROUP,
        line="Parallel axis backward: from the axis (or point) at the offset to the mass center.",
        args=(INERTIA, MASS, OFFSET),
        result=SHIFTED,
        kernel=shifted_back,
        working=lambda values, answer: shift_working(values, answer, back=True),
        source=f"{DYNAMICS}, parallel axis theorem",
        examples=(
            Example(
                '=RB_SHIFT_BACK("29.2 kg*m^2", "38 kg", "780 mm")',
                "The bin about its mass center, from a swing test about the hinge.",
            ),
        ),
    ),
    CellFunction(
        name="RB_TENSOR_CHECK",
        group=GROUP,
        line="OK, or the sentence why no body can have this inertia tensor.",
        args=(Arg("inertia", Tensor(kinds.INERTIA), "tensor about any one point"),),
        result=Result((Field("verdict", None, "OK or the reason", Form.TEXT),)),
        kernel=judged,
        working=judged_working,
        source=f"{DYNAMICS}; triangle inequality of principal moments",
        examples=(
            Example(
                '=RB_TENSOR_CHECK(RB_TENSOR("12 kg*m^2", "9 kg*m^2", "20 kg*m^2"))',
                "Whether a measured tensor of the bin is possible.",
            ),
        ),
    ),
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
                Field("mass", kinds.MASS, "mass of all parts"),
                *(Field(k, kinds.LENGTH, f"mass center along {k}") for k in "xyz"),
                *TERM_FIELDS,
                Field("center", kinds.LENGTH, "mass center", Form.VECTOR, in_record=False),
                Field("inertia", kinds.INERTIA, "tensor about the point", Form.TENSOR, in_record=False),
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
)
