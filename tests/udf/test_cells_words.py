"""Words, texts, quantities of any kind, and calls that ask about another call."""

from __future__ import annotations

from typing import Any

import pytest
from cell_answers import answer, flat, refused

from rigidsheet.udf.calling import call, working
from rigidsheet.udf.cells import OMITTED, CellError, Refusal


@pytest.mark.parametrize("word", ["at least", "AT LEAST", " At  Least ", "at_least", ">="])
def test_a_word_is_read_whatever_its_case_and_blanks(word: str) -> None:
    assert answer("RB_CHECK", "5 N", "10 N", word) == "FAIL"
    assert answer("RB_CHECK", "15 N", "10 N", word) == "OK"


def test_a_word_that_is_not_known_is_refused_with_the_known_ones() -> None:
    refused("RB_CHECK", ["5 N", "10 N", "less"], "`sense`", "'at most', 'at least'", "'less'")
    refused("RB_CHECK", ["5 N", "10 N", 5.0], "`sense`", "5")
    refused("RB_CHECK", ["5 N", "10 N", None], "`sense`", "a blank cell")
    refused("RB_CHECK", ["5 N", "10 N", True], "`sense`", "the boolean TRUE")
    refused("RB_CHECK", ["5 N", "10 N", [["at most", "at least"]]], "`sense`", "a block of 1 x 2 cells")


def test_what_is_one_of_the_results() -> None:
    cells: list[Any] = ["10 N", "20 N", 1.0]
    assert answer("RB_MARGIN", *cells, "factor") == 2.0
    assert answer("RB_MARGIN", *cells, "Utilization") == 0.5
    assert answer("RB_MARGIN", *cells) == answer("RB_MARGIN", *cells, "margin") == 1.0
    assert answer("RB_MARGIN", *cells, "all") == [
        ["margin", 1.0, ""],
        ["factor", 2.0, ""],
        ["utilization", 0.5, ""],
    ]
    refused("RB_MARGIN", [*cells, "marjin"], "`what`", "'marjin'", "'margin'")
    refused("RB_MARGIN", [*cells, ""], "`what`", "a blank cell")


TUBE: list[Any] = ["tube", "18.4 kg", "OD 114.3 mm; ID 101.7 mm; L 520 mm"]


def test_a_record_of_results_states_units_and_refuses_one() -> None:
    rows = answer("RB_SHAPE", *TUBE, "all")
    assert ["mass", 18.4, "kg"] in rows
    assert {row[2] for row in rows} == {"kg", "m", "kg*m^2", ""}
    refused("RB_SHAPE", [*TUBE, "all", "kg"], "`unit`", "left out when all results are asked", "Choose one")
    refused("RB_ROLLUP", [PARTS, OMITTED, OMITTED, "kg"], "`unit`", "left out when all results are asked")
    refused("RB_SHAPE", [*TUBE, "products", "kg"], "`unit`", "'products', which carries no unit")
    refused("RB_SHAPE", [*TUBE, "mass", "mm"], "`unit`", "'mm' (length)")


def test_a_record_of_results_is_for_one_row_only() -> None:
    masses = [[1.0], [2.0]]
    refused("RB_SHAPE", ["tube", masses, TUBE[2], "all"], "`what`", "columns")
    assert len(answer("RB_SHAPE", "tube", masses, TUBE[2], "Izz")) == 2
    three = [[0.0, 0.0, 0.0]] * 3
    refused("RB_ACCELERATION_AT", [three, 1.0, 1.0, three, "all"], "`what`", "columns")


def test_rows_that_are_known_only_when_solved() -> None:
    body = [["mass", 2.0, "kg"], ["x", 0.5, "m"], ["y", 0.0, "m"], ["Izz", 1.0, "kg*m^2"]]
    motion = [["omega", 0.0, ""], ["alpha", 0.0, ""], ["gravity", "down", ""], ["fixed point", 0.0, 0.0]]
    supports = [
        ["support", "type", "x [m]", "y [m]", "angle [deg]"],
        ["A", "pin", 0.0, 0.0, None],
        ["B", "roller", 1.0, 0.0, 90.0],
    ]
    cells: list[Any] = [body, motion, "none", supports]
    half = 2.0 * 9.80665 / 2.0  # each end carries half the weight
    assert answer("RB_REACTIONS", *cells, "A Fy") == pytest.approx(half, rel=1e-12)
    assert answer("RB_REACTIONS", *cells, "a  fy", "kN") == pytest.approx(half / 1000.0, rel=1e-12)
    refused(
        "RB_REACTIONS", [*cells, "A Fz"], "`what` must be a row of the result", "'A Fz'", "'A F", error="#N/A"
    )
    refused("RB_REACTIONS", [*cells, OMITTED, "kN"], "`unit`", "left out when all rows are asked")
    refused("RB_REACTIONS", [*cells, "all", "kN"], "`unit`", "left out when all rows are asked")
    assert answer("RB_REACTIONS", *cells, "all") == answer("RB_REACTIONS", *cells)


PARTS = [
    ["part", "shape", "mass [kg]", "x [m]", "y [m]"],
    ["a", "point", 1.0, 0.0, 0.0],
    ["b", "point", 3.0, 1.0, 0.0],
]


@pytest.mark.parametrize(
    ("quantity", "millimeters"),
    [
        ("0.4 m", 400.0),
        ([[0.4, "m"]], 400.0),
        ([[0.4], ["m"]], 400.0),
        ([["0.4", "m"]], 400.0),
        ([["0.4 m"]], 400.0),
        ("−0.4 m", -400.0),
        ("1 in", 25.4),
    ],
)
def test_a_quantity_of_whatever_kind(quantity: Any, millimeters: float) -> None:
    assert answer("RB_CONVERT", quantity, "mm") == pytest.approx(millimeters, rel=1e-14)


def test_a_column_of_quantities_in_one_unit() -> None:
    for column in ([[1.0], [2.0], ["m"]], [["m"], [1.0], [2.0]], [["1 m"], ["2 m"]]):
        assert flat("RB_CONVERT", column, "mm") == [1000.0, 2000.0]
    refused("RB_CONVERT", [[["1 m"], ["2 mm"]], "mm"], "a column in one unit")
    refused("RB_CONVERT", [[[1.0], [None], ["m"]], "mm"], "a blank cell", "row 2")


@pytest.mark.parametrize(
    ("quantity", "says"),
    [
        (0.4, ("a bare number", "'400 mm'")),
        ("0.4", ("a bare number",)),
        (None, ("a blank cell",)),
        ("", ("a blank cell",)),
        (True, ("the boolean TRUE",)),
        ("0,4 m", ("Write 0.4 m with a point",)),
        ([["m", 0.4]], ("the unit 'm' first", "Put the number first")),
        ([["m"], [0.4]], ("the unit 'm' first", "Put the number first")),
        ([[0.4, None]], ("the unit cell beside 0.4 is blank",)),
        ([["0.4 mm", "m"]], ("two units", "'mm'", "'m'")),
        ([[0.4, 0.5]], ("a block of 1 x 2 cells",)),
        ([[0.4, 0.5, "m"]], ("a block of 1 x 3 cells",)),
        ("5 kg", ("'mm' (length)", "mass")),
    ],
)
def test_no_quantity(quantity: Any, says: tuple[str, ...]) -> None:
    refused("RB_CONVERT", [quantity, "mm"], *says)


def test_a_bare_number_beside_a_united_one_is_refused() -> None:
    refused("RB_MARGIN", [10.0, "20 N"], "`demand` must be given with its unit")
    refused("RB_MARGIN", ["10 N", 20.0], "`capacity` must be given with its unit")
    refused("RB_MARGIN", ["10 N", "20 N*m"], "`capacity`", "'N*m'", "torque")
    assert answer("RB_MARGIN", 10.0, 20.0) == 1.0


def test_columns_of_amounts_must_be_equally_long() -> None:
    refused("RB_MARGIN", [[[1.0], [2.0], [3.0]], [[1.0], [2.0]]], "`capacity`", "3 rows", "got 2 rows")
    refused(
        "RB_MARGIN", [[[1.0], [2.0], [3.0]], 1.0, [[1.0], [2.0]]], "`required_factor`", "3 rows", "got 2 rows"
    )
    assert flat("RB_MARGIN", [[1.0], [2.0]], [[2.0], [8.0]], [[1.0], [2.0]]) == [1.0, 1.0]


# -- calls about other calls


def test_why_gives_the_sentence_of_the_refused_call() -> None:
    for name, cells in (
        ("RB_TORQUE", ["85 kg", 1.0]),
        ("RB_TORQUE", [1.0]),
        ("RB_TORQUE", [CellError("#DIV/0!"), 1.0]),
        ("RB_CONVERT", [[["mm", 4.0]], "in"]),
        ("RB_MARGIN", ["0 N", "5 N"]),
    ):
        found = call(name, cells)
        assert isinstance(found, Refusal)
        assert answer("RB_WHY", name, *cells) == found.reason


def test_why_of_a_good_call_and_of_what_is_no_call() -> None:
    assert answer("RB_WHY", "RB_TORQUE", 2.0, 3.0) == "Not refused: the call has an answer."
    assert (
        answer("RB_WHY", "rb_torque", 2.0, OMITTED)
        == "`alpha` must be given: angular acceleration, ccw +; the argument is missing."
    )
    refused(
        "RB_WHY",
        ["RB_TORK", 1.0],
        "There is no function 'RB_TORK'",
        "Did you mean 'RB_TORQUE'?",
        error="#N/A",
    )
    refused(
        "RB_WHY", ["RB_WHY", "RB_TORQUE", 1.0], "`of_function` must be a function that computes something"
    )
    refused("RB_WHY", [], "`of_function` must be given")
    refused("RB_WHY", [5.0], "`of_function` must be a text", "5")
    refused("RB_WHY", [CellError("#N/A"), 5.0], "passes through", error="#N/A")
    assert "`inertia` must be given" in answer("RB_WHY", "RB_TORQUE")


def test_working_of_a_good_call_ends_in_the_result() -> None:
    # 2 kg m^2 at 90 deg/s^2 = pi/2 rad/s^2: pi N m
    rows = flat("RB_WORKING", "RB_TORQUE", 2.0, "90 deg/s^2")
    assert rows == working("RB_TORQUE", [2.0, "90 deg/s^2"])
    assert "T = I alpha = 2 kg*m^2 * 1.5708 rad/s^2 = 3.14159 N*m" in rows[-1]


def test_working_in_a_unit_ends_in_the_number_of_the_cell() -> None:
    rows = flat("RB_WORKING", "RB_TORQUE", 2.0, "90 deg/s^2", "N*cm")
    assert rows[-1] == "In the unit asked for: 314.159 N*cm"
    rows = flat("RB_WORKING", "RB_ARM", "(0, 0) m", "(1, 2) m", "mm")
    assert rows[-1] == "In the unit asked for: (1000, 2000) mm"


def test_working_of_a_column_shows_the_first_row() -> None:
    rows = flat("RB_WORKING", "RB_TORQUE", [[2.0], [3.0]], 1.0)
    assert "= 2 N*m" in rows[-2]
    assert rows[-1] == "Row 1 of 2; the other rows go the same way."
    for cells in (["RB_MARGIN", [[1.0], [2.0]], 4.0], ["RB_SHAPE", "tube", [[1.0], [2.0]], TUBE[2], "Izz"]):
        rows = flat("RB_WORKING", *cells)
        assert [row for row in rows if row.startswith("Row 1")] == [
            "Row 1 of 2; the other rows go the same way."
        ]


def test_working_of_a_refused_call_tells_the_error_and_the_reason() -> None:
    rows = flat("RB_WORKING", "RB_TORQUE", "85 kg", 1.0)
    assert rows[0] == "Refused with #VALUE!"
    assert "`inertia` must be a moment of inertia" in rows[1]
    assert isinstance(working("RB_TORQUE", ["85 kg", 1.0]), Refusal)
    assert isinstance(working("RB_TORK", [1.0]), Refusal)
    # refused only by the unit of the result
    assert flat("RB_WORKING", "RB_TORQUE", 1.0, 1.0, "kg")[0] == "Refused with #VALUE!"


def test_an_unknown_function_is_not_there() -> None:
    found = call("RB_TORK", [1.0])
    assert found == Refusal("#N/A", "There is no function 'RB_TORK'. Did you mean 'RB_TORQUE'?")


def test_a_long_text_is_cut_in_the_sentence() -> None:
    refused("RB_TORQUE", ["x" * 5000, 1.0], "'" + "x" * 37 + "...'")
    refused("RB_WHY", ["x" * 5000], "'" + "x" * 37 + "...'", error="#N/A")
    refused("RB_CHECK", ["5 N", "5 N", "y" * 5000], "'" + "y" * 37 + "...'")


def test_a_number_beyond_all_bounds_is_no_answer() -> None:
    refused("RB_TORQUE", [1e200, 1e200], "not a finite number", error="#NUM!")
    refused("RB_REFLECTED_INERTIA", [1.0, 1e-200], "not a finite number", error="#NUM!")
    assert flat("RB_WORKING", "RB_TORQUE", 1e200, 1e200)[0] == "Refused with #NUM!"


def test_no_negative_zero_leaves() -> None:
    assert str(answer("RB_TORQUE", 0.0, -1.0)) == "0.0"
    assert [str(v) for v in flat("RB_TORQUE", [[0.0], [0.0]], -1.0)] == ["0.0", "0.0"]


@pytest.mark.parametrize(
    "value",
    [
        *("n/a", "N.A.", "-", "\N{EM DASH}", "...", "?", "TBD", "pending", "#N/A", "#VALUE!", "=180", "OK"),
        *("FALSE", "(180)", "~180", "<180", "180,5", None, ""),
    ],
)
def test_a_first_case_without_a_clean_value_never_passes_for_a_header(value: Any) -> None:
    """It would vanish from the envelope, and it may be the case that governs."""
    refused("RB_ENVELOPE", [[["jam stop", value], ["lift", 130.0], ["hold", 90.0]]], "row 1, 'jam stop'")


@pytest.mark.parametrize("value", ["-180", "-180 N*m", "\N{MINUS SIGN}180 N*m", "+180 N*m", ".18 kN*m"])
def test_a_first_case_with_a_number_as_text_counts(value: str) -> None:
    unit = " N*m" if "N" in value else ""
    cases = [["jam stop", value], ["lift", f"130{unit}"], ["hold", f"90{unit}"]]
    assert answer("RB_ENVELOPE", cases, "governing") == "jam stop"


@pytest.mark.parametrize("label", ["torque [N*m]", "torque (N*m)", "Torque", "[N*m]", "M2", "n"])
def test_a_header_of_cases_is_no_case(label: str) -> None:
    cases = [["case", label], ["lift", 130.0], ["lower", -180.0]]
    assert answer("RB_ENVELOPE", cases, "governing") == "lower"
    assert answer("RB_ENVELOPE", cases, "unit") == ("N*m" if "N*m" in label else "")
