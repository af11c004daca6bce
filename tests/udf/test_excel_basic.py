"""The VBA module run by a Basic that reads VBA: wrappers, errors, and the texts of the function wizard.

Replaced, because only Excel has them: the call of Python, the choice of the workbook, Application.MacroOptions
and the two macros that show message boxes. What is left runs as it was generated. A Range never comes by here.
"""

from __future__ import annotations

import os
import re
import shutil
import signal
import subprocess
import sys
from pathlib import Path

import pytest

from rigidsheet.udf import hosts, vba
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.compiling import arguments_of
from rigidsheet.udf.declaration import CellFunction
from rigidsheet.udf.reading.words import Rest

pytestmark = pytest.mark.live

RUNNER = Path(__file__).parents[1] / "support" / "basic_runner.py"
MARK = "\x1f"  # between the results of Main

STAND_IN = """
Private noted As String

Private Function Told(ByVal functionName As String, ByVal given As Variant) As Variant
    Dim i As Long, text As String
    If UBound(given) >= 0 Then
        If Not IsMissing(given(0)) Then
            If given(0) = "fail" Then Err.Raise 5
            If given(0) = "refuse" Then
                Told = "#NUM!"
                Exit Function
            End If
        End If
    End If
    text = functionName
    For i = LBound(given) To UBound(given)
        If IsMissing(given(i)) Then
            text = text & "|omitted"
        ElseIf IsEmpty(given(i)) Then
            text = text & "|blank"
        ElseIf IsArray(given(i)) Then
            text = text & "|array"
        Else
            text = text & "|" & given(i)
        End If
    Next i
    Told = text
End Function

Private Sub Noted4(ByVal functionName As String, ByVal about As String, ByVal group As String, ByVal helps As Variant)
    Dim i As Long
    noted = functionName & "|" & about & "|" & group
    For i = LBound(helps) To UBound(helps)
        noted = noted & "|" & helps(i)
    Next i
End Sub

Private Function Shown(ByVal answer As Variant) As String
    If IsError(answer) Then
        Shown = "error " & CLng(answer)
    Else
        Shown = TypeName(answer) & " " & answer
    End If
End Function
"""


def runnable() -> str:
    """The generated module with the parts of Excel replaced."""
    text = vba.module_text("test").replace("\r\n", "\n").partition("\n")[2]
    call = "XLPy.CallUDF(RbModule, functionName, RbCells(given), book, Application.Caller)"
    assert text.count(call) == 1
    text = text.replace(call, "Told(functionName, RbCells(given))")
    for pattern, put in (
        (r"    If ThisWorkbook\.IsAddin Then\n        Set book.*?    End If\n", ""),
        (r"' Run once: .*?(?=Private Sub RbDescribe\()", ""),
        (r"    Application\.MacroOptions.*?(?=End Sub)", "    Noted4 functionName, about, group, helps\n"),
    ):
        text, found = re.subn(pattern, put, text, count=1, flags=re.DOTALL)
        assert found == 1, pattern
    return "Option VBASupport 1\n" + text + STAND_IN


def calls(f: CellFunction) -> list[tuple[str, str]]:
    """Calls in Basic, each with what the call of Python must see: all given, each left out, only the first."""
    names = [a.name for a in arguments_of(f)]
    full = [str(i + 1) for i in range(len(names))]
    made = [(full, full)]
    for i, a in enumerate(arguments_of(f)):
        if a.optional and not isinstance(a.shape, Rest) and i < len(names) - 1:
            made.append(([*full[:i], "", *full[i + 1 :]], [*full[:i], "omitted", *full[i + 1 :]]))
    needed = [n for n, a in zip(full, arguments_of(f), strict=True) if not a.optional]
    rest = isinstance(arguments_of(f)[-1].shape, Rest)
    made.append((needed, needed if rest else [*needed, *["omitted"] * (len(full) - len(needed))]))
    made.append((["Empty", *full[1:]], ["blank", *full[1:]]))
    return [(f"{f.name}({', '.join(a)})", "|".join([f.name, *seen])) for a, seen in made]


def wanted_lines() -> tuple[list[str], list[str]]:
    """Statements of Main, and the result of each."""
    statements: list[str] = []
    results: list[str] = []

    def add(expression: str, result: str) -> None:
        statements.append(f"add {expression}")
        results.append(result)

    for number, f in enumerate(FUNCTIONS.values(), 1):
        for expression, seen in calls(f):
            add(f"Shown({expression})", f"String {seen}")
        rest = "".join(f", {i}" for i in range(2, 1 + sum(not a.optional for a in arguments_of(f))))
        add(f'Shown({f.name}("fail"{rest}))', "error 2015")
        add(f'Shown({f.name}("refuse"{rest}))', "error 2036")
        statements.append(f"RbDescribe{number}")
        told = [hosts.function_help(f), hosts.category(f), *map(hosts.argument_help, arguments_of(f))]
        add("noted", "|".join([f.name, *(" ".join(t.split()) for t in told)]))
    for text, number in vba.ERROR_NUMBERS.items():
        add(f'Shown(RbErrors("{text}"))', f"error {number}")
    for other, result in (('"OK"', "String OK"), ('"#N/A "', "String #N/A "), ("1.5", "Double 1.5")):
        add(f"Shown(RbErrors({other}))", result)
    statements += ['across(0) = "#N/A"', "across(1) = 1.5", 'across(2) = "x"', "answer = RbErrors(across)"]
    for i, result in enumerate(("error 2042", "Double 1.5", "String x")):
        add(f"Shown(answer(LBound(answer) + {i}))", result)
    statements += [
        'block(0, 0) = "#NUM!"',
        "block(0, 1) = 2.5",
        'block(1, 0) = "x"',
        'block(1, 1) = "#VALUE!"',
    ]
    statements.append("answer = RbErrors(block)")
    for at, result in (
        ("0, 0", "error 2036"),
        ("0, 1", "Double 2.5"),
        ("1, 0", "String x"),
        ("1, 1", "error 2015"),
    ):
        add(f"Shown(answer({at}))", result)
    # one column: the upper bound of its second dimension is zero, which is not "no second dimension"
    statements += ['down(0, 0) = "#N/A"', "down(1, 0) = 2.5", "answer = RbErrors(down)"]
    for at, result in (("0, 0", "error 2042"), ("1, 0", "Double 2.5")):
        add(f"Shown(answer({at}))", result)
    return statements, results


def main_text(statements: list[str]) -> str:
    """Main and the sub that gathers its results, in pieces short enough for a procedure."""
    pieces = [statements[i : i + 100] for i in range(0, len(statements), 100)]
    lines = ["Private gathered As String", "Private across(2) As Variant", "Private block(1, 1) As Variant"]
    lines += ["Private down(1, 0) As Variant"]
    lines += ["Private answer As Variant", "Private Sub add(ByVal text As String)"]
    lines += ["    gathered = gathered & text & Chr(31)", "End Sub"]
    for n, piece in enumerate(pieces):
        lines += [f"Private Sub Piece{n}()", *("    " + s for s in piece), "End Sub"]
    lines += ["Function Main() As String", "    On Error GoTo bad"]
    lines += [f"    Piece{n}" for n in range(len(pieces))]
    lines += ["    Main = gathered", "    Exit Function", "bad:"]
    lines += ['    Main = gathered & "stopped: " & Err.Description', "End Function"]
    return "\n".join(lines)


def interpreter(office: str) -> str | None:
    """Return a Python that has the office's `uno`, None when there is none."""
    beside = Path(os.path.realpath(office)).parent / "python"
    for candidate in (sys.executable, "/usr/bin/python3", str(beside)):
        if shutil.which(candidate):
            tried = subprocess.run([candidate, "-c", "import uno"], capture_output=True, check=False)
            if tried.returncode == 0:
                return candidate
    return None


def test_the_module_runs_in_a_basic_that_reads_vba(tmp_path: Path) -> None:
    office = shutil.which("soffice")
    python = interpreter(office) if office else None
    if office is None or python is None:
        pytest.skip("needs LibreOffice with its Python bridge")
    statements, results = wanted_lines()
    source = tmp_path / "module.bas"
    source.write_text(runnable() + main_text(statements), encoding="utf-8")
    running = subprocess.Popen(
        [python, str(RUNNER), office, str(tmp_path / "profile"), str(source)],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        start_new_session=True,
    )
    try:
        out, problems = running.communicate(timeout=120)
    finally:
        if running.poll() is None:
            os.killpg(running.pid, signal.SIGKILL)
            running.communicate()
    assert running.returncode == 0, problems.decode()
    got = out.decode("utf-8").split(MARK)
    assert got[-1] == ""
    assert got[:-1] == results
