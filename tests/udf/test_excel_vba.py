"""The VBA module for Excel: names that compile, a structure that holds together, every text that is shown."""

from __future__ import annotations

import re

import pytest

from rigidsheet.udf import hosts, vba
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import ERRORS
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.declaration import CellFunction
from rigidsheet.udf.reading.words import Rest

every_function = pytest.mark.parametrize("f", FUNCTIONS.values(), ids=lambda f: f.name)

TEXT = vba.module_text("1.2.3")
LINES = TEXT.split("\r\n")
PROCEDURE = re.compile(r"^(Public|Private) (Function|Sub) (\w+)\((.*)\)")
STRING = re.compile(r'"(?:[^"]|"")*"')
CHRW = re.compile(r"ChrW\((\d+)\)")


def code(line: str) -> str:
    """A line without its strings and comments."""
    bare = STRING.sub('""', line)
    return bare.partition("'")[0].rstrip()


def joined() -> list[str]:
    """The lines of code, continued ones made one."""
    return re.sub(r" _\n\s*", " ", "\n".join(map(code, LINES))).split("\n")


def procedures() -> dict[str, list[str]]:
    """Every procedure: its lines, the first one the declaration."""
    found: dict[str, list[str]] = {}
    current: list[str] | None = None
    for line in joined():
        start = PROCEDURE.match(line)
        if start:
            assert current is None, f"{line} begins inside another procedure"
            current = found[start[3]] = []
        if current is not None:
            current.append(line)
        if line in ("End Function", "End Sub"):
            assert current is not None
            assert line.split()[1] == PROCEDURE.match(current[0])[2]  # type: ignore[index]
            current = None
    assert current is None
    return found


def spoken(expression: str) -> str:
    """The text an expression of strings and ChrW stands for."""
    units = b""
    for part in re.findall(r'"(?:[^"]|"")*"|ChrW\(\d+\)', expression):
        number = CHRW.match(part)
        if number:
            units += int(number[1]).to_bytes(2, "little")
        else:
            units += part[1:-1].replace('""', '"').encode("utf-16-le")
    return units.decode("utf-16-le")


# names


@every_function
def test_names_are_safe_in_vba(f: CellFunction) -> None:
    assert vba.problems(f.name, [a.name for a in arguments_of(f)]) == []


@pytest.mark.parametrize(
    ("function", "names"),
    [
        ("RB_X", ["end"]),
        ("RB_X", ["Date"]),
        ("RB_X", ["scale"]),
        ("RB_X", ["line"]),
        ("RB_X", ["m", "M"]),
        ("RB_X", ["rb_x"]),
        ("RB_X", ["_arm"]),
        ("RB_X", ["1st"]),
        ("RB_X", ["länge"]),
        ("RB_X", ["caller"]),
        ("RB_X", ["rbCells"]),
        ("RB1", ["arm"]),
        ("R1C1", ["arm"]),
        ("_RB", ["arm"]),
        ("RB_X", [f"a{i}" for i in range(61)]),
        ("RB_X", [f"argument_number_{i:02}" for i in range(20)]),
    ],
)
def test_unsafe_names_are_found(function: str, names: list[str]) -> None:
    assert len(vba.problems(function, names)) >= 1


def test_usual_names_of_arguments_are_let_pass() -> None:
    assert vba.problems("RB_X", ["unit", "kind", "mass", "force", "arm", "omega", "what", "arguments"]) == []


# the file


def test_the_file_is_ascii_with_windows_line_ends_and_short_lines() -> None:
    assert TEXT.isascii()
    assert TEXT.endswith("\r\n")
    assert TEXT.count("\n") == TEXT.count("\r") == TEXT.count("\r\n")
    assert "\t" not in TEXT
    assert max(map(len, LINES)) <= 1023  # the longest line the editor of VBA takes


def test_the_head_names_the_module_and_asks_for_declarations() -> None:
    assert LINES[:2] == [f'Attribute VB_Name = "{vba.MODULE}"', "Option Explicit"]
    assert "1.2.3" in LINES[3]
    assert vba.IDENTIFIER.match(vba.MODULE)
    assert len(vba.MODULE) <= 31


def test_strings_are_closed_on_every_line() -> None:
    for line in LINES:
        if not line.lstrip().startswith("'"):
            assert STRING.sub("", line).partition("'")[0].count('"') == 0, line


def test_only_the_functions_and_two_macros_are_seen_from_outside() -> None:
    public = [m[3] for m in map(PROCEDURE.match, joined()) if m and m[1] == "Public"]
    assert public == [*FUNCTIONS, vba.DESCRIBE, vba.TEST]


def test_every_block_is_closed_in_its_order() -> None:
    closes = {"End If": "If", "Next": "For", "End Select": "Select", "Loop": "Do", "End With": "With"}
    for name, lines in procedures().items():
        stack: list[str] = []
        for line in (x.strip() for x in lines):
            first = line.split(" ")[0]
            if first in ("For", "Select", "Do", "With") or (first == "If" and line.endswith(" Then")):
                stack.append(first)
            for close, opens in closes.items():
                if line == close or line.startswith(close + " "):
                    assert stack.pop() == opens, f"{name}: {line}"
            if first in ("Else", "ElseIf"):
                assert stack[-1] == "If", name
        assert stack == [], name


KNOWN = set(
    """
    thisworkbook activeworkbook application xlpy calludf caller err description msgbox macrooptions name
    isaddin object areas count value2 isobject typename isarray lbound ubound vartype vbstring cverr array replace chrw
    vbinformation vbexclamation macro category argumentdescriptions rbmodule
    """.split()  # noqa: SIM905  a list of words is easier to read in lines
)
LANGUAGE = vba.RESERVED - {"array", "cverr", "lbound", "ubound", "name"} | {"goto", "resume", "error", "next"}


def test_every_name_is_declared_as_option_explicit_asks() -> None:
    whole = procedures()
    for name, lines in whole.items():
        declared = {w.lower() for w in whole} | KNOWN | {name.lower()}
        head = PROCEDURE.match(lines[0])
        assert head is not None
        declared |= {
            w.lower()
            for w in re.findall(
                r"(?:ByVal|ByRef|Optional|ParamArray|^|,)\s*(\w+)(?:\(\))? As",
                re.sub(r"(ByVal|Optional|ParamArray) ", "", head[4]),
            )
        }
        for line in lines[1:]:
            if line.strip().startswith("Dim "):
                declared |= {w.lower() for w in re.findall(r"(?:Dim|,)\s+(\w+)(?:\([^)]*\))? As", line)}
            if re.fullmatch(r"\w+:", line):
                declared.add(line[:-1].lower())
        used = {w.lower() for line in lines[1:] for w in re.findall(r"[A-Za-z]\w*", code(line))}
        assert used - declared - LANGUAGE == set(), name


def test_a_failing_call_becomes_an_error_of_the_cell() -> None:
    lines = [x.strip() for x in procedures()["RbAnswer"]]
    failed = lines.index("failed:")
    assert (
        lines.index("On Error GoTo failed") < next(i for i, x in enumerate(lines) if "CallUDF" in x) < failed
    )
    assert lines[failed - 1] == "Exit Function"
    assert lines[failed + 1] == "RbAnswer = CVErr(2015)"
    assert "Err.Description" not in "\n".join(lines)


def test_an_addin_hands_over_the_active_workbook() -> None:
    body = "\n".join(x.strip() for x in procedures()["RbAnswer"])
    assert (
        "If ThisWorkbook.IsAddin Then\nSet book = ActiveWorkbook\nElse\nSet book = ThisWorkbook\nEnd If"
        in body
    )


def test_every_error_text_has_its_number() -> None:
    # CVErr numbers as Excel's enumeration XlCVError gives them (from memory)
    numbers = {"#NULL!": 2000, "#DIV/0!": 2007, "#VALUE!": 2015, "#REF!": 2023, "#NAME?": 2029, "#NUM!": 2036}
    numbers["#N/A"] = 2042
    cases = dict(re.findall(r'Case "([^"]+)": RbError = CVErr\((\d+)\)', TEXT))
    assert set(ERRORS) <= set(cases)
    assert {text: int(cases[text]) for text in numbers} == numbers


# the functions


@every_function
def test_a_wrapper_hands_over_its_arguments_in_order(f: CellFunction) -> None:
    arguments = arguments_of(f)
    declared = []
    for a in arguments:
        rest = isinstance(a.shape, Rest)
        word = f"ParamArray {a.name}()" if rest else f"Optional {a.name}" if a.optional else a.name
        declared.append(word + " As Variant")
    head = f"Public Function {f.name}({', '.join(declared)}) As Variant"
    assert LINES.count(head) == 1
    body = [x.strip() for x in LINES[LINES.index(head) + 1 :]]
    body = body[: body.index("End Function")]
    plain = [a.name for a in arguments if not isinstance(a.shape, Rest)]
    if len(plain) == len(arguments):
        assert body == [f'{f.name} = RbAnswer("{f.name}", Array({", ".join(plain)}))']
    else:
        n, rest = len(plain), arguments[-1].name
        assert n >= 1
        assert all(not a.optional for a in arguments[:-1])
        assert f"rbGiven = Array({', '.join(plain)})" in body
        assert f"ReDim Preserve rbGiven(0 To UBound({rest}) + {n})" in body
        assert f"Set rbGiven(rbI + {n}) = {rest}(rbI)" in body
        assert f"rbGiven(rbI + {n}) = {rest}(rbI)" in body
        assert body[-1] == f'{f.name} = RbAnswer("{f.name}", rbGiven)'


@every_function
def test_the_wizard_is_told_the_same_texts(f: CellFunction) -> None:
    number = list(FUNCTIONS).index(f.name) + 1
    start = LINES.index(f"Private Sub RbDescribe{number}()")
    body = [x.strip() for x in LINES[start + 1 : LINES.index("End Sub", start)]]
    arguments = arguments_of(f)
    assert body[0] == f"Dim helps(0 To {len(arguments) - 1}) As String"
    for i, a in enumerate(arguments):
        left, _, right = body[1 + i].partition(" = ")
        assert left == f"helps({i})"
        assert spoken(right) == " ".join(hosts.argument_help(a).split())
    assert body[-1].startswith(f'RbDescribe "{f.name}", ')
    assert spoken(body[-1].split(", ", 1)[1]) == hosts.function_help(f) + hosts.category(f)
    assert f"    RbDescribe{number}" in LINES


@pytest.mark.parametrize("text", ['a "quoted" word', "kg·m²", "−1", "𝜔 turns", "", "two\nlines"])
def test_a_text_survives_as_an_expression(text: str) -> None:
    expression = vba.literal(text)
    assert expression.isascii()
    assert spoken(expression) == " ".join(text.split())
