"""The parts list: from a table with shapes, masses, places and turns to arrays that can be summed."""

from __future__ import annotations

import re
from collections import defaultdict
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
from numpy.typing import NDArray

from ...core.body import RigidBody, combine_arrays
from ...core.errors import InputError
from ...core.shapes import shape_body, shape_mass, shape_named
from ...core.tensors import turned
from ...core.vectors import turn_xyz
from ..limits import NOT_NEGATIVE, POSITIVE
from ..units import kinds
from ..units.quantities import folded
from .bodies import MOMENTS, PRODUCTS
from .measured import CENTER, fill_measured, word_of
from .patterns import XYZ, pattern_of
from .sizes import SIZE_COLUMNS, size_texts
from .slips import OF_PARTS
from .tables import Column, Table, TableData

Array = NDArray[np.float64]

DATUM: Final = "datum"
ASSEMBLY = "assembly"

_POSITIONS = tuple(
    Column(k, kinds.LENGTH, f"place along {k}, of what `at` says", also=(f"{k} center",)) for k in XYZ
)
_TURNS = tuple(
    Column(f"turn {k}", kinds.ANGLE, f"turn about sheet axis {k} through the part's own center") for k in XYZ
)
_TERMS = tuple(
    Column(
        k,
        kinds.INERTIA,
        "measured tensor in place of a shape",
        limit=NOT_NEGATIVE if k in MOMENTS else None,
        also=("Ixz",) if k == "Izx" else (),
    )
    for k in (*MOMENTS, *PRODUCTS)
)
_PATTERN = (
    Column("pattern", None, "for qty above 1: one place, circle x / y / z, or line"),
    *(Column(f"pattern {k}", kinds.LENGTH, f"circle: point of its axis; line: step along {k}") for k in XYZ),
)

PARTS: Final = Table(
    columns=(
        Column("part", None, "name", also=("name", "item", "part name"), required=True),
        Column(
            "qty",
            kinds.COUNT,
            "how many; negative for a cut-out; 1 when blank",
            also=("quantity", "count", "pcs"),
        ),
        Column("shape", None, "name of the shape, or blank with Ixx ..."),
        Column("mass", kinds.MASS, "mass of one", also=("mass each",), limit=POSITIVE),
        Column("density", kinds.DENSITY, "density, in place of the mass", limit=POSITIVE),
        Column("sizes", None, "sizes in one text, in place of size columns", also=("size", "dimensions")),
        *_POSITIONS,
        Column(
            "at",
            None,
            "what x y z is: mass center (when blank) or datum of the shape",
            also=("xyz of", "position of"),
        ),
        *_TURNS,
        *_TERMS,
        Column("about", None, "point of the measured tensor: mass center or origin"),
        Column("products", None, "form of Ixy, Iyz, Izx: tensor terms or integrals"),
        *_PATTERN,
        Column("in", None, "name of the sub-assembly this part belongs to", also=("belongs to",)),
    ),
    what="parts list",
    example=(
        ("part", "qty", "shape", "mass [kg]", "L [mm]", "W [mm]", "H [mm]", "x [mm]", "y [mm]", "z [mm]"),
        ("frame", 1.0, "box", 62.0, 1200.0, 80.0, 60.0, 600.0, 40.0, 0.0),
        ("bin", 1.0, "box", 38.0, 1000.0, 700.0, 900.0, 650.0, 430.0, 0.0),
    ),
    more=SIZE_COLUMNS,
    slips=OF_PARTS,
    finish=lambda argument, data: read_parts(argument, data),
)


@dataclass(frozen=True, eq=False, slots=True)
class PartsList:
    """Parts ready to be summed: cut-outs carry negative mass and tensor.

    masses (n,) [kg] of all pieces of a row, centers (n, 3) [m] of the row's pieces together, inertias
    (n, 3, 3) [kg m^2] of the row's pieces together about that center, sheet axes.
    """

    names: tuple[str, ...]
    where: tuple[str, ...]
    masses: Array
    centers: Array
    inertias: Array


def indices(mask: Any) -> list[int]:
    """Return where a mask holds, as plain numbers."""
    return [int(i) for i in np.flatnonzero(mask)]


def read_parts(argument: str, data: TableData) -> PartsList:
    """Return the rows of a parts list as bodies, sub-assemblies summed; raises with the row and the part."""
    groups = [folded(t) for t in data.texts("in")]
    if not any(groups):
        return _read(data, lambda i: _no_assembly(data, i))
    placed = {folded(data.labels[i]) for i, s in enumerate(data.texts("shape")) if folded(s) == ASSEMBLY}
    for i, g in enumerate(groups):
        if g and g not in placed:
            raise InputError(
                argument,
                f"a parts list in which every sub-assembly is placed; '{data.texts('in')[i]}' is not",
                remedy="Add a row with that name as part and 'assembly' as shape",
                where=data.where(i),
            )
    reached = _reached(data, groups)
    for i, g in enumerate(groups):
        if g not in reached:
            raise _circular(data, i)
    return _group(data, groups, "", ())


def _reached(data: TableData, groups: list[str]) -> set[str]:
    """Return the sub-assemblies that are placed, through others or not, in the whole, which is ''."""
    rows = [
        (folded(data.labels[i]), groups[i])
        for i, s in enumerate(data.texts("shape"))
        if folded(s) == ASSEMBLY
    ]
    reached, count = {""}, 0
    while len(reached) > count:
        count = len(reached)
        reached |= {name for name, outer in rows if outer in reached}
    return reached


def _circular(data: TableData, i: int) -> InputError:
    return InputError(
        "parts", "a parts list whose sub-assemblies do not contain themselves", where=data.where(i)
    )


def _group(data: TableData, groups: list[str], name: str, above: tuple[str, ...]) -> PartsList:
    """Return the rows that belong to one sub-assembly, '' being the whole."""
    part = data.only([i for i, g in enumerate(groups) if g == name])

    def placed(i: int) -> RigidBody:
        own = folded(part.labels[i])
        if own in (*above, name):
            raise _circular(part, i)
        if own not in groups:
            raise InputError(
                "parts",
                "a parts list with the parts of each sub-assembly",
                remedy=f"Write '{part.labels[i]}' in the column `in` of its parts",
                where=part.where(i),
            )
        inner = _group(data, groups, own, (*above, name))
        return combine_arrays(inner.masses, inner.centers, inner.inertias)

    return _read(part, placed)


def _no_assembly(data: TableData, i: int) -> RigidBody:
    raise InputError(
        "parts",
        "a parts list with a column `in` that tells which parts a sub-assembly has",
        where=data.where(i),
    )


def _read(data: TableData, assembly: Callable[[int], RigidBody]) -> PartsList:
    """Return rows as bodies; `assembly` gives the body of a row that places a sub-assembly."""
    n = len(data)
    qty = data.numbers("qty")
    qty = np.where(np.isnan(qty), 1.0, qty)
    for i in indices((qty != np.round(qty)) | (qty == 0.0)):
        raise InputError(
            "parts",
            f"a parts list with whole numbers as qty, none of them 0; got {qty[i]:.6g}",
            remedy="Leave all cells of the row blank for a part that is not there" if qty[i] == 0.0 else "",
            where=data.where(i),
        )
    masses, tensors, offsets = _own(data, assembly)
    rotation = _rotations(data)
    if rotation is not None:
        tensors = turned(tensors, rotation)
        offsets = (rotation @ offsets[..., None])[..., 0]
    centers, placed = _places(data)
    centers = centers + np.where(placed[:, None], offsets, 0.0)
    pieces = np.abs(qty)
    for i in indices(pieces > 1.0):
        centers[i], tensors[i] = pattern_of(data, i, int(pieces[i]), masses[i], centers[i], tensors[i])
    return PartsList(
        names=data.labels,
        where=tuple(data.where(i) for i in range(n)),
        masses=masses * qty,
        centers=centers,
        inertias=tensors * np.sign(qty)[:, None, None],
    )


def _own(data: TableData, assembly: Callable[[int], RigidBody]) -> tuple[Array, Array, Array]:
    """Return mass (n,), tensor about the own mass center (n, 3, 3) and offset from the datum (n, 3) of one piece."""
    n = len(data)
    mass, density = data.numbers("mass"), data.numbers("density")
    shapes = data.texts("shape")
    groups = [i for i, s in enumerate(shapes) if folded(s) == ASSEMBLY]
    measured = (
        ~np.isnan(data.numbers("Ixx")) | ~np.isnan(data.numbers("Iyy")) | ~np.isnan(data.numbers("Izz"))
    )
    tensors, offsets, masses = np.zeros((n, 3, 3)), np.zeros((n, 3)), mass.copy()
    both = np.flatnonzero(~np.isnan(mass) & ~np.isnan(density))
    if both.size:
        raise InputError(
            "parts", "a parts list with mass or density for a part, not both", where=data.where(int(both[0]))
        )
    for (shape, given), rows in _grouped(data, shapes, measured).items():
        index = np.array(rows)
        _shaped(data, shape, index, given_sizes(data, rows, given), density, masses, tensors, offsets)
    for i in indices(measured):
        fill_measured(data, i, masses, tensors)
    for i in groups:
        if not (np.isnan(mass[i]) and np.isnan(density[i])):
            raise InputError(
                "parts",
                "a parts list with no mass for a sub-assembly: its parts have it",
                where=data.where(i),
            )
        if not data.texts("at")[i]:
            raise InputError(
                "parts",
                "a parts list with `at` filled in for a sub-assembly: datum (its own origin) or mass center",
                where=data.where(i),
            )
        body = assembly(i)
        masses[i], tensors[i], offsets[i] = body.mass, body.inertia, body.center
    return masses, tensors, offsets


def _grouped(data: TableData, shapes: Any, measured: Any) -> dict[tuple[str, Any], list[int]]:
    """Return the rows of each shape with the same labels given, so that each group is one call."""
    columns = [label for label in data.columns if label in SIZE_COLUMNS]
    there = {label: ~np.isnan(data.columns[label]) for label in columns}
    texts = data.texts("sizes")
    groups: dict[tuple[str, Any], list[int]] = defaultdict(list)
    names: dict[str, str] = {}
    given = (
        np.array([there[label] for label in columns]).T if columns else np.zeros((len(shapes), 0), dtype=bool)
    )
    keys = [tuple(row) for row in given.tolist()]
    for i, text in enumerate(shapes):
        if measured[i]:
            if text:
                raise InputError(
                    "parts", "a parts list with a shape or a measured tensor, not both", where=data.where(i)
                )
            continue
        if folded(text) == ASSEMBLY:
            continue
        if not text:
            raise InputError(
                "parts",
                "a parts list with a shape for each part; got a blank cell",
                remedy="Type a shape, or 'point' for a mass without size",
                where=data.where(i),
            )
        if text not in names:
            names[text] = _shape_name(text, data.where(i))
        groups[(names[text], (keys[i], texts[i]))].append(i)
    return {
        (shape, (tuple(c for c, is_given in zip(columns, key, strict=True) if is_given), text)): rows
        for (shape, (key, text)), rows in groups.items()
    }


def _shape_name(text: str, where: str) -> str:
    try:
        return shape_named(text).name
    except InputError as refused:
        raise InputError("shape", refused.rule, refused.value, remedy=refused.remedy, where=where) from None


def given_sizes(data: TableData, rows: list[int], given: Any) -> dict[str, Any]:
    """Return the sizes of a group of rows, from the columns and from the text."""
    labels, text = given
    out: dict[str, Any] = {label: data.columns[label][rows] for label in labels}
    if text:
        for label, value in size_texts("sizes", text, data.where(rows[0])).items():
            if label in out:
                raise InputError(
                    "sizes",
                    f"given once; '{label}' stands in a column and in the text",
                    where=data.where(rows[0]),
                )
            out[label] = np.full(len(rows), value)
    return out


def _shaped(
    data: TableData,
    shape: str,
    index: Any,
    sizes: dict[str, Any],
    density: Array,
    masses: Array,
    tensors: Array,
    offsets: Array,
) -> None:
    """Fill mass, tensor and offset of the rows of one group."""
    by_density = index[~np.isnan(density[index])]
    lacking = index[np.isnan(density[index]) & np.isnan(masses[index])]
    if lacking.size:
        raise InputError(
            "parts", "a parts list with a mass or a density for each part", where=data.where(int(lacking[0]))
        )
    try:
        if by_density.size:
            chosen = np.isin(index, by_density)
            masses[by_density] = shape_mass(
                shape, density[by_density], {k: v[chosen] for k, v in sizes.items()}
            )
        result = shape_body(shape, masses[index], sizes)
    except InputError as refused:
        if len(index) > 1:  # find the row at fault
            for k in range(len(index)):
                _shaped(
                    data,
                    shape,
                    index[k : k + 1],
                    {s: v[k : k + 1] for s, v in sizes.items()},
                    density,
                    masses,
                    tensors,
                    offsets,
                )
        rule = re.sub(r" \(row \d+\)", "", refused.rule)
        raise InputError(
            refused.argument,
            rule,
            refused.value,
            remedy=re.sub(r" \(row \d+\)", "", refused.remedy),
            where=data.where(int(index[0])),
        ) from None
    tensors[index], offsets[index] = result.inertia, result.offset


def _rotations(data: TableData) -> Array | None:
    """Return the turns of the parts as (n, 3, 3), None when there are none."""
    angles = np.stack([data.numbers(f"turn {k}") for k in XYZ], axis=-1)
    if np.isnan(angles).all():
        return None
    return turn_xyz(np.where(np.isnan(angles), 0.0, angles))


def _places(data: TableData) -> tuple[Array, Any]:
    """Return x y z of each row, and whether it is the datum that stands there."""
    n = len(data)
    for name in "xy":
        if n > 1 and name not in data.columns:
            raise InputError(
                "parts",
                f"a parts list with columns x and y: the place of each part; {name} is missing",
                where="row 1",
            )
    xyz = np.stack([data.numbers(k) for k in XYZ], axis=-1)
    there = ~np.isnan(xyz)
    for k, name in enumerate(XYZ):
        if name in data.columns:
            for i in indices(~there[:, k]):
                raise InputError(
                    "parts",
                    f"a parts list with a place for each part; {name} is blank",
                    remedy="Type 0 where it is zero",
                    where=data.where(i),
                )
    at = data.texts("at")
    table = {"mass center": CENTER, "center": CENTER, "g": CENTER, "datum": DATUM, "": CENTER}
    words = dict.fromkeys(at)
    known: dict[str, str] = {}
    for t in words:
        i = next(k for k, other in enumerate(at) if other == t)
        known[t] = word_of("at", table, t, "'mass center' or 'datum'", data.where(i))
    placed = np.array([known[t] == DATUM for t in at]) if at else np.zeros(n, dtype=bool)
    return np.where(there, xyz, 0.0), placed
