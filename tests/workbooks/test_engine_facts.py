"""Every known trait of the evaluation engine that could give a silently wrong number, handled or refused.

The expected cells are what spreadsheet programs show, by the definitions of their formula language.
"""

from __future__ import annotations

import threading
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np
import pytest
import workbook_parts as parts

from rigidsheet.udf.cells import OMITTED, CellError, Refusal
from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.errors import FileRefused, FormulaRefused, UnknownFunction
from rigidsheet.workbooks.evaluation.calls import gate
from rigidsheet.workbooks.evaluation.engine import Formualizer
from rigidsheet.workbooks.evaluation.operators import compare

VALUE = CellError("#VALUE!")


class Recorder:
    """A cell function that keeps its arguments and answers with a fixed value."""

    def __init__(self, answer: Any = 7.0) -> None:
        self.calls: list[tuple[Any, ...]] = []
        self.answer = answer

    def __call__(self, *cells: Any) -> Any:
        self.calls.append(cells)
        return self.answer


def run(
    cells: Mapping[str, str], functions: Mapping[str, Callable[..., Any]] | None = None, **more: Any
) -> dict[str, Any]:
    """Return what the formula cells of one sheet hold."""
    book = parts.workbook({"S": {ref: parts.cell(ref, value) for ref, value in cells.items()}}, **more)
    return {ref: value for (_, ref), value in recalculate(book, functions=functions or {}).values.items()}


def array(ref: str, frame: str, formula: str, inner: str = "") -> str:
    return f'<c r="{ref}"><f t="array" ref="{frame}">{formula}</f>{inner}</c>'


def test_callbacks_run_on_the_main_thread() -> None:
    seen = []

    def remember(*cells: Any) -> float:
        seen.append(threading.current_thread() is threading.main_thread())
        return 1.0

    run({f"A{i}": "=RB_X()" for i in range(1, 40)}, {"RB_X": remember})
    assert seen == [True] * 39


@pytest.mark.parametrize("children", ["", '<c r="B2"><v>99</v></c>'])
def test_an_array_formula_fills_its_frame_also_when_the_file_holds_old_values(children: str) -> None:
    below = f'<row r="2"><c r="A2"><v>5</v></c>{children}</row>'
    sheet = parts.sheet(f'<row r="1"><c r="A1"><v>3</v></c>{array("B1", "B1:B2", "A1:A2*2")}</row>{below}')
    first = recalculate(parts.workbook({"S": sheet}), functions={})
    assert dict(first.values) == {("S", "B1"): 6.0, ("S", "B2"): 10.0}
    again = recalculate(first.package, functions={})
    assert again.values == first.values
    assert not again.changed


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("{1,2,3;4,5,6;7,8,9}", [1.0, 2.0, 4.0, 5.0]),  # larger than the frame: cut
        ("{1,2}", [1.0, 2.0, 1.0, 2.0]),  # one row: repeated downward
        ("{1;2}", [1.0, 1.0, 2.0, 2.0]),  # one column: repeated to the right
        ("5", [5.0, 5.0, 5.0, 5.0]),  # one value: everywhere
        ("NA()", [CellError("#N/A")] * 4),
    ],
)
def test_an_array_formula_keeps_to_its_frame(formula: str, expected: list[Any]) -> None:
    found = run({"A1": array("A1", "A1:B2", formula), "C1": "free", "A3": "free"})
    assert [found[ref] for ref in ("A1", "B1", "A2", "B2")] == expected
    assert set(found) == {"A1", "B1", "A2", "B2"}


def test_a_frame_larger_than_the_result_shows_not_available() -> None:
    found = run({"A1": array("A1", "A1:C3", "{1,2;3,4}")})
    none = CellError("#N/A")
    assert [found[r] for r in ("A1", "B1", "C1", "A2", "B2", "C2", "A3", "B3", "C3")] == [
        *(1.0, 2.0, none),
        *(3.0, 4.0, none),
        *(none, none, none),
    ]


def test_a_block_in_a_plain_cell_shows_its_first_value_and_spills_nowhere() -> None:
    found = run(
        {"A1": "=RB_X()", "A2": "=A1+1", "B1": "=COUNTA(A3:B9)"}, {"RB_X": Recorder([[4.0, 5.0], [6.0, 7.0]])}
    )
    assert found == {"A1": 4.0, "A2": 5.0, "B1": 0.0}


@pytest.mark.parametrize(
    "formula",
    ["A1:A3*2", "A1:A3", "ABS(A1:A3)", "SUM(A1:A3*2)", "SUM(IF(A1:A3>1,1,0))", "SUM((A1:A3)^2)", "span+1"],
)
def test_a_range_where_a_plain_cell_would_take_one_row_of_it_is_refused(formula: str) -> None:
    with pytest.raises(FormulaRefused, match=r"the range \S+ stands where one value is needed.*\(S!B2\)"):
        run({"A1": "=1", "A2": "=2", "A3": "=3", "B2": f"={formula}"}, names={"span": "S!$A$1:$A$3"})


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("RB_X(1,,3)", (1.0, OMITTED, 3.0)),
        ("RB_X(1,)", (1.0, OMITTED)),
        ("RB_X(,)", (OMITTED, OMITTED)),
        ("RB_X()", ()),
        ("RB_X( 1 , , 3 )", (1.0, OMITTED, 3.0)),
        ("RB_X(C9,\"\",0)", (None, "", 0.0)),  # blank, empty text and zero stay three things
        ("RB_X(\"a,b)(\"\"\",'O''Neil, (x)'!A1,{1,2;3,4})", ('a,b)("', 8.0, [[1.0, 2.0], [3.0, 4.0]])),
        ("RB_X(TRUE,A1:A2,A1:A1)", (True, [[1.0], [None]], 1.0)),
        ("RB_X(-2%)", (-0.02,)),
    ],
)  # fmt: skip
def test_arguments_arrive_as_they_stand(formula: str, expected: tuple[Any, ...]) -> None:
    function = Recorder()
    book = parts.workbook(
        {"S": {"A1": "<c r=\"A1\"><v>1</v></c>", "B1": f"={formula}"}, "O'Neil, (x)": {"A1": '<c r="A1"><v>8</v></c>'}}
    )  # fmt: skip
    assert recalculate(book, functions={"RB_X": function}).values["S", "B1"] == 7.0
    assert function.calls == [expected]


def test_an_omitted_argument_of_a_built_in_stays_what_it_is_there() -> None:
    function = Recorder()
    assert (
        run({"A1": "=IF(TRUE,,3)+ROUND(1.5,)", "A2": "=RB_X(IF(TRUE,,3),)"}, {"RB_X": function})["A1"] == 2.0
    )
    assert function.calls == [(0.0, OMITTED)]


@pytest.mark.parametrize(
    "name",
    [
        *("RB_X_Y", "rb_x_y", "_xll.RB_X_Y", "_xlfn.RB_X_Y", "_xlfn._xlws.rb_x_y", "_xludf.RB_X_Y"),
        *("[1]!RB_X_Y", "[0]!RB_X_Y", "'my functions.xlam'!RB_X_Y", "'C:\\add ins\\[x.xlam]a'!RB_X_Y"),
        *("functions.xlam!RB_X_Y", "ORG.RIGIDSHEET.ADDIN.RBXY", "org.rigidsheet.addin.rbxy"),
        *("ORG.RIGIDSHEET.ADDIN.RB_X_Y", "com.sun.star.sheet.addin.rb_x_y"),
        "_xlfn.COM.SUN.STAR.SHEET.ADDIN.RB_X_Y",
    ],
)
def test_every_spelling_of_a_function_name_is_read(name: str) -> None:
    assert run({"A1": f"={name}(2)*3"}, {"RB_X_Y": lambda x: x + 1.0}) == {"A1": 9.0}


@pytest.mark.parametrize("name", ["_xlfn.XOR", "_xlfn.XLOOKUP", "_xlfn.CONCAT", "_xlfn._xlws.SORT"])
def test_built_ins_with_the_prefix_of_newer_functions_are_known(name: str) -> None:
    arguments = {"_xlfn.XOR": "TRUE,FALSE", "_xlfn.XLOOKUP": "2,{1,2},{5,6}"}.get(name, '"a"')
    assert run({"A1": f"={name}({arguments})"})["A1"] in (True, 6.0, "a")


@pytest.mark.parametrize("formula", ["RB_TORQE(1)", "IFERROR(RB_TORQE(1),5)", "IF(TRUE,1,RB_TORQE(1))"])
def test_an_unknown_function_is_found_before_anything_runs(formula: str) -> None:
    function = Recorder()
    with pytest.raises(UnknownFunction, match=r"no function RB_TORQE.*Did you mean RB_TORQUE\?.*\(S!A2\)"):
        run({"A1": "=RB_TORQUE(1)", "A2": f"={formula}"}, {"RB_TORQUE": function})
    assert not function.calls


def test_an_unknown_built_in_and_an_unknown_name_are_found_too() -> None:
    with pytest.raises(UnknownFunction, match=r"no function SUMM\. Did you mean SUM\?"):
        run({"A1": "=IFERROR(SUMM(1),0)"})
    with pytest.raises(UnknownFunction, match=r"named arn\. Did you mean arm\?"):
        run({"A1": "=IFERROR(arn*2,0)"}, names={"arm": "S!$B$1"})


def test_names_in_texts_and_quoted_sheets_are_no_functions() -> None:
    book = parts.workbook({"S": {"A1": "=\"NOPE(1)\"&'NOPE(2)'!A1"}, "NOPE(2)": {"A1": "x"}})
    assert recalculate(book, functions={}).values["S", "A1"] == "NOPE(1)x"


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        *(
            ("S!$A$1", 6.0),
            ("'S'!$A$1", 6.0),
            ("2.5", 7.5),
            ("-3", -9.0),
            ("$B$1*2", None),
            ("2*S!$A$1", None),
        ),
        ("S!A1", None),
        ("S!$A$1,S!$B$1", None),
        ("1/2", None),
        ("RB_X(1)", None),
        ("{1,2}", None),
        ("other", None),
    ],
)
def test_a_name_is_a_fixed_place_or_a_number_and_never_a_formula(text: str, expected: float | None) -> None:
    cells, names = {"A1": '<c r="A1"><v>2</v></c>', "C1": "=twice*3"}, {"twice": text, "other": "S!$A$1"}
    if expected is None:
        with pytest.raises(FormulaRefused, match="the name twice stands for a formula"):
            run(cells, names=names)
        del cells["C1"]
    assert run({**cells, "D1": "=A1"}, names=names) == (
        {"D1": 2.0} if expected is None else {"C1": expected, "D1": 2.0}
    )


def test_names_of_one_sheet_and_of_another() -> None:
    names = [
        '<definedName name="loc" localSheetId="0">S!$A$1</definedName>',
        '<definedName name="loc" localSheetId="1">T!$A$1</definedName>',
        '<definedName name="gone">S!#REF!</definedName>',
    ]
    one, two = '<c r="A1"><v>1</v></c>', '<c r="A1"><v>2</v></c>'
    book = parts.workbook(
        {"S": {"A1": one, "B1": "=LOC", "C1": "=T!loc", "D1": "=gone"}, "T": {"A1": two}}, names=names
    )
    assert list(recalculate(book, functions={}).values.values()) == [1.0, 2.0, CellError("#REF!")]


def test_tables_may_stand_there_but_column_names_in_formulas_are_refused() -> None:
    table = '<table xmlns="x" name="Parts" displayName="Parts" ref="A1:B2"/>'
    extra = {"xl/tables/table1.xml": table}
    assert run({"A1": "mass", "A2": '<c r="A2"><v>4</v></c>', "B2": "=A2*2"}, parts=extra) == {"B2": 8.0}
    for formula in ("SUM(Parts[mass])", "Parts[[#This Row],[mass]]*2", "SUM(Parts)"):
        with pytest.raises(FileRefused, match=r"table by its column names|no cell or function named Parts"):
            run({"A1": "mass", "B2": f"={formula}"}, parts=extra)


@pytest.mark.parametrize(
    "cells",
    [
        {"A1": "=B1+1", "B1": "=A1*2"},
        {"A1": "=IFERROR(A1+1,4)"},
        {"A1": "=SUM(A1:A3)"},
        {"A1": "=IF(FALSE,A1,4)"},
    ],
)
def test_a_circular_reference_is_refused_and_not_written(cells: dict[str, str]) -> None:
    with pytest.raises(FormulaRefused, match=r"depends on its own result.*\(S!A1\)"):
        run(cells)


@pytest.mark.parametrize(
    ("formula", "reason"),
    [
        ("Gone!A1+1", "no sheet called 'Gone'"),
        ("[1]Other!A1+1", "another workbook"),
        ("'[rates.xlsx]Other'!$A$1", "another workbook"),
        ("SUM(S:T!A1)", "several sheets"),
        ("A1:A3*(1", "parenthesis"),
        ("A1)+1", "parenthesis"),
        ("1+", "cannot be read"),
        ("A1 B1", "side by side"),
        ("SUM((A1,B1))", "several areas"),
        ("SUM(A1;B1)", "semicolons"),
        ("A1#", "dynamic array"),
        ('"open', "quotation mark"),
        ("LAMBDA(x,x+1)(2)", "engine does not offer LAMBDA"),
    ],
)
def test_formulas_that_cannot_be_trusted_are_refused_with_the_reason(formula: str, reason: str) -> None:
    book = parts.workbook({"S": {"C3": f"={formula}"}, "T": {"A1": "x"}})
    with pytest.raises(FormulaRefused, match=reason) as caught:
        recalculate(book, functions={})
    assert (caught.value.sheet, caught.value.cell, caught.value.formula) == ("S", "C3", formula)
    assert len(str(caught.value)) < 255


def test_a_reference_that_is_already_broken_is_an_error_cell() -> None:
    assert run({"A1": "=#REF!+1", "A2": "=S!#REF!"}) == {"A1": CellError("#REF!"), "A2": CellError("#REF!")}


def test_errors_reach_the_functions_as_errors() -> None:
    function = Recorder(Refusal("#N/A", "the argument is an error"))
    found = run({"A1": "=1/0", "B1": "=RB_X(NA(),A1:A2,A1)"}, {"RB_X": function})
    zero = CellError("#DIV/0!")
    assert function.calls == [(CellError("#N/A"), [[zero], [None]], zero)]
    assert found["B1"] == CellError("#N/A")


def test_any_number_of_arguments_reaches_the_function() -> None:
    function = Recorder()
    run({"A1": "=RB_X(" + ",".join(map(str, range(60))) + ")"}, {"RB_X": function})
    assert function.calls == [tuple(map(float, range(60)))]


def test_an_exception_in_a_function_becomes_an_error_with_its_text() -> None:
    def broken(*cells: Any) -> float:
        raise ZeroDivisionError("no arm")

    result = recalculate(parts.workbook({"S": {"A1": "=RB_X(1)"}}), functions={"RB_X": broken})
    assert result.values["S", "A1"] == VALUE
    assert "no arm" in result.errors[0].reason


def test_a_reason_gets_the_cell_of_its_call() -> None:
    def picky(x: Any) -> Any:
        return x if isinstance(x, float) and x > 0 else Refusal("#NUM!", f"{x} is not above zero")

    shared = '<c r="B{0}"><f t="shared" si="0"{1}</c>'
    rows = "".join(
        f'<row r="{i}"><c r="A{i}"><v>{v}</v></c>'
        + shared.format(i, ' ref="B1:B3">RB_X(A1)+1</f>' if i == 1 else "/>")
        + "</row>"
        for i, v in ((1, -1), (2, 5), (3, -3))
    )
    plain = parts.sheet(
        parts.rows({"A1": "=S!B2*2", "A2": "=RB_X(RB_X(-9))", "A3": array("A3", "A3:A4", "RB_X(-8)")})
    )
    result = recalculate(parts.workbook({"S": parts.sheet(rows), "T": plain}), functions={"RB_X": picky})
    assert [(e.sheet, e.cell, e.error, e.reason) for e in result.errors] == [
        ("S", "B1", "#NUM!", "-1.0 is not above zero"),
        ("S", "B3", "#NUM!", "-3.0 is not above zero"),
        ("T", "A2", "#NUM!", "-9.0 is not above zero"),
        ("T", "A3", "#NUM!", "-8.0 is not above zero"),
    ]
    assert [e.formula for e in result.errors][:2] == ["RB_X(A1)+1", "RB_X(A3)+1"]


@pytest.mark.parametrize("kind", [KeyboardInterrupt, SystemExit])
def test_an_interrupt_in_a_function_ends_the_run_and_writes_nothing(
    kind: type[BaseException], tmp_path: Any
) -> None:
    calls = []

    def interrupted(*cells: Any) -> float:
        calls.append(cells)
        raise kind

    path = tmp_path / "book.xlsx"
    path.write_bytes(parts.workbook({"S": {f"A{i}": "=RB_X(1)" for i in range(1, 50)}}))
    before = path.read_bytes()
    with pytest.raises(kind):
        recalculate(path, functions={"RB_X": interrupted})
    assert len(calls) == 1
    assert path.read_bytes() == before
    assert [p.name for p in tmp_path.iterdir()] == ["book.xlsx"]


@pytest.mark.parametrize(
    ("answer", "cell"),
    [
        (float("nan"), CellError("#NUM!")),
        (float("inf"), CellError("#NUM!")),
        ([[1.0, float("nan")]], CellError("#NUM!")),
        (None, VALUE),
        (10**400, VALUE),
        (10**30, 1e30),
        (np.float64(2.5), 2.5),
        (np.int64(3), 3.0),
        (True, True),
        ("x" * 32_768, VALUE),
        ([[1.0], [2.0, 3.0]], VALUE),
        ([], VALUE),
        ([1.0, 2.0], VALUE),
        ({"a": 1}, VALUE),
        (Refusal("#WHAT!", "odd"), VALUE),
        (Refusal("#NUM!", "odd"), CellError("#NUM!")),
    ],
)
def test_only_finite_rectangular_results_pass(answer: Any, cell: Any) -> None:
    assert run({"A1": "=RB_X()"}, {"RB_X": Recorder(answer)}) == {"A1": cell}
    assert type(gate(answer)) in (float, str, bool, Refusal)


def test_dates_arrive_as_numbers_in_both_date_systems() -> None:
    function = Recorder()
    cells = {
        "A1": '<c r="A1" s="1"><v>45000</v></c>',
        "B1": "=RB_X(A1,DATE(2024,2,29))",
        "C1": "=DATE(2024,2,29)",
    }
    assert run(cells, {"RB_X": function})["C1"] == 45351.0
    assert function.calls == [(45000.0, 45351.0)]
    head = '<workbookPr date1904="1"/>'
    assert run(cells, {"RB_X": function}, head=head)["C1"] == 45351.0 - 1462  # days between the two epochs
    assert function.calls[1] == (45000.0, 43889.0)


def test_formulas_are_quoted_as_the_file_holds_them() -> None:
    book = parts.workbook({"S": {"A1": "=rb_x( 1,A2 )"}})
    result = recalculate(book, functions={"RB_X": Recorder(Refusal("#NUM!", "no"))})
    assert result.errors[0].formula == "rb_x( 1,A2 )"


def test_the_engine_is_asked_for_names_without_side_effects() -> None:
    engine = Formualizer()
    assert [engine.knows(name) for name in ("SUM", "RB_NOPE", "SUM", "ATAN2", "RB_NOPE")] == [
        True,
        False,
        True,
        True,
        False,
    ]


def test_differences_near_zero_are_left_as_they_are() -> None:
    # Spreadsheet programs show 0 here; the number is the one of the arithmetic, so compare with a scale.
    assert run({"A1": "=1-0.9-0.1"})["A1"] == 1 - 0.9 - 0.1


def test_a_large_range_arrives_whole() -> None:
    function = Recorder()
    rows = "".join(f'<row r="{i}"><c r="A{i}"><v>{i}</v></c></row>' for i in range(1, 10_001))
    sheet = parts.sheet(rows + '<row r="10001"><c r="B10001"><f>RB_X(A1:A10000,A:A)</f></c></row>')
    recalculate(parts.workbook({"S": sheet}), functions={"RB_X": function})
    [(block, column)] = function.calls
    assert block == [[float(i)] for i in range(1, 10_001)]
    assert column[:10_000] == block


def test_inputs_can_be_put_into_a_loaded_workbook() -> None:
    sheets = Formualizer().open(
        parts.workbook({"S": {"A1": '<c r="A1"><v>2</v></c>', "B1": "=DOUBLE(A1)"}}),
        {"DOUBLE": lambda x: 2 * x},
    )
    sheets.run()
    assert sheets.value("S", 1, 2) == 4.0
    sheets.put("S", 1, 1, 5.0)
    sheets.run()
    assert sheets.value("S", 1, 2) == 10.0


@pytest.mark.parametrize(
    ("sign", "left", "right", "expected"),
    [
        ("=", None, None, True),
        ("=", None, 0.0, True),
        ("=", None, "", True),
        ("=", None, False, True),
        ("<", None, "a", True),
        (">", "a", 1e9, True),  # texts after numbers, booleans after texts
        (">", False, "zz", True),
        ("=", "Pin", "pIN", True),
        ("=", 0.1 + 0.2, 0.3, True),
        ("<>", 1.0, 1.0 + 1e-14, True),
        ("=", 1.0, 1.0 + 1e-15, True),
        ("<", 1e300, 1.1e300, True),
        ("=", CellError("#N/A"), CellError("#NUM!"), CellError("#N/A")),
        ("=", 1.0, CellError("#NUM!"), CellError("#NUM!")),
        ("<", [[1.0, 3.0]], 2.0, [[True, False]]),
        ("=", [[1.0, 2.0]], [[1.0], [2.0]], [[True, False], [False, True]]),
        ("=", [[1.0, 2.0, 3.0]], [[1.0, 2.0]], [[True, True, CellError("#N/A")]]),
    ],
)
def test_comparisons_follow_the_rules_of_spreadsheets(
    sign: str, left: Any, right: Any, expected: Any
) -> None:
    assert compare(sign, left, right) == expected
