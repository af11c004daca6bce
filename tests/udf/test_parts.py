"""The parts list: cut-outs, patterns, turns, datum, measured parts, sub-assemblies, against definitions."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from cell_answers import answer, refused
from scipy.spatial.transform import Rotation

Rows = list[list[Any]]


def roll(rows: Rows, what: str, *more: Any) -> Any:
    return answer("RB_ROLLUP", rows, what, *more)


def tensor(rows: Rows, *about: Any) -> Any:
    return np.array(roll(rows, "inertia", *about))


def no_list(rows: Rows, *says: str, error: str = "#VALUE!") -> None:
    refused("RB_ROLLUP", [rows, "mass"], *says, error=error)


def points(*spots: tuple[float, float, float, float]) -> Any:
    """Tensor of point masses (m, x, y, z) about their mass center, from its definition."""
    m, r = np.array([s[0] for s in spots]), np.array([s[1:] for s in spots])
    d = r - (m @ r) / m.sum()
    return sum(k * (v @ v * np.eye(3) - np.outer(v, v)) for k, v in zip(m, d, strict=True))


HEADER = ["part", "qty", "shape", "mass [kg]", "x [m]", "y [m]", "z [m]"]


def test_points_sum_to_what_the_definition_says() -> None:
    spots = [(2.0, 0.1, -0.2, 0.3), (3.0, -0.5, 0.4, 0.0), (1.5, 0.7, 0.2, -0.9)]
    rows = [HEADER, *[[f"p{i}", 1.0, "point", *s] for i, s in enumerate(spots)]]
    assert roll(rows, "mass") == pytest.approx(6.5, rel=1e-15)
    assert tensor(rows) == pytest.approx(points(*spots), rel=1e-13)
    about = tensor(rows, "origin")
    direct = sum(m * (np.dot(r, r) * np.eye(3) - np.outer(r, r)) for m, *r in spots)
    assert about == pytest.approx(direct, rel=1e-13)
    assert tensor(rows, "(0, 0, 0) m") == pytest.approx(direct, rel=1e-13)
    assert tensor(rows, "mass center") == pytest.approx(points(*spots), rel=1e-13)


def test_terms_of_the_record_are_tensor_terms() -> None:
    spots = [(2.0, 0.1, -0.2, 0.3), (3.0, -0.5, 0.4, 0.0)]
    rows = [HEADER, *[[f"p{i}", 1.0, "point", *s] for i, s in enumerate(spots)]]
    record = {row[0]: row[1] for row in answer("RB_ROLLUP", rows)}
    wanted = points(*spots)
    assert record["products"] == "tensor terms"
    for k, (i, j) in {
        "Ixx": (0, 0),
        "Iyy": (1, 1),
        "Izz": (2, 2),
        "Ixy": (0, 1),
        "Iyz": (1, 2),
        "Izx": (2, 0),
    }.items():
        assert record[k] == pytest.approx(wanted[i, j], rel=1e-13)


def test_a_cut_out_is_a_part_of_quantity_minus_one() -> None:
    # a square plate with a square hole: m b^2/12 of the whole less the hole, shifted (handbook)
    header = [*HEADER, "L [m]", "W [m]", "H [m]"]
    plate, hole = (
        ["plate", 1.0, "box", 8.0, 0.0, 0.0, 0.0, 2.0, 2.0, 0.1],
        ["hole", -1.0, "box", 0.5, 0.5, 0.0, 0.0, 0.5, 0.5, 0.1],
    )
    rows: Rows = [header, plate, hole]
    assert roll(rows, "mass") == pytest.approx(7.5)
    x = (8.0 * 0.0 - 0.5 * 0.5) / 7.5
    assert roll(rows, "x") == pytest.approx(x, rel=1e-14)
    izz = 8.0 * (4.0 + 4.0) / 12 + 8.0 * x**2 - (0.5 * 0.5 / 12 + 0.5 * (0.5 - x) ** 2)
    assert roll(rows, "Izz") == pytest.approx(izz, rel=1e-13)
    no_list(
        [header, plate, [*hole[:3], 8.0, *hole[4:]]], "total mass", "cut-outs weigh as much", error="#NUM!"
    )


def test_pieces_in_one_place_on_a_circle_and_on_a_line() -> None:
    header = [*HEADER, "pattern", "pattern x [m]", "pattern y [m]", "pattern z [m]"]
    one = [
        header,
        ["p", 3.0, "point", 2.0, 0.3, 0.1, 0.0, "one place", None, None, None],
        ["o", 1.0, "point", 1.0, 0.0, 0.0, 0.0, None, None, None, None],
    ]
    assert roll(one, "x") == pytest.approx(6.0 * 0.3 / 7.0, rel=1e-14)
    ring = [header, ["p", 5.0, "point", 2.0, 0.7, 0.2, 0.4, "circle z", 0.3, 0.2, None]]
    turns = 2 * math.pi * np.arange(5) / 5
    spots = [(2.0, 0.3 + 0.4 * math.cos(t), 0.2 + 0.4 * math.sin(t), 0.4) for t in turns]
    assert tensor(ring) == pytest.approx(points(*spots), rel=1e-12, abs=1e-14)
    assert [roll(ring, k) for k in "xyz"] == pytest.approx([0.3, 0.2, 0.4], rel=1e-13)
    line = [header, ["p", 4.0, "point", 2.0, 0.1, 0.2, 0.3, "line", 0.5, -0.1, None]]
    spots = [(2.0, 0.1 + 0.5 * k, 0.2 - 0.1 * k, 0.3) for k in range(4)]
    assert tensor(line) == pytest.approx(points(*spots), rel=1e-12, abs=1e-14)
    assert roll(line, "x") == pytest.approx(0.1 + 0.5 * 1.5, rel=1e-14)


def test_a_circle_turns_the_pieces_with_it() -> None:
    # four rods along x at radius R turn into a cross: each adds m (L^2/12 + R^2) about z, and x and y become equal
    header = [*HEADER, "L [m]", "turn y [deg]", "pattern"]
    rows: Rows = [header, ["rod", 4.0, "slender rod", 3.0, 0.5, 0.0, 0.0, 0.4, 90.0, "circle z"]]
    found = tensor(rows)
    assert found[2, 2] == pytest.approx(4 * 3.0 * (0.4**2 / 12 + 0.5**2), rel=1e-12)
    assert found[0, 0] == pytest.approx(found[1, 1], rel=1e-12)
    assert found[0, 0] == pytest.approx(found[2, 2] / 2, rel=1e-12)  # a flat figure


def test_a_turned_part_turns_as_scipy_turns_it() -> None:
    header = [*HEADER, "L [m]", "W [m]", "H [m]", "turn x [deg]", "turn y [deg]", "turn z [deg]"]
    rows: Rows = [header, ["b", 1.0, "box", 6.0, 0.0, 0.0, 0.0, 0.5, 0.3, 0.2, 20.0, -35.0, 70.0]]
    straight: Rows = [header[:10], rows[1][:10]]
    r = Rotation.from_euler(
        "xyz", [20.0, -35.0, 70.0], degrees=True
    ).as_matrix()  # lower case: fixed axes, in this order
    assert tensor(rows) == pytest.approx(r @ tensor(straight) @ r.T, rel=1e-12, abs=1e-14)


def test_places_by_datum() -> None:
    # the mass center of a solid cone is a quarter of its height above the base (handbook)
    header = ["part", "shape", "mass [kg]", "D [m]", "H [m]", "x [m]", "y [m]", "z [m]", "at"]
    cone = ["cone", "solid cone", 2.0, 0.4, 0.8, 0.1, 0.0, 0.3]
    assert roll([header, [*cone, "datum"]], "z") == pytest.approx(0.3 + 0.2, rel=1e-13)
    assert roll([header, [*cone, "mass center"]], "z") == pytest.approx(0.3, rel=1e-13)
    assert roll([header, [*cone, None]], "z") == pytest.approx(0.3, rel=1e-13)
    # turned by 90 degrees about x the height points along -y
    turned: Rows = [[*header, "turn x [deg]"], [*cone, "datum", 90.0]]
    assert [roll(turned, k) for k in "xyz"] == pytest.approx([0.1, -0.2, 0.3], abs=1e-13)


TERMS = [
    "part",
    "mass [kg]",
    "x [m]",
    "y [m]",
    "z [m]",
    "Ixx [kg*m^2]",
    "Iyy [kg*m^2]",
    "Izz [kg*m^2]",
    "Ixy [kg*m^2]",
]


def test_a_measured_part_about_its_mass_center_or_the_origin() -> None:
    row: list[Any] = ["m", 2.0, 0.3, 0.4, 0.0, 1.0, 1.2, 1.5, 0.1]
    header = [*TERMS, "about", "products"]
    own = tensor([header, [*row, "mass center", "tensor terms"]])
    assert own == pytest.approx(np.array([[1.0, 0.1, 0.0], [0.1, 1.2, 0.0], [0.0, 0.0, 1.5]]), rel=1e-14)
    assert tensor([header, [*row, "mass center", "integrals"]])[0, 1] == pytest.approx(-0.1)
    # parallel axis by hand: Ixx - m y^2, Iyy - m x^2, Izz - m (x^2 + y^2), Ixy + m x y
    shifted = tensor([header, [*row, "origin", "tensor terms"]])
    assert shifted[0, 0] == pytest.approx(1.0 - 2.0 * 0.16, rel=1e-13)
    assert shifted[1, 1] == pytest.approx(1.2 - 2.0 * 0.09, rel=1e-13)
    assert shifted[2, 2] == pytest.approx(1.5 - 2.0 * 0.25, rel=1e-13)
    assert shifted[0, 1] == pytest.approx(0.1 + 2.0 * 0.12, rel=1e-13)


def test_a_sub_assembly_is_placed_and_turned_as_one_body() -> None:
    header = [*HEADER, "at", "turn z [deg]", "in"]
    inner = [
        ["p", 1.0, "point", 2.0, 0.2, 0.0, 0.0, None, None, "arm"],
        ["q", 1.0, "point", 1.0, 0.8, 0.1, 0.0, None, None, "arm"],
    ]
    rows: Rows = [header, ["arm", 1.0, "assembly", None, 1.0, 2.0, 0.0, "datum", 90.0, None], *inner]
    # turned by 90 degrees (x, y) becomes (-y, x), then moved by (1, 2)
    assert tensor(rows) == pytest.approx(
        points((2.0, 1.0, 2.2, 0.0), (1.0, 0.9, 2.8, 0.0)), rel=1e-12, abs=1e-14
    )
    assert roll(rows, "y") == pytest.approx((2.0 * 2.2 + 2.8) / 3.0, rel=1e-13)


def test_contributions_add_up() -> None:
    rows: Rows = [HEADER, ["a", 1.0, "point", 1.0, 0.0, 0.0, 0.0], ["b", 1.0, "point", 3.0, 1.0, 0.5, 0.0]]
    table = roll(rows, "contributions")
    assert table[0][:3] == ["part", "mass [kg]", "of mass"]
    assert [row[0] for row in table[1:]] == ["a", "b", "whole body"]
    for k in range(1, len(table[0])):
        assert table[1][k] + table[2][k] == pytest.approx(table[3][k], rel=1e-12)


REFUSED: dict[str, tuple[Rows, tuple[str, ...]]] = {
    "an unknown shape": (
        [HEADER, ["a", 1.0, "pont", 1.0, 0.0, 0.0, 0.0]],
        ("`shape`", "'pont'", "point", "(row 2, 'a')"),
    ),
    "no shape": (
        [HEADER, ["a", 1.0, None, 1.0, 0.0, 0.0, 0.0]],
        ("a shape for each part", "'point'", "(row 2, 'a')"),
    ),
    "no mass": ([HEADER, ["a", 1.0, "point", None, 0.0, 0.0, 0.0]], ("a mass or a density", "(row 2, 'a')")),
    "mass and density": (
        [[*HEADER, "density [kg/m^3]"], ["a", 1.0, "point", 1.0, 0.0, 0.0, 0.0, 5.0]],
        ("not both",),
    ),
    "no place": (
        [HEADER, ["a", 1.0, "point", 1.0, None, 0.0, 0.0]],
        ("x is blank", "Type 0", "(row 2, 'a')"),
    ),
    "half a piece": ([HEADER, ["a", 1.5, "point", 1.0, 0.0, 0.0, 0.0]], ("whole numbers as qty", "1.5")),
    "no piece": (
        [HEADER, ["a", 0.0, "point", 1.0, 0.0, 0.0, 0.0]],
        ("whole numbers as qty, none of them 0", "got 0", "all cells of the row blank", "(row 2, 'a')"),
    ),
    "a weight": (
        [["part", "shape", "weight [kg]", "x [m]", "y [m]"], ["a", "point", 1.0, 0.0, 0.0]],
        ("'weight [kg]'", "Write 'mass'"),
    ),
    "pieces without a pattern": (
        [HEADER, ["a", 2.0, "point", 1.0, 0.0, 0.0, 0.0]],
        ("`pattern`", "'one place'"),
    ),
    "an unknown pattern": (
        [[*HEADER, "pattern"], ["a", 2.0, "point", 1.0, 0.0, 0.0, 0.0, "grid"]],
        ("`pattern`", "'grid'"),
    ),
    "a line without a step": (
        [[*HEADER, "pattern"], ["a", 2.0, "point", 1.0, 0.0, 0.0, 0.0, "line"]],
        ("`pattern`", "step"),
    ),
    "a size is missing": (
        [HEADER, ["a", 1.0, "disk", 1.0, 0.0, 0.0, 0.0]],
        ("`sizes`", "disk", "got no size"),
    ),
    "a size too many": (
        [[*HEADER, "D [m]", "W [m]"], ["a", 1.0, "disk", 1.0, 0.0, 0.0, 0.0, 1.0, 1.0]],
        ("'W'",),
    ),
    "a size twice": (
        [[*HEADER, "R [m]", "sizes"], ["a", 1.0, "disk", 1.0, 0.0, 0.0, 0.0, 1.0, "R 1 m"]],
        ("'R'", "given once"),
    ),
    "no such place": ([[*HEADER, "at"], ["a", 1.0, "point", 1.0, 0.0, 0.0, 0.0, "left"]], ("`at`", "'left'")),
    "shape and tensor": (
        [[*TERMS, "shape"], ["m", 2.0, 0.0, 0.0, 0.0, 1.0, 1.0, 1.0, None, "point"]],
        ("not both",),
    ),
    "half a tensor": (
        [TERMS, ["m", 2.0, 0.0, 0.0, 0.0, 1.0, None, 1.0, None]],
        ("all of Ixx, Iyy, Izz", "Iyy is blank"),
    ),
    "a tensor about nothing": (
        [TERMS, ["m", 2.0, 0.0, 0.0, 0.0, 1.0, 1.0, 1.0, None]],
        ("`about`", "mass center or origin"),
    ),
    "a product without its form": (
        [[*TERMS, "about"], ["m", 2.0, 0.0, 0.0, 0.0, 1.0, 1.0, 1.0, 0.1, "origin"]],
        ("`products`", "minus sign"),
    ),
    "a tensor without mass": (
        [[*TERMS, "about"], ["m", None, 0.0, 0.0, 0.0, 1.0, 1.0, 1.0, None, "origin"]],
        ("the mass of each measured part",),
    ),
    "an assembly that is not placed": (
        [[*HEADER, "in"], ["a", 1.0, "point", 1.0, 0.0, 0.0, 0.0, "arm"]],
        ("'arm' is not", "'assembly' as shape"),
    ),
    "an assembly without parts": (
        [
            [*HEADER, "at", "in"],
            ["arm", 1.0, "assembly", None, 0.0, 0.0, 0.0, "datum", None],
            ["b", 1.0, "assembly", None, 0.0, 0.0, 0.0, "datum", None],
            ["c", 1.0, "point", 1.0, 0.0, 0.0, 0.0, None, "b"],
        ],
        ("the parts of each sub-assembly", "'arm'"),
    ),
    "an assembly inside itself": (
        [
            [*HEADER, "at", "in"],
            ["arm", 1.0, "assembly", None, 0.0, 0.0, 0.0, "datum", "b"],
            ["b", 1.0, "assembly", None, 0.0, 0.0, 0.0, "datum", "arm"],
            ["c", 1.0, "point", 1.0, 0.0, 0.0, 0.0, None, None],
        ],
        ("do not contain themselves", "(row 2, 'arm')"),
    ),
    "an assembly with a mass": (
        [
            [*HEADER, "at", "in"],
            ["arm", 1.0, "assembly", 5.0, 0.0, 0.0, 0.0, "datum", None],
            ["c", 1.0, "point", 1.0, 0.0, 0.0, 0.0, None, "arm"],
        ],
        ("no mass for a sub-assembly",),
    ),
}


@pytest.mark.parametrize(("rows", "says"), REFUSED.values(), ids=REFUSED)
def test_a_parts_list_is_refused_with_the_row(rows: Rows, says: tuple[str, ...]) -> None:
    no_list(rows, *says)


def test_the_row_at_fault_is_named_among_many() -> None:
    header = [*HEADER, "OD [mm]", "ID [mm]", "L [mm]"]
    rows = [header, *[[f"t{i}", 1.0, "tube", 1.0, 0.1 * i, 0.0, 0.0, 60.0, 50.0, 300.0] for i in range(200)]]
    rows[137][8] = 70.0  # an inner diameter above the outer
    no_list(rows, "ID must be less than OD", "(row 138, 't136')")


def test_a_point_of_no_kind_and_a_record_about_another_point_are_refused() -> None:
    rows: Rows = [HEADER, ["a", 1.0, "point", 1.0, 0.0, 0.0, 0.0]]
    refused("RB_ROLLUP", [rows, "Izz", "datum"], "`about`", "'mass center' / 'origin'", "'datum'")
    refused("RB_ROLLUP", [rows, "all", "origin"], "`what`", "a body's record is about its mass center")


def test_a_measured_tensor_too_small_for_the_origin_is_refused_as_such() -> None:
    """A point of 1 kg at x = 2 m has Iyy = Izz = 4 kg m^2 about the origin; 1.01 belongs to x = 1 m."""
    table = [
        [
            "part",
            "mass [kg]",
            *(f"{k} [m]" for k in "xyz"),
            "Ixx [kg*m^2]",
            "Iyy [kg*m^2]",
            "Izz [kg*m^2]",
            "about",
        ],
        ["motor", 1.0, 2.0, 0.0, 0.0, 0.04, 1.01, 1.05, "origin"],
    ]
    refused(
        "RB_ROLLUP", [table], "too small to be about the origin", "would be -2.9", "'motor'", error="#NUM!"
    )
    table[1][2] = 1.0
    assert answer("RB_ROLLUP", table, "Iyy") == pytest.approx(0.01, rel=1e-12)
