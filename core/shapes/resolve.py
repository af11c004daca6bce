"""From what a person typed, a name and labelled sizes, to a shape with all its sizes in order."""

from __future__ import annotations

from collections.abc import Mapping
from difflib import get_close_matches
from typing import Final, NamedTuple

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ..errors import InputError
from .record import Alternative, Array, Shape, Size
from .table import SHAPES

_SIGN_RULES: Final = {"positive": "a positive", "not negative": "a zero or positive", "any": "a finite"}
_SPELLINGS: Final = (("centre", "center"), ("disc", "disk"), ("frustrum", "frustum"), ("hemi-", "hemi"))


class ShapeBody(NamedTuple):
    """Tensor and mass center of a shape.

    Parameters
    ----------
    inertia : ndarray, shape (..., 3, 3)
        Tensor about the mass center, along the shape's axes, tensor form [kg m^2].
    offset : ndarray, shape (..., 3)
        Mass center seen from the shape's datum [m].
    """

    inertia: NDArray[np.float64]
    offset: NDArray[np.float64]


def _few_names() -> str:
    """Return a taste of the names, for a word that is close to none of them."""
    common = ("solid cylinder", "tube", "box", "thin plate", "slender rod", "solid sphere", "solid cone")
    return f"For example {', '.join(common)}; {len(SHAPES)} in all"


def _plain(word: str) -> str:
    """Return a name without case, spaces, hyphens and the second spelling of a word."""
    text = word.strip().lower()
    for other, ours in _SPELLINGS:
        text = text.replace(other, ours)
    return "".join(letter for letter in text if letter.isalnum())


def _spelled_names() -> dict[str, str]:
    """Return every spelling of every shape, made plain, with the shape's name."""
    names = {}
    for shape in SHAPES.values():
        for word in (shape.name, *shape.aliases):
            names[_plain(word)] = shape.name
    return names


_NAMES: Final = _spelled_names()


def shape_named(word: str) -> Shape:
    """Return the shape with a name, in any usual spelling.

    Parameters
    ----------
    word : str
        Name of a shape, like "tube" or "Solid Cylinders" [-].

    Returns
    -------
    Shape
        Row of SHAPES [-].

    Raises
    ------
    InputError
        No shape has this name; close names are offered.

    Notes
    -----
    Case, spaces, hyphens, a plural and British spelling do not matter.

    References
    ----------
    Names as in J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4.
    """
    plain = _plain(word)
    for singular in (plain, plain.removesuffix("s"), plain.removesuffix("es")):
        if singular in _NAMES:
            return SHAPES[_NAMES[singular]]
    close = get_close_matches(plain, _NAMES, n=3, cutoff=0.7)
    names = list(dict.fromkeys(_NAMES[match] for match in close))
    remedy = f"Did you mean {' or '.join(names)}?" if names else _few_names()
    raise InputError("shape", "the name of a known shape", word.strip() or "an empty name", remedy=remedy)


def size_labelled(shape: Shape, label: str) -> tuple[Size, Alternative | None]:
    """Return the size of a shape that a label means, and the alternative if it is one.

    Parameters
    ----------
    shape : Shape
        Row of SHAPES [-].
    label : str
        What was typed, like OD or "wall thickness" [-].

    Returns
    -------
    tuple of Size and Alternative or None
        The size [-]; the alternative when the label is another way to give it, like a diameter.

    Raises
    ------
    InputError
        The shape has no such size.

    Notes
    -----
    An exact match wins over one that differs in case, so that R and r of a torus stay apart.

    References
    ----------
    Labels are trade usage: OD, ID, t, L, R, D.
    """
    table: dict[str, tuple[Size, Alternative | None]] = {}
    for size in shape.sizes:
        for word in (size.label, *size.aliases):
            table[word] = (size, None)
        for other in size.alternatives:
            for word in (other.label, *other.aliases):
                table[word] = (size, other)
    word = " ".join(label.replace("centre", "center").split())
    if word in table:
        return table[word]
    loose = {entry.lower(): found for entry, found in table.items()}
    if word.lower() in loose:
        return loose[word.lower()]
    close = get_close_matches(word.lower(), loose, n=1, cutoff=0.75)
    hint = f"Did you mean {close[0]}? " if close else ""
    raise InputError(
        "sizes", f"sizes of a {shape.name}", label, remedy=f"{hint}A {shape.name} takes {_labels(shape)}"
    )


def _labels(shape: Shape) -> str:
    """Return the labels of a shape as people type them: D/R, L; in brackets what only a density asks."""
    if not shape.sizes:
        return "no sizes"
    words = [_typed_as(shape, size.label) for size in shape.sizes]
    return ", ".join(
        f"[{word}]" if size.for_density else word for word, size in zip(words, shape.sizes, strict=True)
    )


def complete_sizes(shape: Shape, given: Mapping[str, ArrayLike]) -> dict[str, Array]:
    """Return all sizes of a shape under their own labels, checked.

    Parameters
    ----------
    shape : Shape
        Row of SHAPES [-].
    given : mapping of str to array_like, shape (...)
        Sizes as typed: label to value [m] or [rad].

    Returns
    -------
    dict of str to ndarray, shape (...)
        Sizes as the formulas take them [m] or [rad].

    Raises
    ------
    InputError
        An unknown label, a size given twice or missing, a value that is not allowed, sizes that do not go
        together.

    Notes
    -----
    Radius and diameter, outer size and wall are converted here and nowhere else.

    References
    ----------
    Labels are trade usage: OD, ID, t, L, R, D.
    """
    found: dict[str, Array] = {}
    typed: dict[str, str] = {}
    for label, value in given.items():
        size, other = size_labelled(shape, label)
        if size.label in found:
            raise InputError(label, f"left out when {typed[size.label]} is given", remedy="They are one size")
        array = np.asarray(value, dtype=float)
        _check_values(label, size, array)
        found[size.label] = array * other.times if other else array
        typed[size.label] = label.strip()
    _add_missing(shape, found)
    problem = shape.problem(found)
    if problem:
        raise InputError("sizes", f"possible for a {shape.name}", _as_typed(given), remedy=problem)
    return found


def _as_typed(given: Mapping[str, ArrayLike]) -> str | None:
    """Return the sizes of one shape as a short text in SI; None for columns."""
    if any(np.ndim(value) for value in given.values()):
        return None
    return ", ".join(f"{label} {float(np.asarray(value)):.4g}" for label, value in given.items())


def _check_values(label: str, size: Size, values: Array) -> None:
    """Refuse a size that is not finite or has a sign that makes no sense."""
    allowed = np.isfinite(values)
    if size.sign == "positive":
        allowed = allowed & (values > 0.0)
    elif size.sign == "not negative":
        allowed = allowed & (values >= 0.0)
    if not allowed.all():
        row = int(np.argmin(np.atleast_1d(allowed)))
        where = f"row {row + 1}" if values.ndim else ""
        raise InputError(
            label, f"{_SIGN_RULES[size.sign]} {size.kind}", float(np.atleast_1d(values)[row]), where=where
        )


def _add_missing(shape: Shape, found: dict[str, Array]) -> None:
    """Add the sizes that follow from the given ones, or say which are missing or too many."""
    section = shape.section()
    labels = {label for label in found if section is None or label != section.label}
    ways = shape.needed()
    for way in ways:
        if labels == set(way.labels):
            found.update(way.complete(found))
            return
    best = min(ways, key=lambda way: (len(labels - set(way.labels)), len(set(way.labels) - labels)))
    options = "; or ".join(", ".join(_typed_as(shape, label) for label in way.labels) for way in ways)
    missing = [_typed_as(shape, label) for label in best.labels if label not in labels]
    got = ", ".join(found) or "no size"
    rule = f"given, for a {shape.name}, as {options}"
    if missing:
        raise InputError("sizes", rule, f"no {' and no '.join(missing)}" if found else got)
    surplus = sorted(labels - set(best.labels))
    raise InputError("sizes", rule, f"a surplus {surplus[0]}", remedy="Leave one out: the others fix it")


def _typed_as(shape: Shape, label: str) -> str:
    """Return a size as people type it, the diameter before the radius: OD/Ro."""
    size = next(size for size in shape.sizes if size.label == label)
    return "/".join((*(other.label for other in size.alternatives), size.label))


def shape_problem(name: str, sizes: Mapping[str, ArrayLike]) -> str | None:
    """Return the sentence why a shape can't have these sizes, or None.

    Parameters
    ----------
    name : str
        Name of a shape [-].
    sizes : mapping of str to array_like, shape (...)
        Sizes as typed: label to value [m] or [rad].

    Returns
    -------
    str or None
        None when the shape exists.

    Notes
    -----
    The same sentences that `shape_body` raises.

    References
    ----------
    Names as in J. L. Meriam, L. G. Kraige, Engineering Mechanics: Dynamics, table D/4.
    """
    try:
        complete_sizes(shape_named(name), sizes)
    except InputError as problem:
        return problem.sentence()
    return None


def shape_body(name: str, mass: ArrayLike, sizes: Mapping[str, ArrayLike]) -> ShapeBody:
    """Return the tensor about the mass center of a shape, and where its mass center is.

    Parameters
    ----------
    name : str
        Name of a shape [-].
    mass : array_like, shape (...)
        Mass [kg], positive.
    sizes : mapping of str to array_like, shape (...)
        Sizes as typed: label to value [m] or [rad].

    Returns
    -------
    ShapeBody
        Tensor about the mass center [kg m^2] and mass center from the datum [m].

    Raises
    ------
    InputError
        An unknown shape, sizes that it can't have, a mass that is not positive.

    Notes
    -----
    Even density. The thin shapes take their thickness as zero; a given one must be small.

    References
    ----------
    Each row of SHAPES names its own source.
    """
    shape = shape_named(name)
    full = complete_sizes(shape, sizes)
    kilograms = np.asarray(mass, dtype=float)
    _check_positive("mass", kilograms)
    leading = np.broadcast_shapes(kilograms.shape, *(size.shape for size in full.values()))
    inertia = kilograms[..., None, None] * shape.unit_tensor(full)
    # A product of -0 and a mass would show as -0 in a cell.
    return ShapeBody(
        np.array(np.broadcast_to(inertia + 0.0, (*leading, 3, 3))),
        np.array(np.broadcast_to(shape.center(full), (*leading, 3))),
    )


def shape_mass(name: str, density: ArrayLike, sizes: Mapping[str, ArrayLike]) -> NDArray[np.float64]:
    """Return the mass of a shape from its density.

    Parameters
    ----------
    name : str
        Name of a shape [-].
    density : array_like, shape (...)
        Density of the material [kg/m^3], positive.
    sizes : mapping of str to array_like, shape (...)
        Sizes as typed: label to value [m] or [rad]; with the thickness of a thin plate or shell, the
        diameter of a rod or wire.

    Returns
    -------
    ndarray, shape (...)
        Mass [kg].

    Raises
    ------
    InputError
        An unknown shape, sizes that it can't have, no thickness or diameter, a density that is not positive.

    Notes
    -----
    Thin plates and shells: area times thickness, which for a curved shell is exact to the square of
    thickness over radius.

    References
    ----------
    Each row of SHAPES names its own source.
    """
    shape = shape_named(name)
    full = complete_sizes(shape, sizes)
    kilograms_per_volume = np.asarray(density, dtype=float)
    _check_positive("density", kilograms_per_volume)
    measure = shape.measure(full)
    section = shape.section()
    if section is not None:
        if section.label not in full:
            raise InputError(
                "sizes",
                f"given with {_typed_as(shape, section.label)} for a mass from a density",
                f"no {section.label}",
                remedy=f"{section.label} is the {section.help.split(',')[0]}",
            )
        width = full[section.label]
        measure = measure * (width if shape.dimension != "line" else np.pi / 4.0 * width**2)
    elif shape.dimension == "point":
        raise InputError("shape", "one with a volume", shape.name, remedy="Give the mass of a point itself")
    return np.asarray(kilograms_per_volume * measure, dtype=np.float64)


def _check_positive(argument: str, values: Array) -> None:
    """Refuse a mass or density that is not a positive finite number."""
    allowed = np.isfinite(values) & (values > 0.0)
    if not allowed.all():
        row = int(np.argmin(np.atleast_1d(allowed)))
        where = f"row {row + 1}" if values.ndim else ""
        raise InputError(argument, "positive", float(np.atleast_1d(values)[row]), where=where)
