"""Tables under a header and records of label, value and unit: what is read, and what is refused with its row."""

from __future__ import annotations

import math
from typing import Any

import pytest
from cell_answers import answer, flat, refused

Rows = list[list[Any]]

HEADER = ["part", "qty", "shape", "mass [kg]", "x [m]", "y [m]"]
A = ["a", 1.0, "point", 1.0, 0.0, 0.0]
B = ["b", 1.0, "point", 3.0, 1.0, 0.0]


def center(*rows: list[Any]) -> Any:
    """Mass center along x: with a and b it is 3 kg * 1 m / 4 kg = 0.75 m."""
    return answer("RB_ROLLUP", [list(r) for r in rows], "x")


def no_table(rows: Any, *says: str) -> None:
    refused("RB_ROLLUP", [rows, "x"], *says)


GOOD: dict[str, Rows] = {
    "as it is": [HEADER, A, B],
    "columns in another order": [[r[k] for k in (5, 3, 0, 4, 2, 1)] for r in (HEADER, A, B)],
    "blank rows": [HEADER, [None] * 6, A, ["", None, "", None, "", None], B, [None] * 6],
    "a blank column": [[*r, None] for r in (HEADER, A, B)],
    "a column under a blank header": [[*HEADER, None], [*A, "remark"], [*B, 12.0]],
    "a column far from all known": [
        [*HEADER, "supplier", "price [EUR]"],
        [*A, "ours", 12.0],
        [*B, None, True],
    ],
    "case and blanks": [["Part", " QTY ", "Shape", "MASS [kg]", "x  [m]", "Y[m]"], A, B],
    "other names": [["item", "quantity", "shape", "mass each [kg]", "x center [m]", "y centre [m]"], A, B],
    "units in round brackets": [["part", "qty", "shape", "mass (kg)", "x (m)", "y (m)"], A, B],
    "no quantity": [[r[0], *r[2:]] for r in (HEADER, A, B)],
    "blank quantity": [HEADER, [A[0], None, *A[2:]], [B[0], "", *B[2:]]],
    "quantity as text": [HEADER, [A[0], "1", *A[2:]], B],
    "numbers as text": [HEADER, A, ["b", 1.0, "point", "3", "1", "0"]],
    "a unit in the cell": [HEADER, A, ["b", 1.0, "point", "3000 g", "1000 mm", 0.0]],
    "a unit in the cells alone": [
        ["part", "shape", "mass", "x", "y"],
        ["a", "point", "1 kg", "0 m", "0 m"],
        ["b", "point", "3 kg", "100 cm", "0 m"],
    ],
    "millimeters": [[*HEADER[:4], "x [mm]", "y [mm]"], A, [*B[:4], 1000.0, 0.0]],
    "units in the second row": [
        ["part", "qty", "shape", "mass", "x", "y"],
        [None, None, None, "g", "mm", "mm"],
        [*A[:3], 1000.0, 0.0, 0.0],
        [*B[:3], 3000.0, 1000.0, 0.0],
    ],
    "units in the header and in the second row": [
        ["part", "qty", "shape", "mass", "x [m]", "y"],
        [None, None, None, "kg", None, "mm"],
        A,
        B,
    ],
    "a number as name": [HEADER, [17.0, *A[1:]], B],
}


@pytest.mark.parametrize("rows", GOOD.values(), ids=GOOD)
def test_a_table_is_read(rows: Rows) -> None:
    assert center(*rows) == pytest.approx(0.75, rel=1e-14)


REFUSED: dict[str, tuple[Any, tuple[str, ...]]] = {
    "only a header": ([HEADER], ("`parts`", "a header row and rows below it")),
    "blank below the header": ([HEADER, [None] * 6], ("only the header is filled in",)),
    "one cell": (5.0, ("a header row and rows below it", "got 5")),
    "a text": ("parts", ("a header row and rows below it", "'parts'")),
    "blank": (None, ("a blank cell",)),
    "no header": ([A, B], ("whose first row is the header", "got 1 in it", "(row 1)")),
    "a boolean in the header": ([[*HEADER, True], [*A, 1.0]], ("whose first row is the header", "TRUE")),
    "a near miss": (
        [["part", "qty", "shappe", *HEADER[3:]], A],
        ("'shappe'", "Did you mean 'shape'?", "(row 1)"),
    ),
    "a near miss with unit": (
        [[*HEADER[:3], "mas [kg]", *HEADER[4:]], A],
        ("'mas [kg]'", "Did you mean 'mass'?"),
    ),
    "a comma before the unit": (
        [[*HEADER[:3], "mass, kg", *HEADER[4:]], A],
        ("'mass, kg'", "square brackets"),
    ),
    "a longer name of a number": ([[*HEADER, "z position [mm]"], [*A, 1.0]], ("'z position [mm]'", "'z")),
    "a longer name of a turn": ([[*HEADER, "turn about z [deg]"], [*A, 1.0]], ("Write 'turn z'",)),
    "twice": (
        [[*HEADER, "mass [g]"], [*A, 5.0]],
        ("each column once", "'mass [kg]' and 'mass [g]'", "(row 1)"),
    ),
    "twice by another name": (
        [[*HEADER, "quantity"], [*A, 5.0]],
        ("each column once", "'qty' and 'quantity'"),
    ),
    "no name column": ([HEADER[1:], A[1:]], ("with a column 'part'", "(row 1)")),
    "no unit": ([[*HEADER[:3], "mass", *HEADER[4:]], A], ("column 'mass' has none", "'mass [kg]'")),
    "a wrong unit": ([[*HEADER[:3], "mass [m]", *HEADER[4:]], A], ("`mass` must be a mass", "'m' (length)")),
    "an unknown unit": ([[*HEADER[:3], "mass [boxes]", *HEADER[4:]], A], ("`mass`", "'boxes'")),
    "a total row": (
        [HEADER, A, B, ["Total", None, None, 4.0, None, None]],
        ("total row", "(row 4, 'Total')"),
    ),
    "a sum row": ([HEADER, A, B, ["SUM:", None, None, 4.0, None, None]], ("total row", "(row 4, 'SUM:')")),
    "a subtotal row": ([HEADER, A, ["Sub-total", None, None, 4.0, None, None], B], ("total row", "(row 3")),
    "a grand total": ([HEADER, A, ["Grand total", None, None, 4.0, None, None]], ("total row",)),
    "a total row without a name": (
        [HEADER, A, B, [None, None, None, 4.0, None, None]],
        ("'part'", "(row 4)"),
    ),
    "a word for a number": (
        [HEADER, A, ["b", 1.0, "point", "heavy", 1.0, 0.0]],
        ("`mass`", "'heavy'", "row 3, 'b'"),
    ),
    "a boolean": ([HEADER, A, ["b", 1.0, "point", True, 1.0, 0.0]], ("`mass`", "TRUE", "row 3, 'b'")),
    "NaN": ([HEADER, A, ["b", 1.0, "point", math.nan, 1.0, 0.0]], ("`mass`", "finite", "row 3, 'b'")),
    "infinity": ([HEADER, A, ["b", 1.0, "point", 3.0, math.inf, 0.0]], ("`x`", "finite", "row 3, 'b'")),
    "a comma": ([HEADER, A, ["b", 1.0, "point", "3,5", 1.0, 0.0]], ("'3,5'", "Write 3.5 with a point")),
    "another unit of another kind": (
        [HEADER, A, ["b", 1.0, "point", "3 m", 1.0, 0.0]],
        ("`mass`", "'m' (length)"),
    ),
    "a number beyond its limit": (
        [HEADER, A, ["b", 1.0, "point", 0.0, 1.0, 0.0]],
        ("greater than zero", "row 3"),
    ),
    "a boolean for a text": (
        [HEADER, A, ["b", 1.0, True, 3.0, 1.0, 0.0]],
        ("'shape'", "TRUE", "(row 3, 'b')"),
    ),
    "a bare angle": ([[*HEADER, "turn z"], [*A, 90.0]], ("column 'turn z' has none", "'turn z [rad]'")),
}


@pytest.mark.parametrize(("rows", "says"), REFUSED.values(), ids=REFUSED)
def test_a_table_is_refused_with_the_place(rows: Any, says: tuple[str, ...]) -> None:
    no_table(rows, *says)


def test_rows_are_counted_from_the_header_of_the_range() -> None:
    rows = [HEADER, [None] * 6, A, [None] * 6, ["b", 1.0, "point", "heavy", 1.0, 0.0]]
    no_table(rows, "(parts, row 5, 'b')")
    units = [
        ["part", "shape", "mass", "x", "y"],
        [None, None, "kg", "m", "m"],
        ["b", "point", "heavy", 1.0, 0.0],
    ]
    no_table(units, "(parts, row 3, 'b')")


# -- records: torque about the hinge of a body at rest that is held against its weight, T = m g x

G = 9.80665  # m/s^2, standard gravity
BODY: Rows = [["mass", 2.0, "kg"], ["x", 0.5, "m"], ["y", 0.1, "m"], ["Izz", 1.0, "kg*m^2"]]
STILL: Rows = [
    ["omega", 0.0, "rad/s"],
    ["alpha", 0.0, "rad/s^2"],
    ["gravity", "down", None],
    ["fixed point", "(0, 0) m", None],
]

BODIES: dict[str, Any] = {
    "label, value, unit": BODY,
    "another order": BODY[::-1],
    "values with units": [[label, f"{value} {unit}"] for label, value, unit in BODY],
    "units with the labels": [[f"{label} [{unit}]", value] for label, value, unit in BODY],
    "units with the labels in round brackets": [[f"{label} ({unit})", value] for label, value, unit in BODY],
    "other units": [["mass", 2000.0, "g"], ["x", 500.0, "mm"], ["y", 100.0, "mm"], ["Izz", 1e4, "kg*cm^2"]],
    "SI without units": [[label, value, None] for label, value, _ in BODY],
    "two columns": [[label, value] for label, value, _ in BODY],
    "a header": [["label", "value", "unit"], *BODY],
    "blank rows": [BODY[0], [None, None, None], *BODY[1:], ["", "", ""]],
    "units in a far column": [[label, value, None, "", unit] for label, value, unit in BODY],
    "mass center as a vector": [
        ["mass", 2.0, "kg", None],
        ["center", 0.5, 0.1, "m"],
        ["Izz", 1.0, "kg*m^2", None],
    ],
    "mass center in a text": [["mass", 2.0, "kg"], ["center", "(0.5, 0.1) m", None], ["Izz", 1.0, "kg*m^2"]],
    "mass center by another name": [
        ["mass", 2.0, "kg"],
        ["mass centre", "(0.5, 0.1) m", None],
        ["Izz", 1.0, "kg*m^2"],
    ],
    "one text": "mass 2 kg; x 0.5 m; y 0.1 m; Izz 1 kg*m^2",
    "one text with equal signs": "mass = 2 kg; x = 500 mm; y=0.1 m; Izz = 1 kg*m^2;",
    "labels in capitals": [[str(label).upper(), value, unit] for label, value, unit in BODY],
    "a tensor": [*BODY, ["Ixx", 1.0, "kg*m^2"], ["Iyy", 1.0, "kg*m^2"]],
    "products that are zero": [*BODY, ["Ixx", 1.0, ""], ["Iyy", 1.0, ""], ["Ixy", 0.0, ""], ["Ixz", 0.0, ""]],
    "products with their form": [
        *BODY,
        ["Ixx", 1.0, ""],
        ["Iyy", 1.0, ""],
        ["Ixy", 0.1, ""],
        ["products", "integrals", ""],
    ],
}


@pytest.mark.parametrize("body", BODIES.values(), ids=BODIES)
def test_a_record_is_read(body: Any) -> None:
    assert answer("RB_DRIVE_TORQUE", body, STILL, "none", "(0, 0) m") == pytest.approx(
        2.0 * G * 0.5, rel=1e-13
    )


def test_what_a_roll_up_gives_is_read_as_a_body() -> None:
    record = answer("RB_ROLLUP", [HEADER, A, B])
    assert answer("RB_DRIVE_TORQUE", record, STILL, "none", "(0, 0) m") == pytest.approx(
        4.0 * G * 0.75, rel=1e-13
    )


NO_BODY: dict[str, tuple[Any, tuple[str, ...]]] = {
    "blank": (None, ("`body` must be a body", "a blank cell")),
    "a number": (5.0, ("rows of label, value and unit", "got 5")),
    "one column": ([["mass"], [2.0]], ("rows of label, value and unit", "2 x 1")),
    "all blank": ([[None, None], ["", None]], ("all cells are blank",)),
    "a near miss": (
        [["mas", 2.0, "kg"], *BODY[1:]],
        ("known labels", "'mas'", "Did you mean 'mass'?", "(row 1)"),
    ),
    "an unknown label": (
        [*BODY, ["colour", "red", None]],
        ("known labels", "'colour'", "Known: mass", "(row 5)"),
    ),
    "an unknown label in a text": ("mass 2 kg; hue 3 m; y 0.1 m; Izz 1 kg*m^2", ("known labels", "'hue'")),
    "twice": ([*BODY, ["mass", 3.0, "kg"]], ("each label once", "'mass' stands twice", "(row 5)")),
    "twice by another name": (
        [*BODY, ["center", "(0, 0) m", None], ["G", "(0, 0) m", None]],
        ("each label once",),
    ),
    "no label": (
        [[None, 2.0, "kg"], *BODY[1:]],
        ("the label in the first column", "a blank cell", "(row 1)"),
    ),
    "a number as label": (
        [[5.0, 2.0, "kg"], *BODY[1:]],
        ("the label in the first column", "got 5", "(row 1)"),
    ),
    "a blank value": ([["mass", None, "kg"], *BODY[1:]], ("`mass`", "a blank cell", "(body, row 1)")),
    "a boolean": ([["mass", True, "kg"], *BODY[1:]], ("`mass`", "the boolean TRUE", "(body, row 1)")),
    "a blank pair": ([["mass", None, None], *BODY[1:]], ("`mass`", "a blank cell", "(body, row 1)")),
    "the unit first": ([["mass", "kg", 2.0], *BODY[1:]], ("`mass`", "the unit after the number")),
    "two units": ([["mass [kg]", 2.0, "kg"], *BODY[1:]], ("one unit a row", "(row 1)")),
    "a wrong unit": (
        [["mass", 2.0, "m"], *BODY[1:]],
        ("`mass` must be a mass", "'m' (length)", "(body, row 1)"),
    ),
    "beyond its limit": ([["mass", 0.0, "kg"], *BODY[1:]], ("`mass`", "greater than zero", "(body, row 1)")),
    "no mass": (BODY[1:], ("a line 'mass'",)),
    "no place": ([BODY[0], BODY[3]], ("its mass center",)),
    "half a place": ([BODY[0], BODY[1], BODY[3]], ("its mass center",)),
    "a place twice": ([*BODY, ["center", "(0, 0) m", None]], ("either 'center' or x, y and z",)),
    "no inertia": (BODY[:3], ("'Izz' for planar work",)),
    "inertia twice": ([*BODY, ["inertia", 1.0, None]], ("either 'inertia' about z or Ixx, Iyy, Izz",)),
    "half a tensor": ([*BODY, ["Ixx", 1.0, None]], ("all of Ixx, Iyy, Izz; Iyy is missing",)),
    "a product without the tensor": ([*BODY, ["Ixy", 1.0, None]], ("when products of inertia are given",)),
    "a product without its form": (
        [*BODY, ["Ixx", 1.0, ""], ["Iyy", 1.0, ""], ["Ixy", 0.1, ""]],
        ("`products`", "minus sign"),
    ),
    "an unknown form": (
        [*BODY, ["products", "plus", None]],
        ("`products`", "'tensor terms'", "'plus'", "(body, row 5)"),
    ),
    "a column for a number": (
        [["mass", 1.0, 2.0, 3.0], *[[*r, None] for r in BODY[1:]]],
        ("`mass`", "(body, row 1)"),
    ),
    "a label without a value": ("mass", ("without a value", "'mass'")),
    "a comma": ([["mass", "2,5", "kg"], *BODY[1:]], ("`mass`", "'2,5'", "Write 2.5 with a point")),
    "no body can have it": (
        [*BODY, ["Ixx", 0.1, ""], ["Iyy", 0.2, ""]],
        ("a tensor that a body can have", "Ixx + Iyy = 0.3"),
    ),
}


@pytest.mark.parametrize(("body", "says"), NO_BODY.values(), ids=NO_BODY)
def test_a_record_is_refused_with_the_line(body: Any, says: tuple[str, ...]) -> None:
    refused("RB_DRIVE_TORQUE", [body, STILL, "none", "(0, 0) m"], *says)


# -- sizes: a tube of steel, m = rho pi/4 (OD^2 - ID^2) L

STEEL = 7850.0
MASS = STEEL * math.pi / 4 * (0.1**2 - 0.09**2) * 1.5

SIZES: dict[str, Any] = {
    "a text": "OD 100 mm; ID 90 mm; L 1.5 m",
    "equal signs": "OD=100 mm; ID = 90 mm; L= 1500mm",
    "small letters": "od 100 mm; id 90 mm; l 1.5 m",
    "the wall": "OD 100 mm; t 5 mm; L 1.5 m",
    "radii": "Ro 50 mm; Ri 45 mm; L 1.5 m",
    "rows": [["OD", 100.0, "mm"], ["ID", 90.0, "mm"], ["L", 1.5, "m"]],
    "rows with units in the cells": [["OD", "100 mm"], ["ID", "90 mm"], ["L", "1.5 m"]],
    "rows with units in the labels": [["OD [mm]", 100.0], ["ID (mm)", 90.0], ["L [m]", 1.5]],
    "blank rows": [["OD", 100.0, "mm"], [None, None, None], ["ID", 90.0, "mm"], ["L", 1.5, "m"]],
    "columns of one row": [["OD [mm]", "ID [mm]", "L [m]"], [100.0, 90.0, 1.5]],
    "columns in round brackets": [["OD (mm)", "ID (mm)", "L (m)"], [100.0, 90.0, 1.5]],
    "columns with units in the cells": [["OD", "ID", "L"], ["100 mm", "90 mm", "1.5 m"]],
}


@pytest.mark.parametrize("sizes", SIZES.values(), ids=SIZES)
def test_sizes_are_read_by_label(sizes: Any) -> None:
    assert answer("RB_SHAPE_MASS", "tube", STEEL, sizes) == pytest.approx(MASS, rel=1e-13)


def test_columns_of_sizes_give_a_column() -> None:
    sizes = [["OD [mm]", "ID [mm]", "L [m]"], [100.0, 90.0, 1.5], [100.0, 90.0, 3.0]]
    assert flat("RB_SHAPE_MASS", "tube", STEEL, sizes) == pytest.approx([MASS, 2 * MASS], rel=1e-13)
    assert flat("RB_SHAPE_MASS", "tube", [[STEEL], [2 * STEEL]], sizes) == pytest.approx(
        [MASS, 4 * MASS], rel=1e-13
    )
    refused("RB_SHAPE_MASS", ["tube", [[STEEL]] * 3, sizes], "`sizes`", "3 rows", "got 2 rows")


NO_SIZES: dict[str, tuple[Any, tuple[str, ...]]] = {
    "blank": (None, ("labelled sizes", "a blank cell")),
    "a number": (0.1, ("labelled sizes", "0.1")),
    "positions": ([[100.0, 90.0, 1500.0]], ("`sizes`",)),
    "no size": ("none", ("OD/Ro", "got no size")),
    "one is missing": ("OD 100 mm; L 1.5 m", ("got no ID/Ri",)),
    "an unknown label": ("OD 100 mm; XD 90 mm; L 1.5 m", ("known labels", "'XD'")),
    "a label of another shape": ("OD 100 mm; ID 90 mm; W 1.5 m", ("sizes of a tube", "'W'")),
    "a diameter for a radius": ("D 100 mm; ID 90 mm; L 1.5 m", ("sizes of a tube", "'D'")),
    "twice": ("OD 100 mm; OD 90 mm; L 1.5 m", ("each label once", "'OD'")),
    "commas": ("OD 100 mm, ID 90 mm, L 1.5 m", ("parted by semicolons",)),
    "a wrong unit": ("OD 100 kg; ID 90 mm; L 1.5 m", ("`OD` must be a length", "'kg' (mass)")),
    "a wrong unit in a row": (
        [["OD", 100.0, "kg"], ["ID", 90.0, "mm"]],
        ("`OD`", "'kg' (mass)", "(sizes, row 1)"),
    ),
    "a blank value": ([["OD", None, "mm"], ["ID", 90.0, "mm"]], ("`OD`", "a blank cell", "(sizes, row 1)")),
    "a column without unit": (
        [["OD [mm]", "ID", "L [m]"], [100.0, 90.0, 1.5]],
        ("column 'ID' has none", "'ID [m]'"),
    ),
    "a column with a blank": (
        [["OD [mm]", "ID [mm]"], [100.0, 90.0], [None, 90.0]],
        ("`OD`", "a blank cell", "row 3"),
    ),
    "a column twice": ([["OD [mm]", "OD [mm]"], [100.0, 90.0]], ("each label once", "'OD'")),
    "no such tube": ("OD 90 mm; ID 100 mm; L 1.5 m", ("ID must be less than OD",)),
    "negative": ("OD -100 mm; ID 90 mm; L 1.5 m", ("`OD`", "-0.1")),
    "a label without a value": ("OD 100 mm; ID", ("sizes like", "'ID'")),
}


@pytest.mark.parametrize(("sizes", "says"), NO_SIZES.values(), ids=NO_SIZES)
def test_sizes_are_refused(sizes: Any, says: tuple[str, ...]) -> None:
    refused("RB_SHAPE_MASS", ["tube", STEEL, sizes], *says)


SUPPORTS = [["support", "type", "x [m]", "y [m]"], ["post", "fixed", 0.0, 0.0]]
LOADS = [["load", "x [m]", "y [m]", "Fx [N]"], ["wind", 0.0, 0.0, 5.0]]


def with_column(table: list[list[Any]], head: str, value: Any) -> list[list[Any]]:
    return [[*table[0], head], *([*row, value] for row in table[1:])]


@pytest.mark.parametrize(
    ("head", "value", "says"),
    [
        *((head, 4.0, None) for head in ("number", "Pieces", "n")),  # there is a qty beside it
        ("factor", 4.0, "'qty'"),
        *((head, -1.0, "-1 for a cut-out") for head in ("sign", "cut-out", "hole")),
        *(
            (head, 30.0, "turn z")
            for head in ("rotation z [deg]", "rot z", "tilt z [rad]", "inclination [deg]")
        ),
        ("Jzz [kg*m^2]", 3.0, "Ixx, Iyy, Izz"),
        ("pull [N*m]", None, None),
        ("drawing length [mm]", 3.0, None),
        ("total mass [kg]", 3.0, None),
        ("datum", "yes", "'at'"),
    ],
)
def test_an_unknown_column_that_would_count_is_not_passed_over(
    head: str, value: Any, says: str | None
) -> None:
    table = with_column([HEADER, A, B], head, value)
    if says is None:
        assert center(*table) == pytest.approx(0.75, rel=1e-14)
    else:
        no_table(table, "known columns", repr(head), says)


@pytest.mark.parametrize("head", ["number", "Pieces", "amount", "n", "off", "no. off", "Nos."])
def test_a_count_under_an_unknown_header_is_not_taken_as_one(head: str) -> None:
    no_table([["part", head, "shape", "mass [kg]", "x [m]"], ["a", 4.0, "point", 1.0, 0.0]], "write 'qty'")


def test_a_place_under_an_unknown_header_is_not_taken_as_zero() -> None:
    no_table(
        [["part", "shape", "mass [kg]", "cx [mm]", "cy [mm]"], ["a", "point", 1.0, 30.0, 40.0]], "x, y, z"
    )


@pytest.mark.parametrize(
    "head", ["Fh [N]", "P [kN]", "torque [N*m]", "direction [deg]", "load factor", "qty"]
)
def test_an_unknown_column_of_loads_that_would_count_is_not_passed_over(head: str) -> None:
    refused("RB_RESULTANT", [with_column(LOADS, head, 2.0)], "known columns", repr(head))


def test_friction_of_a_support_is_not_passed_over() -> None:
    body, motion = (
        "mass 8 kg; center (1, 0) m; Izz 3 kg*m^2",
        "omega 0; alpha 0; gravity down; fixed point (0, 0) m",
    )
    table = with_column(SUPPORTS, "mu", 0.3)
    refused("RB_REACTIONS", [body, motion, "none", table], "'mu'", "Friction is not counted")
