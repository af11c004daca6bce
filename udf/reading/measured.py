"""Measured parts of a parts list: a tensor by its terms in place of a shape."""

from __future__ import annotations

from typing import Final

import numpy as np

from ...core.errors import InputError, PhysicsError
from ...core.tensors import shift_to_center
from ..units.quantities import Array, folded, shown
from .bodies import INTEGRALS, MOMENTS, PRODUCT_WORDS, PRODUCTS, TENSOR_TERMS, products_form, tensor_of
from .patterns import XYZ
from .tables import TableData

CENTER: Final = "mass center"


def word_of(argument: str, table: dict[str, str], text: str, rule: str, where: str) -> str:
    found = table.get(folded(text))
    if found is None:
        raise InputError(argument, f"{rule}; got {shown(text)}", where=where)
    return found


def _possible_at(tensor: Array, where: str) -> None:
    """Refuse a tensor that has less about the origin than its mass alone gives there."""
    worst = int(np.argmin(np.diag(tensor)))
    if tensor[worst, worst] < -1e-3 * float(np.abs(tensor).max()):
        raise PhysicsError(
            "",
            f"The measured tensor is too small to be about the origin: {MOMENTS[worst]} about the mass center "
            f"would be {tensor[worst, worst]:.6g} kg*m^2",
            remedy="Check `about`, the mass and x, y, z",
            where=where,
        )


def fill_measured(data: TableData, i: int, masses: Array, tensors: Array) -> None:
    """Fill the tensor of a part that is given by its terms."""
    where = data.where(i)
    terms = [float(data.numbers(k)[i]) for k in (*MOMENTS, *PRODUCTS)]
    for k, value in zip(MOMENTS, terms, strict=False):
        if np.isnan(value):
            raise InputError(
                "parts",
                f"a parts list with all of Ixx, Iyy, Izz for a measured part; {k} is blank",
                where=where,
            )
    if np.isnan(masses[i]):
        raise InputError("parts", "a parts list with the mass of each measured part", where=where)
    terms = [0.0 if np.isnan(t) else t for t in terms]
    word = data.texts("products")[i]
    form = products_form(
        "products",
        word_of(
            "products",
            {**PRODUCT_WORDS, TENSOR_TERMS: TENSOR_TERMS, INTEGRALS: INTEGRALS},
            word,
            f"'{TENSOR_TERMS}' or '{INTEGRALS}'",
            where,
        )
        if word
        else None,
        terms[3:],
        where,
    )
    tensor = tensor_of(terms, form)
    about = data.texts("about")[i]
    if not about:
        raise InputError("about", "given for a measured tensor: mass center or origin", where=where)
    table = {"mass center": CENTER, "center": CENTER, "g": CENTER, "origin": "origin"}
    if word_of("about", table, about, "'mass center' or 'origin'", where) == "origin":
        place = np.array([data.numbers(k)[i] for k in XYZ])
        tensor = shift_to_center(tensor, masses[i], np.where(np.isnan(place), 0.0, place))
        _possible_at(tensor, where)
    tensors[i] = tensor
