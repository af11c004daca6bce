"""The VBA module for Excel: one wrapper a function, real errors, and the texts of the function wizard.

The module that xlwings writes by itself leaves an error as a text, which SUM skips. This one turns the text
into the error. It also reads a range through Value2, so that a cell in a currency format keeps its digits.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from typing import Final

from . import hosts
from .catalogue import FUNCTIONS
from .compiling import arguments_of
from .declaration import Arg, CellFunction
from .excel_calls import ERROR_NUMBERS
from .reading.words import Rest

MODULE: Final = "RigidsheetFunctions"
PYTHON_MODULE: Final = "rigidsheet.udf.excel"
DESCRIBE: Final = "RigidsheetDescribe"
TEST: Final = "RigidsheetTest"

IDENTIFIER: Final = re.compile(r"[A-Za-z][A-Za-z0-9_]{0,254}\Z")
CELL_LIKE: Final = re.compile(r"([A-Z]{1,3}[0-9]{1,7}|R[0-9]*C[0-9]*|R|C)\Z", re.IGNORECASE)


def words(text: str) -> frozenset[str]:
    """Return the words of a list that is easier to read in lines."""
    return frozenset(text.split())


# Words the language keeps for itself; as the name of an argument they stop the module from compiling.
RESERVED: Final = words(
    """
    abs addressof and any array as attribute boolean byref byte byval call case cbool cbyte ccur cdate
    cdbl cdec cdecl cint circle clng clnglng clngptr close const csng cstr currency cvar cverr date debug
    decimal declare defbool defbyte defcur defdate defdbl defdec defint deflng deflnglng deflngptr defobj
    defsng defstr defvar dim do doevents double each else elseif empty end endif enum eqv erase event exit
    false fix for friend function get global gosub goto if imp implements in input inputb int integer is
    lbound len lenb let like lineinput lock long longlong longptr loop lset me mod new next not nothing
    null on open option optional or paramarray preserve print private pset public put raiseevent redim rem
    resume return rset scale seek select set sgn shared single spc static stop string sub tab then to true
    type typeof ubound unlock until variant vb_base vb_control vb_creatable vb_customizable vb_description
    vb_exposed vb_ext_key vb_globalnamespace vb_helpid vb_invoke_func vb_invoke_property
    vb_invoke_propertyput vb_invoke_propertyputref vb_memberflags vb_name vb_predeclaredid vb_procdata
    vb_templatederived vb_usermemid vb_varhelpid vb_varusermemid wend while with withevents write xor
    """
)
# Words that mean something in some places only: legal, and not worth the risk.
CONTEXTUAL: Final = words(
    """
    access alias append base binary compare error explicit lib line mid midb name object output property
    ptrsafe random read reset step text time width
    """
)
# Names that the wrappers here, or the ones xlwings writes, use themselves. xlwings swallows `caller`.
TAKEN: Final = words(
    """
    activeworkbook app application argsarray caller err failed k range thisworkbook xlpy
    rbanswer rbcells rberror rberrors rbcolumns rbdescribe rbgiven rbi
    """
)
MOST_ARGUMENTS: Final = 60
MOST_NAME_LENGTH: Final = 254  # arguments and the letters of their names together; the wizard breaks above

HEAD: Final = """\
Attribute VB_Name = "{module}"
Option Explicit

' Rigidsheet {version}: cell functions for rigid-body machine design.
' Written by `rigidsheet excel`. Write it anew after an upgrade instead of editing it.
' Needs the reference to xlwings (Tools > References).

Private Const RbModule As String = "{python}"
"""

HELPERS: Final = """\
' Calls Python. Whatever fails on the way is an error of the cell, never a text that SUM would skip.
Private Function RbAnswer(ByVal functionName As String, ByVal given As Variant) As Variant
    Dim book As Object
    On Error GoTo failed
    If ThisWorkbook.IsAddin Then
        Set book = ActiveWorkbook
    Else
        Set book = ThisWorkbook
    End If
    RbAnswer = RbErrors(XLPy.CallUDF(RbModule, functionName, RbCells(given), book, Application.Caller))
    Exit Function
failed:
    RbAnswer = CVErr(2015)
End Function

' What the arguments hold. Value2 gives dates and money as the plain numbers that stand in the cells.
' An argument that was left out is not touched: it stays marked as such.
Private Function RbCells(ByVal given As Variant) As Variant
    Dim block As Object, i As Long
    For i = LBound(given) To UBound(given)
        If IsObject(given(i)) Then
            Set block = given(i)
            If TypeName(block) <> "Range" Then
                given(i) = CVErr(2015)
            ElseIf block.Areas.Count > 1 Then
                given(i) = CVErr(2015)
            Else
                given(i) = block.Value2
            End If
        End If
    Next i
    RbCells = given
End Function

' Turns every error text in an answer, single or array, into the error itself.
Private Function RbErrors(ByVal answer As Variant) As Variant
    Dim row As Long, column As Long, last As Long
    If Not IsArray(answer) Then
        RbErrors = RbError(answer)
        Exit Function
    End If
    last = RbColumns(answer)
    For row = LBound(answer, 1) To UBound(answer, 1)
        If last < 0 Then
            answer(row) = RbError(answer(row))
        Else
            For column = LBound(answer, 2) To last
                answer(row, column) = RbError(answer(row, column))
            Next column
        End If
    Next row
    RbErrors = answer
End Function

' The last column of an array with rows and columns, -1 of one that is a single row.
Private Function RbColumns(ByVal answer As Variant) As Long
    RbColumns = -1
    On Error Resume Next
    RbColumns = UBound(answer, 2)
End Function

Private Function RbError(ByVal answer As Variant) As Variant
    RbError = answer
    If VarType(answer) <> vbString Then Exit Function
    Select Case answer
{cases}
    End Select
End Function
"""

SUBS: Final = """\
' Run once: gives the functions their texts in the function wizard.
Public Sub {describe}()
    Dim wasAddin As Boolean
    wasAddin = ThisWorkbook.IsAddin
    On Error GoTo failed
    If wasAddin Then ThisWorkbook.IsAddin = False
{calls}
    If wasAddin Then ThisWorkbook.IsAddin = True
    MsgBox "{count} functions are described.", vbInformation, "Rigidsheet"
    Exit Sub
failed:
    MsgBox "The texts could not be set: " & Err.Description, vbExclamation, "Rigidsheet"
    If wasAddin Then ThisWorkbook.IsAddin = True
End Sub

' Run when every cell shows an error: says what Python answers, or why it cannot be reached.
Public Sub {test}()
    Dim answer As Variant
    On Error GoTo failed
    answer = XLPy.CallUDF(RbModule, "RB_KIND", Array("mm"), ActiveWorkbook, CVErr(2023))
    MsgBox "Python answers. 'mm' measures: " & answer, vbInformation, "Rigidsheet"
    Exit Sub
failed:
    MsgBox "Python cannot be reached: " & Err.Description, vbExclamation, "Rigidsheet"
End Sub

Private Sub RbDescribe( _
    ByVal functionName As String, ByVal about As String, ByVal group As String, ByVal helps As Variant)
    Application.MacroOptions _
        Macro:="'" & Replace(ThisWorkbook.Name, "'", "''") & "'!" & functionName, _
        Description:=about, Category:=group, ArgumentDescriptions:=helps
End Sub
"""


def problems(function: str, names: Sequence[str]) -> list[str]:
    """Return what is wrong with a function and its arguments as a worksheet function in VBA."""
    found = []
    if (
        not IDENTIFIER.match(function)
        or CELL_LIKE.match(function)
        or function.lower() in RESERVED | CONTEXTUAL
    ):
        found.append(f"{function} is no name for a function")
    seen = {function.lower()}
    for name in names:
        low = name.lower()
        if not IDENTIFIER.match(name):
            found.append(f"{function}: {name} is no identifier")
        if low in RESERVED | CONTEXTUAL:
            found.append(f"{function}: {name} is a word of the language")
        if low in TAKEN:
            found.append(f"{function}: {name} is used by the wrappers")
        if low in seen:
            found.append(f"{function}: {name} stands twice, and capitals do not count")
        seen.add(low)
    if len(names) > MOST_ARGUMENTS:
        found.append(f"{function}: more than {MOST_ARGUMENTS} arguments")
    if len(names) + sum(map(len, names)) > MOST_NAME_LENGTH:
        found.append(f"{function}: the names of the arguments are too long together for the wizard")
    return found


def literal(text: str) -> str:
    """Return a text as an expression in VBA, in plain ASCII whatever it holds."""
    parts = re.findall(r"[\x20-\x7e]+|[^\x20-\x7e]", " ".join(text.split()))
    words = ['"' + p.replace('"', '""') + '"' if p.isascii() else wide(p) for p in parts]
    return " & ".join(words) or '""'


def wide(character: str) -> str:
    """Return a character beyond ASCII as calls of ChrW, two where UTF-16 needs two."""
    units = character.encode("utf-16-le")
    return " & ".join(f"ChrW({int.from_bytes(units[i : i + 2], 'little')})" for i in range(0, len(units), 2))


def parameter(a: Arg) -> str:
    """Return how an argument is declared."""
    if isinstance(a.shape, Rest):
        return f"ParamArray {a.name}() As Variant"
    return f"{'Optional ' if a.optional else ''}{a.name} As Variant"


def wrapper(f: CellFunction) -> Iterator[str]:
    """Give the lines of the worksheet function."""
    arguments = arguments_of(f)
    yield f"Public Function {f.name}({', '.join(map(parameter, arguments))}) As Variant"
    plain = [a.name for a in arguments if not isinstance(a.shape, Rest)]
    if len(plain) == len(arguments):
        yield f'    {f.name} = RbAnswer("{f.name}", Array({", ".join(plain)}))'
    else:
        # the variable part always comes last; its upper bound is -1 when nothing was given
        rest = arguments[-1].name
        yield "    Dim rbGiven() As Variant, rbI As Long"
        yield f"    rbGiven = Array({', '.join(plain)})"
        yield f"    ReDim Preserve rbGiven(0 To UBound({rest}) + {len(plain)})"
        yield f"    For rbI = 0 To UBound({rest})"
        yield f"        If IsObject({rest}(rbI)) Then"
        yield f"            Set rbGiven(rbI + {len(plain)}) = {rest}(rbI)"
        yield "        Else"
        yield f"            rbGiven(rbI + {len(plain)}) = {rest}(rbI)"
        yield "        End If"
        yield "    Next rbI"
        yield f'    {f.name} = RbAnswer("{f.name}", rbGiven)'
    yield "End Function"
    yield ""


def description(f: CellFunction, number: int) -> Iterator[str]:
    """Give the lines of the procedure that describes a function; one each, since their size is limited."""
    helps = [hosts.argument_help(a) for a in arguments_of(f)]
    yield f"Private Sub RbDescribe{number}()"
    yield f"    Dim helps(0 To {len(helps) - 1}) As String"
    for i, text in enumerate(helps):
        yield f"    helps({i}) = {literal(text)}"
    yield f'    RbDescribe "{f.name}", {literal(hosts.function_help(f))}, {literal(hosts.category(f))}, helps'
    yield "End Sub"
    yield ""


def module_text(version: str) -> str:
    """Return the whole module: ASCII, lines ended as Windows ends them."""
    functions = list(FUNCTIONS.values())
    lines = HEAD.format(module=MODULE, version=version, python=PYTHON_MODULE).splitlines()
    lines.append("")
    for f in functions:
        lines += wrapper(f)
    cases = "\n".join(f'        Case "{text}": RbError = CVErr({n})' for text, n in ERROR_NUMBERS.items())
    lines += HELPERS.format(cases=cases).splitlines()
    lines.append("")
    calls = "\n".join(f"    RbDescribe{n}" for n in range(1, len(functions) + 1))
    lines += SUBS.format(describe=DESCRIBE, test=TEST, calls=calls, count=len(functions)).splitlines()
    lines.append("")
    for n, f in enumerate(functions, 1):
        lines += description(f, n)
    return "\r\n".join(lines).rstrip() + "\r\n"
