"""A body as a result: mass, mass center and tensor under the names that `what` takes."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from .declaration import Field, Form
from .reading.bodies import MOMENTS, PRODUCTS, TENSOR_TERMS
from .units import kinds


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


def body_fields(center: str, tensor: str) -> tuple[Field, ...]:
    """Return the fields of a body: `center` and `tensor` say from where and about which point."""
    return (
        Field("mass", kinds.MASS, "mass"),
        *(Field(k, kinds.LENGTH, f"{center} along {k}") for k in "xyz"),
        *TERM_FIELDS,
        Field("center", kinds.LENGTH, center, Form.SPACE, in_record=False),
        Field("inertia", kinds.INERTIA, tensor, Form.TENSOR, in_record=False),
    )
