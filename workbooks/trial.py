"""One formula worked out on its own, in a workbook of one cell that exists in memory only."""

from __future__ import annotations

import io
import zipfile
from collections.abc import Mapping
from dataclasses import dataclass
from functools import partial
from typing import Any, Final
from xml.sax.saxutils import escape

from rigidsheet.core.errors import RigidsheetError
from rigidsheet.udf import calling, catalogue, results
from rigidsheet.udf.cells import Answer, CellError, Refusal, Value
from rigidsheet.udf.declaration import WHAT

from .addresses import cell_name
from .errors import FileRefused
from .evaluation.formulas import Analysis, analyse, resolver
from .recalc import Recalculation, Run

SHEET: Final = "Formula"
CELL: Final = "A1"
LONGEST: Final = 8192  # characters of a formula that spreadsheet programs take

_SPACE: Final = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
_OFFICE: Final = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_PACKAGE: Final = "http://schemas.openxmlformats.org/package/2006"


@dataclass(frozen=True)
class Step:
    """One call of a cell function inside the formula, and its working or the reason of its refusal."""

    name: str
    lines: tuple[str, ...]
    reason: str = ""  # why it was refused


@dataclass(frozen=True)
class Trial:
    """What a formula gives: rows of values, the unit of a single result, the steps, warnings."""

    rows: tuple[tuple[Value, ...], ...]
    unit: str
    steps: tuple[Step, ...]
    warnings: tuple[str, ...]
    reason: str = ""  # why the cell shows an error; empty when it does not

    @property
    def error(self) -> str:
        """The error that the cell shows, empty when there is none."""
        value = self.rows[0][0]
        return value.text if isinstance(value, CellError) else ""


class _Recorder:
    """The cell functions, with every call written down in the order in which they answer."""

    def __init__(self) -> None:
        self.calls: list[tuple[str, tuple[Any, ...], Answer | Refusal]] = []

    def functions(self) -> Mapping[str, Any]:
        return {name: partial(self._call, name) for name in calling.names()}

    def _call(self, name: str, *cells: Any) -> Answer | Refusal:
        answer = calling.call(name, cells)
        self.calls.append((name, cells, answer))
        return answer


def tried(formula: str) -> Trial:
    """Work out one formula as a cell of a workbook would.

    Parameters
    ----------
    formula : str
        As typed into a cell, with or without the equals sign; inline arrays as {1,2;3,4}.

    Returns
    -------
    Trial
        Values, unit, the steps of every cell function in it, warnings.

    Raises
    ------
    FileRefused
        When the formula cannot be read, calls an unknown function, or refers to cells.
    """
    text = formula.strip().removeprefix("=").strip()
    analysis = _judged(text)
    recorder = _Recorder()
    run, _ = _finished(text, CELL, recorder.functions())
    size = run.calls.sizes.get((0, 1, 1), (1, 1))
    _, final = _finished(text, f"{CELL}:{cell_name(*size)}", None)
    rows = tuple(
        tuple(final.values[SHEET, cell_name(row + 1, column + 1)] for column in range(size[1]))
        for row in range(size[0])
    )
    return Trial(
        rows,
        _unit(analysis, recorder) if size == (1, 1) and isinstance(rows[0][0], float) else "",
        tuple(_steps(recorder)),
        tuple(one.sentence.replace(f"{SHEET}!{CELL} ", "The formula ") for one in final.warnings),
        final.errors[0].reason if final.errors else "",
    )


def _judged(text: str) -> Analysis:
    """Return what the formula uses; refuse what needs a workbook around it."""
    if not text:
        raise FileRefused("There is no formula to try", remedy='Type one, like RB_CONVERT("400 mm", "m")')
    if len(text) > LONGEST:
        raise FileRefused(f"The formula is longer than {LONGEST} characters, which no cell takes")
    if any(ord(letter) < 32 and letter not in "\t\n\r" for letter in text):
        raise FileRefused("The formula holds a control character")
    analysis = analyse(text, resolver(tuple(calling.names())))
    use = next((one for one in analysis.uses if not one.named), None)
    if use is not None:
        raise FileRefused(
            f"A formula that is tried on its own has no cells to read; got {use.where}{use.text}",
            remedy='Type the value in its place, like "400 mm" or {0.4,0.2}',
        )
    return analysis


def _finished(text: str, frame: str, functions: Mapping[str, Any] | None) -> tuple[Run, Recalculation]:
    """Work the formula out as the array formula of a frame; a refusal does not name the made-up cell."""
    try:
        run = Run(_workbook(text, frame), {}, functions, None)
        return run, run.result()
    except FileRefused as refusal:
        refusal.where = ""
        refusal.args = (refusal.sentence(),)
        raise


def _steps(recorder: _Recorder) -> list[Step]:
    """Return one step for each different call, those that only ask about another function left out."""
    steps: list[Step] = []
    for name, cells, answer in recorder.calls:
        if catalogue.find(name).rest:
            continue
        lines = calling.working(name, cells)
        if isinstance(answer, Refusal):
            step = Step(name, (), answer.reason)
        else:
            step = Step(name, () if isinstance(lines, Refusal) else tuple(lines))
        if step not in steps:
            steps.append(step)
    return steps


def _unit(analysis: Analysis, recorder: _Recorder) -> str:
    """Return the unit of the result when the formula is exactly one call of ours."""
    if analysis.whole is None or not recorder.calls:
        return ""
    name, cells, _ = recorder.calls[-1]
    ready = catalogue.find(name)
    if name != analysis.whole.name or ready.rest or ready.function.result.open:
        return ""
    try:
        values = ready.read(cells)
    except RigidsheetError:
        return ""
    given = {argument.name: value for argument, value in zip(ready.arguments, values, strict=True)}
    if given.get("unit"):
        return str(given["unit"])
    field = ready.express.chosen(given.get(WHAT))
    if field is None or not results.dimensional(field.kind) or field.kind is None:
        return ""
    return field.kind.si


def _workbook(text: str, frame: str) -> bytes:
    """Return a workbook of one sheet with one array formula."""
    target = io.BytesIO()
    with zipfile.ZipFile(target, "w", zipfile.ZIP_STORED) as archive:
        for name, part in _PARTS.items():
            archive.writestr(name, part)
        archive.writestr(
            "xl/worksheets/sheet1.xml",
            f'<worksheet xmlns="{_SPACE}"><sheetData><row r="1"><c r="{CELL}">'
            f'<f t="array" ref="{frame}">{escape(text)}</f></c></row></sheetData></worksheet>',
        )
    return target.getvalue()


_PARTS: Final = {
    "[Content_Types].xml": f'<Types xmlns="{_PACKAGE}/content-types">'
    '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package.relationships+xml"/>'
    '<Default Extension="xml" ContentType="application/xml"/></Types>',
    "_rels/.rels": f'<Relationships xmlns="{_PACKAGE}/relationships">'
    f'<Relationship Id="w" Type="{_OFFICE}/officeDocument" Target="xl/workbook.xml"/></Relationships>',
    "xl/workbook.xml": f'<workbook xmlns="{_SPACE}" xmlns:r="{_OFFICE}">'
    f'<sheets><sheet name="{SHEET}" sheetId="1" r:id="s"/></sheets></workbook>',
    "xl/_rels/workbook.xml.rels": f'<Relationships xmlns="{_PACKAGE}/relationships">'
    f'<Relationship Id="s" Type="{_OFFICE}/worksheet" Target="worksheets/sheet1.xml"/></Relationships>',
}
