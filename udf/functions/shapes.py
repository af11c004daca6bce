"""Shapes: inertia tensor, mass center and mass from labelled sizes."""

from __future__ import annotations

from typing import Any

import numpy as np

from ...core.shapes import complete_sizes, shape_body, shape_mass, shape_named
from ..body_terms import TERM_FIELDS, BodyTerms
from ..declaration import Arg, CellFunction, Example, Field, Form, Result
from ..limits import POSITIVE
from ..reading.arguments import Scalar
from ..reading.sizes import Sizes
from ..reading.words import Text
from ..units import kinds
from ..working import for_rows, num, tensor_rows, vec
from .tensors import DYNAMICS, GROUP


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
    return for_rows(lines, rows)


def mass_working(values: tuple[Any, ...], answer: Any) -> list[str]:
    shape, density, sizes = values
    first, rows = np.ravel(answer)[0], np.size(answer)
    rho = np.ravel(density)[0]
    lines = [
        *shape_text(shape, sizes)[:3],
        f"m = density * volume = {num(rho)} kg/m^3 * {num(first / rho)} m^3 = {num(first)} kg",
    ]
    return for_rows(lines, rows)


SHAPE = Arg("shape", Text(example="tube"), "name of the shape, like tube, box, solid cylinder, disk, cone")
SIZES = Arg("sizes", Sizes(), "sizes by label")
MASS = Arg("mass", Scalar(kinds.MASS), "mass", POSITIVE)

FUNCTIONS = (
    CellFunction(
        name="RB_SHAPE",
        group=GROUP,
        line="Inertia tensor of a shape about its mass center; also offset of the mass center from the datum.",
        args=(SHAPE, MASS, SIZES),
        result=Result(
            (
                Field("inertia", kinds.INERTIA, "tensor about the mass center", Form.TENSOR, in_record=False),
                Field("offset", kinds.LENGTH, "mass center from the datum", Form.SPACE, in_record=False),
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
)
