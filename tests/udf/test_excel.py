"""Excel through the real xlwings over a stand-in for pywin32: every function, as a cell calls it."""

from __future__ import annotations

import datetime as dt
import subprocess
import sys
from collections.abc import Iterator
from decimal import Decimal
from typing import Any

import pytest
from excel_fakes import EXPORTED, MISSING, ComTime, FakeExcel, FakeRange, fake_excel, literal_call, rows_of

from rigidsheet.udf import hosts
from rigidsheet.udf.calling import call
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import ERRORS, OMITTED, Cell, CellError, Refusal
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.declaration import CellFunction
from rigidsheet.udf.reading.words import Rest


def asks(f: CellFunction) -> bool:
    """Say whether the function asks about another one, whose errors it must look at."""
    return any(isinstance(a.shape, Rest) for a in arguments_of(f))


pytestmark = pytest.mark.skipif(
    sys.platform.startswith("win"), reason="the stand-in for pywin32 would hide the real one of Windows"
)
every_function = pytest.mark.parametrize("f", FUNCTIONS.values(), ids=lambda f: f.name)


@pytest.fixture(scope="module")
def excel() -> Iterator[FakeExcel]:
    with fake_excel() as made:
        yield made


# Cells in place of samples that are good by themselves but do not fit the other arguments of the function.
FITTING: dict[tuple[str, str], Cell] = {
    ("RB_REACTIONS_3D", "body"): [
        ["mass", 40.0, "kg"],
        ["x", 0.6, "m"],
        ["y", 0.5, "m"],
        ["z", 0.0, "m"],
        *([label, size, "kg*m^2"] for label, size in (("Ixx", 5.0), ("Iyy", 4.0), ("Izz", 8.0))),
        *([label, 0.0, "kg*m^2"] for label in ("Ixy", "Iyz", "Izx")),
    ]
}


def full(f: CellFunction) -> list[Cell]:
    """A good cell for every argument."""
    return [FITTING.get((f.name, a.name), a.shape.sample()) for a in arguments_of(f)]


def samples(f: CellFunction) -> list[Cell]:
    """A good cell for every required argument, the optional ones left out."""
    return [OMITTED if a.optional else cell for a, cell in zip(arguments_of(f), full(f), strict=True)]


def sent(cell: Cell) -> Any:
    """What Excel hands over for a cell that the functions see as `cell`."""
    return MISSING if cell is OMITTED else cell


def expected(name: str, cells: list[Cell]) -> list[list[Any]]:
    answer = call(name, cells)
    if isinstance(answer, Refusal):
        return [[answer.error]]
    return answer if isinstance(answer, list) else [[answer]]


def agree(excel: FakeExcel, name: str, cells: list[Cell]) -> list[list[Any]]:
    """Call both ways a workbook can, through ranges and through their values; return the rows."""
    wanted = expected(name, cells)
    assert excel.cell(name, *map(sent, cells)) == wanted
    values = [tuple(map(tuple, c)) if isinstance(c, list) else sent(c) for c in cells]
    assert rows_of(excel.call(name, *values)) == wanted
    assert len({len(row) for row in wanted}) == 1
    assert {type(v) for row in wanted for v in row} <= {str, bool, float}
    if len(wanted) * len(wanted[0]) > 1:
        assert all(len(v) <= 255 for row in wanted for v in row if isinstance(v, str))
    return wanted


# the module and its import


def test_the_public_attributes_are_exactly_the_functions(excel: FakeExcel) -> None:
    public = {name for name in dir(excel.module) if not name.startswith("_")}
    assert public == set(FUNCTIONS) == set(excel.module.__all__)
    decorated = {name for name in dir(excel.module) if hasattr(getattr(excel.module, name), "__xlfunc__")}
    assert decorated == set(FUNCTIONS)


@every_function
def test_a_function_carries_no_annotation(excel: FakeExcel, f: CellFunction) -> None:
    exported = getattr(excel.module, f.name)
    assert exported.__annotations__ == {}
    assert exported.__name__ == exported.__qualname__ == f.name
    assert exported.__module__ == EXPORTED


def test_importing_loads_no_unit_registry_and_no_workbook_library() -> None:
    code = (
        "import sys, rigidsheet.udf.excel as e\n"
        "assert callable(e.RB_KIND) and not hasattr(e.RB_KIND, '__xlfunc__')\n"
        "print(*[m for m in ('pint', 'openpyxl', 'formualizer', 'scipy') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == ""


def test_the_stand_ins_leave_nothing_behind() -> None:
    watched = (
        "pythoncom",
        "pywintypes",
        "win32com",
        "win32api",
        "xlwings.udfs",
        "xlwings._xlwindows",
        EXPORTED,
    )
    before = {name: sys.modules.get(name) for name in watched}
    with fake_excel() as one:
        assert sys.modules[EXPORTED] is one.module
        assert sys.modules["pythoncom"] is not before["pythoncom"] or before["pythoncom"] is not None
    assert {name: sys.modules.get(name) for name in watched} == before


SERVER_KEYWORDS = {  # what the documented decorators of the server runtime take and understand
    "func": {"name", "namespace", "volatile", "cache", "help_url", "required_roles", "category"},
    "arg": {"convert", "doc", "ndim", "err_to_str"},
    "ret": {"convert", "transpose", "index", "header"},
}


def test_the_same_decorators_are_valid_from_the_server_runtime(monkeypatch: pytest.MonkeyPatch) -> None:
    import xlwings

    from rigidsheet.udf import excel_calls

    seen: dict[str, dict[str, Any]] = {}

    def strict(kind: str) -> Any:
        def decorator(*names: str, **options: Any) -> Any:
            assert set(options) <= SERVER_KEYWORDS[kind]

            def inner(function: Any) -> Any:
                seen.setdefault(function.__name__, {}).setdefault(kind, []).append((names, options))
                return function

            return inner

        return decorator

    for kind in SERVER_KEYWORDS:
        monkeypatch.setattr(xlwings, kind, strict(kind))
    made = excel_calls.exported("some.module")
    assert set(seen) == set(FUNCTIONS) == set(made)
    for name, calls in seen.items():
        ((_, options),) = calls["func"]
        assert options["name"] == name  # or the server would write it in capitals with its own prefix
        assert [names[0] for names, _ in calls["arg"]] == [a.name for a in arguments_of(FUNCTIONS[name])]


# what the wizard shows, and the wrappers xlwings writes


@every_function
def test_the_wizard_shows_line_arguments_and_category(excel: FakeExcel, f: CellFunction) -> None:
    told = excel.imported().wizard[f.name]
    assert told["Description"].startswith(f.line[:200])
    assert 0 < len(told["Description"]) <= 255
    assert told["Category"] == f"Rigidsheet {f.group}"
    arguments = arguments_of(f)
    assert len(told["ArgumentDescriptions"]) == len(arguments)
    for a, text in zip(arguments, told["ArgumentDescriptions"], strict=True):
        assert text.startswith(a.help[:200])
        assert len(text) <= 255


@every_function
def test_help_is_not_cut_in_the_middle_of_the_gist(f: CellFunction) -> None:
    assert len(f.line) <= hosts.MOST_HELP
    assert all(len(a.help) <= hosts.MOST_HELP for a in arguments_of(f))


@every_function
def test_the_wrapper_of_xlwings_declares_the_arguments(excel: FakeExcel, f: CellFunction) -> None:
    text = excel.imported().module
    words = []
    for a in arguments_of(f):
        rest = isinstance(a.shape, Rest)
        words.append(f"ParamArray {a.name}()" if rest else f"Optional {a.name}" if a.optional else a.name)
    assert text.count(f"Function {f.name}({', '.join(words)})\n") == 1
    assert f'XLPy.CallUDF("{EXPORTED}", "{f.name}", ' in text


def test_the_module_xlwings_writes_is_plain_ascii(excel: FakeExcel) -> None:
    assert excel.imported().module.isascii()
    assert "ActiveWorkbook, Application.Caller" in excel.imported("functions.xlam").module


# calls of every function


@every_function
def test_a_good_call(excel: FakeExcel, f: CellFunction) -> None:
    examples = [found for e in f.examples if (found := literal_call(e.formula)) and found[0] == f.name]
    cells = [OMITTED if c is MISSING else c for c in examples[0][1]] if examples else samples(f)
    wanted = agree(excel, f.name, cells)
    assert wanted[0][0] not in ERRORS, call("RB_WHY", [f.name, *cells])


@every_function
def test_a_call_with_a_sample_of_what_is_required(excel: FakeExcel, f: CellFunction) -> None:
    agree(excel, f.name, samples(f))


@every_function
def test_a_call_with_every_argument_given(excel: FakeExcel, f: CellFunction) -> None:
    agree(excel, f.name, full(f))


@every_function
def test_a_refused_call_gives_the_text_of_the_error(excel: FakeExcel, f: CellFunction) -> None:
    wanted = agree(excel, f.name, [True, *samples(f)[1:]])
    assert wanted == [["#VALUE!"]]


@every_function
def test_a_blank_cell_is_neither_omitted_nor_zero(excel: FakeExcel, f: CellFunction) -> None:
    good = samples(f)
    for i, a in enumerate(arguments_of(f)):
        cells = [*good[:i], None, *good[i + 1 :]]
        agree(excel, f.name, cells)
        if a.optional and not isinstance(a.shape, Rest):
            assert excel.cell(f.name, *map(sent, cells)) == [["#VALUE!"]], a.name


@every_function
def test_an_argument_left_out_in_the_middle(excel: FakeExcel, f: CellFunction) -> None:
    good = full(f)
    for i in range(len(good)):
        agree(excel, f.name, [*good[:i], OMITTED, *good[i + 1 :]])


@pytest.mark.parametrize("f", [f for f in FUNCTIONS.values() if not asks(f)], ids=lambda f: f.name)
def test_an_error_that_enters_leaves_as_the_same_error(excel: FakeExcel, f: CellFunction) -> None:
    for text, number in (("#DIV/0!", -2146826281), ("#N/A", -2146826246), ("#NUM!", -2146826252)):
        rest = list(map(sent, samples(f)[1:]))
        assert excel.cell(f.name, number, *rest) == [[text]]
        assert rows_of(excel.call(f.name, number, *rest)) == [[text]]


# what xlwings delivers, value by value (numbers of errors: enumeration XlCVError of Excel, from memory)


@pytest.mark.parametrize(
    ("given", "seen"),
    [
        (12.5, 12.5),
        ("arm", "arm"),
        (True, True),
        (None, None),
        ("", None),  # the Windows engine of xlwings makes both blank
        (Decimal("1.25"), 1.25),
        (3, 3.0),
        (dt.datetime(2024, 2, 29, 12), 45351.5),  # 29 February 2024 is day 45351 of Excel's calendar
        (ComTime(1900, 3, 1), 61.0),  # the first day after the one Excel invents
        (-2146826288, CellError("#NULL!")),
        (-2146826281, CellError("#DIV/0!")),
        (-2146826273, CellError("#VALUE!")),
        (-2146826265, CellError("#REF!")),
        (-2146826259, CellError("#NAME?")),
        (-2146826252, CellError("#NUM!")),
        (-2146826246, CellError("#N/A")),
        (-2146826243, CellError("#SPILL!")),
        (-2146826238, CellError("#CALC!")),
        (-2146826200, CellError("#VALUE!")),  # an error nobody knows yet
        ("#N/A", CellError("#N/A")),
    ],
)
def test_a_cell_arrives_as_what_it_is(
    excel: FakeExcel, monkeypatch: pytest.MonkeyPatch, given: Any, seen: Cell
) -> None:
    got: list[Any] = []
    monkeypatch.setattr("rigidsheet.udf.excel_calls.call", lambda name, cells: got.append(cells) or 0.0)
    excel.call("RB_ARM", FakeRange([[given]]), FakeRange([[1.0, given]]), given)
    ((one, row, plain),) = got
    alone = OMITTED if given == MISSING else seen
    assert one == plain == alone
    assert row == [[1.0, seen]]
    assert {type(one), type(row[0][1])} == {type(seen)}


def test_rows_and_columns_keep_their_direction(excel: FakeExcel, monkeypatch: pytest.MonkeyPatch) -> None:
    got: list[Any] = []
    monkeypatch.setattr("rigidsheet.udf.excel_calls.call", lambda name, cells: got.extend(cells) or 0.0)
    across, down = FakeRange([[1.0, 2.0]]), FakeRange([[1.0], [2.0]])
    excel.call("RB_ARM", across, down, MISSING)
    excel.call("RB_ARM", (1.0, 2.0), ((1.0,), (2.0,)), ((1.0, 2.0), (3.0, None)))
    assert got == [
        [[1.0, 2.0]],
        [[1.0], [2.0]],
        OMITTED,
        [[1.0, 2.0]],
        [[1.0], [2.0]],
        [[1.0, 2.0], [3.0, None]],
    ]


def test_the_whole_range_of_a_currency_cell_is_read(excel: FakeExcel) -> None:
    assert excel.cell("RB_CONVERT", [[Decimal("0.4"), "m"]], "mm") == [[pytest.approx(400.0, rel=1e-15)]]


# what goes back


def test_a_vector_comes_back_as_a_row_and_several_as_rows(excel: FakeExcel) -> None:
    assert excel.call("RB_ARM", FakeRange([[0.1, 0.2]]), FakeRange([[0.4, 0.6]])) == [
        pytest.approx(0.3),
        pytest.approx(0.4),
    ]
    points = [[0.0, 0.0], [0.5, 0.0], [0.0, 2.0]]
    assert excel.call("RB_ARM", FakeRange(points), FakeRange([[1.0, 1.0]])) == [
        [1.0, 1.0],
        [0.5, 1.0],
        [1.0, -1.0],
    ]


def test_a_column_comes_back_as_a_column(excel: FakeExcel) -> None:
    torque = excel.call("RB_TORQUE", FakeRange([[10.0], [20.0]]), FakeRange([[0.5]]))
    assert torque == [[5.0], [10.0]]


def test_the_steps_of_a_working_come_back_below_each_other(excel: FakeExcel) -> None:
    rows = excel.cell("RB_WORKING", "RB_TORQUE", "85 kg*m^2", "0.4 rad/s^2")
    assert len(rows) > 1
    assert all(len(row) == 1 and isinstance(row[0], str) for row in rows)


def test_the_reason_of_a_refusal_with_an_argument_left_out(excel: FakeExcel) -> None:
    ((reason,),) = excel.cell("RB_WHY", "RB_TORQUE", MISSING, 0.4)
    assert reason.startswith("`inertia` must be given")
    ((reason,),) = excel.cell("RB_WHY", "RB_TORQUE", None, 0.4)
    assert "a blank cell" in reason
    ((reason,),) = excel.cell("RB_WHY", "RB_TORQUE", -2146826246, 0.4)
    assert "#N/A" in reason
    assert excel.cell("RB_WHY", "RB_TORQUE") == [[call("RB_WHY", ["RB_TORQUE"])]]


def test_texts_fit_a_cell_of_an_array_and_a_single_cell() -> None:
    from rigidsheet.udf.excel_calls import express

    long = "x" * 40_000
    block = express([["mass", 2.0], [long, ""]])
    assert isinstance(block, list)
    assert len(str(block[1][0])) == 255
    assert len(str(express(long))) == 32767
    assert express("x" * 300) == "x" * 300
    assert express(Refusal("#NUM!", "no answer")) == "#NUM!"


def test_something_no_cell_can_hold_is_an_error() -> None:
    from rigidsheet.udf.excel_calls import normalise

    assert normalise([[object()]]) == CellError("#VALUE!")
    assert normalise([]) is None


def test_a_date_without_a_time_is_a_whole_day() -> None:
    from rigidsheet.udf.excel_calls import value

    assert (
        value(dt.date(2000, 1, 1)) == 36526.0
    )  # Excel's documentation of DATEVALUE counts from the same day
