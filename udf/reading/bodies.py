"""Bodies at the cell boundary: the body record that functions hand to each other."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final, Literal

import numpy as np

from ...core.body import RigidBody
from ...core.errors import InputError
from ...core.tensors import tensor_from_terms
from ..limits import NOT_NEGATIVE, POSITIVE
from ..units import kinds
from .arguments import Scalar, Vector
from .records import Entry, Record

TENSOR_TERMS: Final = "tensor terms"
INTEGRALS: Final = "integrals"
AT_CENTER, AT_ORIGIN = "mass center", "origin"  # words for the point that a result is about
PRODUCT_WORDS: Final = {
    "as tensor terms": TENSOR_TERMS,
    "tensor": TENSOR_TERMS,
    "tensor term": TENSOR_TERMS,
    "as integrals": INTEGRALS,
    "integral": INTEGRALS,
}
MOMENTS: Final = ("Ixx", "Iyy", "Izz")
PRODUCTS: Final = ("Ixy", "Iyz", "Izx")


@dataclass(frozen=True, eq=False, slots=True)
class BodyRead:
    """A body as read; `planar` when only the moment of inertia about z was given."""

    body: RigidBody
    planar: bool


def tensor_of(terms: Sequence[float], form: Literal["tensor", "integral"]) -> Any:
    """Return the tensor from Ixx, Iyy, Izz, Ixy, Iyz, Izx."""
    xx, yy, zz, xy, yz, zx = terms
    return tensor_from_terms(xx, yy, zz, xy, yz, zx, products=form)


def products_form(
    argument: str, word: str | None, values: Any, where: str = ""
) -> Literal["tensor", "integral"]:
    """Return the core's word for the form of products of inertia; the form must be told when one is nonzero."""
    if word is None:
        if np.any(np.asarray(values) != 0.0):
            raise InputError(
                argument,
                f"given when a product of inertia is not zero: '{TENSOR_TERMS}' or '{INTEGRALS}'",
                remedy="Integrals of xy dm enter the tensor with a minus sign",
                where=where,
            )
        return "tensor"
    return "integral" if word == INTEGRALS else "tensor"


def finish(argument: str, out: dict[str, Any]) -> BodyRead:
    """Return the body from the lines of a record."""
    if "mass" not in out:
        raise InputError(argument, "a body with a line 'mass'")
    mass = one(argument, "mass", out["mass"])
    center, flat = center_of(argument, out)
    moments = [k for k in MOMENTS if k in out]
    if "inertia" in out:
        if moments:
            raise InputError(argument, "a body with either 'inertia' about z or Ixx, Iyy, Izz, not both")
        moments, out = ["Izz"], {**out, "Izz": out["inertia"]}
    if not moments:
        raise InputError(
            argument, "a body with 'Izz' for planar work, or Ixx, Iyy and Izz, about its mass center"
        )
    if moments == ["Izz"]:
        if any(one(argument, k, out.get(k, 0.0)) != 0.0 for k in PRODUCTS):
            raise InputError(argument, "a body with Ixx, Iyy and Izz when products of inertia are given")
        izz = one(argument, "Izz", out["Izz"])
        # A flat body with the same moment about z: planar work reads nothing else of it.
        return BodyRead(RigidBody.of(mass, center, np.diag([izz / 2.0, izz / 2.0, izz])), True)
    if len(moments) < 3:
        missing = next(k for k in MOMENTS if k not in moments)
        raise InputError(argument, f"a body with all of Ixx, Iyy, Izz; {missing} is missing")
    terms = [one(argument, k, out.get(k, 0.0)) for k in (*MOMENTS, *PRODUCTS)]
    form = products_form("products", out.get("products"), terms[3:])
    return BodyRead(RigidBody.of(mass, center, tensor_of(terms, form)), flat)


def center_of(argument: str, out: dict[str, Any]) -> tuple[Any, bool]:
    """Return the mass center from 'center' or from x, y and z, and whether z was left out."""
    parts = [k for k in "xyz" if k in out]
    if "center" in out:
        if parts:
            raise InputError(argument, "a body with either 'center' or x, y and z, not both")
        c = out["center"]
        if c.ndim != 1:
            raise InputError(argument, "a body with one mass center; got several rows")
        return np.array([c[0], c[1], c[2] if len(c) == 3 else 0.0]), False
    if parts[:2] != ["x", "y"]:
        raise InputError(argument, "a body with its mass center: a line 'center', or lines x, y and z")
    return np.array([one(argument, k, out.get(k, 0.0)) for k in "xyz"]), False


def one(argument: str, label: str, value: Any) -> float:
    """Return a number of a record, refusing a column."""
    if type(value) is not float:
        raise InputError(argument, f"a record with one number for '{label}'; got a column")
    return value


BODY: Final = Record(
    entries=(
        Entry("mass", Scalar(kinds.MASS), "mass", limit=POSITIVE),
        Entry("center", Vector(kinds.LENGTH), "mass center", also=("mass center", "G")),
        Entry("x", Scalar(kinds.LENGTH), "mass center along x"),
        Entry("y", Scalar(kinds.LENGTH), "mass center along y"),
        Entry("z", Scalar(kinds.LENGTH), "mass center along z"),
        Entry("Ixx", Scalar(kinds.INERTIA), "about x through the mass center", limit=NOT_NEGATIVE),
        Entry("Iyy", Scalar(kinds.INERTIA), "about y through the mass center", limit=NOT_NEGATIVE),
        Entry("Izz", Scalar(kinds.INERTIA), "about z through the mass center", limit=NOT_NEGATIVE),
        Entry(
            "inertia", Scalar(kinds.INERTIA), "planar: about z through the mass center", limit=NOT_NEGATIVE
        ),
        Entry("Ixy", Scalar(kinds.INERTIA), "product of inertia"),
        Entry("Iyz", Scalar(kinds.INERTIA), "product of inertia"),
        Entry("Izx", Scalar(kinds.INERTIA), "product of inertia", also=("Ixz",)),
        Entry("products", None, "form of the products", words=(TENSOR_TERMS, INTEGRALS)),
    ),
    what="body",
    example=(
        ("mass", 166.0, "kg"),
        ("x", 1.434, "m"),
        ("y", 1.004, "m"),
        ("z", 0.0, "m"),
        ("Ixx", 21.5, "kg*m^2"),
        ("Iyy", 33.8, "kg*m^2"),
        ("Izz", 49.24, "kg*m^2"),
    ),
    finish=finish,
)


def needs_space(read: BodyRead) -> RigidBody:
    """Return the body for a function that works in space, refusing one known only in the plane."""
    if read.planar:
        raise InputError("body", "a body with Ixx, Iyy, Izz and its products; only Izz is given")
    return read.body
