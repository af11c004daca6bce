"""Inertia tensors: terms, parallel axis, turns, any axis, principal axes, and whether a body can have one."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core.errors import InputError, PhysicsError
from ...core.tensors import (
    offset_tensor,
    shift_from_center,
    shift_moment_from_center,
    shift_moment_to_center,
    shift_to_center,
    tensor_from_terms,
    tensor_problem,
)
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..limits import NOT_NEGATIVE, POSITIVE
from ..reading.arguments import Offset, Scalar, Tensor
from ..reading.bodies import INTEGRALS, MOMENTS, PRODUCT_WORDS, PRODUCTS, TENSOR_TERMS, products_form
from ..reading.words import Choice
from ..units import kinds
from ..working import num, tensor_rows, vec

GROUP = "Mass"
DYNAMICS = "Meriam, Kraige: Dynamics, appendix B (mass moments of inertia)"


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
        if np.ndim(mass):
            raise InputError("mass", "one mass for a tensor; got a column")
        result = shift_to_center(inertia, mass, need_vector(offset))
        problem = tensor_problem(result)
        if problem:
            raise PhysicsError("", f"The tensor is too small for this mass and offset: {problem}")
        return result
    moment = shift_moment_to_center(inertia, mass, scalar_arm(offset))
    if np.any(np.asarray(moment) < 0.0):
        raise PhysicsError(
            "",
            "The inertia is smaller than mass * offset^2, so it cannot be about an axis at this offset",
            remedy="Check whether it is already about the mass center",
        )
    return moment


def is_tensor(inertia: Any) -> bool:
    return type(inertia) is np.ndarray and inertia.shape == (3, 3)


def need_vector(offset: Any) -> Any:
    if type(offset) is float or offset.shape[-1:] != (3,):
        raise InputError(
            "offset",
            "a vector x y z for a tensor; a distance does not tell the direction",
            remedy="Give the offset of the mass center in three cells",
        )
    if offset.ndim != 1:  # distances in a column lie along x by rule, which says nothing of a direction
        raise InputError("offset", "one vector for a tensor; a column of distances has no direction")
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


INERTIA = Arg(
    "inertia", Tensor(kinds.INERTIA, planar=True), "one moment of inertia, or the tensor", NOT_NEGATIVE
)
MASS = Arg("mass", Scalar(kinds.MASS), "mass", POSITIVE)
SHIFTED = Result((Field("inertia", kinds.INERTIA, "shifted inertia", Form.TENSOR),))
OFFSET = Arg("offset", Offset(kinds.LENGTH), "distance of the axes, or vector to the mass center")

FUNCTIONS = (
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
)
