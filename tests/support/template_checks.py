"""What the tests of the templates do alike: build and run a form, switch its units, refill it, print its pages."""

from __future__ import annotations

import os
import re
import shutil
import subprocess
import tempfile
import zipfile
from collections.abc import Callable, Collection, Iterable, Iterator, Mapping
from functools import cache, lru_cache
from io import BytesIO
from pathlib import Path
from typing import Any

import numpy as np
import openpyxl
import pytest

from rigidsheet.workbooks import Recalculation, recalculate
from rigidsheet.workbooks.evaluation.builtins import VERIFIED_FUNCTIONS
from rigidsheet.workbooks.templates import TEMPLATES

# Exact or defined factors to SI (NIST SP 811, appendix B; from memory).
FOOT, POUND, G = 0.3048, 0.45359237, 9.80665
FACTORS: dict[str, float] = {
    "": 1.0, "%": 0.01, "mm": 1e-3, "m": 1.0, "in": FOOT / 12, "ft": FOOT, "kg": 1.0, "lb": POUND,
    "deg": np.pi / 180, "rad": 1.0, "s": 1.0, "ms": 1e-3, "min": 60.0, "N": 1.0, "kN": 1e3, "lbf": POUND * G,
    "N*m": 1.0, "kN*m": 1e3, "lbf*ft": POUND * G * FOOT, "rpm": np.pi / 30, "rad/s": 1.0,
    "deg/s": np.pi / 180, "rad/s^2": 1.0, "deg/s^2": np.pi / 180, "m/s": 1.0, "ft/s": FOOT, "m/s^2": 1.0,
    "ft/s^2": FOOT, "g": G, "kg*m^2": 1.0, "lb*ft^2": POUND * FOOT**2, "kg/m^3": 1.0,
    "lb/in^3": POUND / (FOOT / 12) ** 3, "J": 1.0, "ft*lbf": POUND * G * FOOT, "W": 1.0, "kW": 1e3,
    "ft*lbf/s": POUND * G * FOOT, "Pa": 1.0, "psi": POUND * G / (FOOT / 12) ** 2,
}  # fmt: skip
OTHER = {
    "mm": "in", "m": "ft", "kg": "lb", "deg": "rad", "s": "ms", "kN": "lbf", "N": "lbf", "N*m": "lbf*ft",
    "kN*m": "lbf*ft", "rpm": "rad/s", "rad/s": "deg/s", "deg/s": "rad/s", "rad/s^2": "deg/s^2",
    "deg/s^2": "rad/s^2", "m/s": "ft/s", "m/s^2": "ft/s^2", "g": "m/s^2", "kg*m^2": "lb*ft^2",
    "kg/m^3": "lb/in^3", "J": "ft*lbf", "kW": "W", "Pa": "psi",
}  # fmt: skip
SHAPES = ("box", "hollow box", "closed hollow box", "tube")
Grid = np.ndarray[Any, Any]
Quantities = Mapping[str, tuple[Any, str]]  # value and unit of each named result


@cache
def _written(template: str, blank: bool) -> bytes:
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / f"{template}.xlsx"
        TEMPLATES[template].write(path, blank)
        return path.read_bytes()


@lru_cache(maxsize=24)
def _run(template: str, inputs: tuple[tuple[str, Any], ...]) -> Recalculation:
    result = recalculate(_written(template, False), inputs=dict(inputs))
    assert not result.errors, result.errors[:3]
    return result


class Form:
    """A written template: where its inputs and their unit cells stand, and what it gives."""

    def __init__(self, template: str) -> None:
        self.template = template
        self.book = openpyxl.load_workbook(BytesIO(self.written()))
        self.sheet = self.book["Inputs"]
        self.named: dict[str, str] = {}
        for name, defined in self.book.defined_names.items():
            place, cell = defined.attr_text.split("!")
            if place == "Inputs" and not name.startswith("sheet_") and name != "inputs_complete":
                self.named[name] = cell.replace("$", "")

    def written(self, blank: bool = False) -> bytes:
        """Return the workbook as the template writes it, written once."""
        return _written(self.template, blank)

    def run(self, inputs: Mapping[str, Any]) -> Recalculation:
        """Return the filled form worked out with changed inputs, none of them refused; the last ones are kept."""
        return _run(self.template, tuple(sorted(inputs.items())))

    def blank(self) -> Recalculation:
        """Return the blank form worked out."""
        return recalculate(self.written(True))

    def value(self, name: str) -> Any:
        return self.sheet[self.named[name]].value

    def unit_cell(self, name: str) -> Any:
        return self.sheet[self.named[name]].offset(0, 1)

    def unit(self, name: str) -> str:
        return self.unit_cell(name).value or ""

    @property
    def numbers(self) -> list[str]:
        return [name for name in self.named if isinstance(self.value(name), (int, float))]

    @property
    def with_unit(self) -> list[str]:
        return [name for name in self.numbers if self.unit(name)]

    def si_inputs(self, changes: Mapping[str, Any]) -> dict[str, Any]:
        """Return every named input in SI, words as they stand, with changes in the unit of the form."""
        out = {}
        for name in self.named:
            value = changes.get(name, self.value(name))
            out[name] = value if isinstance(value, str) else value * FACTORS[self.unit(name)]
        return out

    def in_other_unit(self, name: str) -> dict[str, Any]:
        """Return the inputs that give a number and its unit cell in another unit."""
        unit = self.unit(name)
        value = self.value(name) * FACTORS[unit] / FACTORS[OTHER[unit]]
        return {f"Inputs!{self.unit_cell(name).coordinate}": OTHER[unit], name: value}

    def results_in_other_units(self) -> dict[str, str]:
        """Return the inputs that switch every unit cell of the sheet Working."""
        boxed = [row[4] for row in self.book["Working"].iter_rows(max_col=5) if row[4].style == "RS unit"]
        return {f"Working!{cell.coordinate}": OTHER[cell.value] for cell in boxed}

    def filling(self) -> dict[str, Any]:
        """Return the inputs that fill in a blank form as the filled one is."""
        return {f"Inputs!{cell}": self.value(name) for name, cell in self.named.items()}


class FormWithParts(Form):
    """A written template that has a list of parts on its sheet Inputs."""

    def __init__(self, template: str) -> None:
        super().__init__(template)
        self.head = next(r for r in range(1, 90) if self.sheet.cell(r, 2).value == "part")
        self.labels = [self.sheet.cell(self.head, c).value for c in range(2, 17)]
        self.rows = [r for r in range(self.head + 2, self.head + 30) if self.sheet.cell(r, 4).value in SHAPES]

    def part(self, row: int) -> dict[str, Any]:
        return {label: self.sheet.cell(row, 2 + k).value for k, label in enumerate(self.labels)}

    def cell(self, row: int, label: str) -> str:
        return str(self.sheet.cell(row, 2 + self.labels.index(label)).coordinate)

    def parts(self, changes: Mapping[str, float] | None = None) -> list[dict[str, Any]]:
        """Return the filled rows of the parts list, with changes by cell."""
        new = changes or {}
        return [
            {label: new.get(self.cell(row, label), value) for label, value in self.part(row).items()}
            for row in self.rows
        ]

    def part_changes(self, rows: Iterable[int], labels: Collection[str]) -> dict[str, float]:
        """Return the numbers of some rows and columns of the list, changed by a tenth; qty stays whole."""
        out = {}
        for row in rows:
            part = self.part(row)
            for label in labels:
                if label not in ("part", "qty", "shape") and part[label]:
                    out[self.cell(row, label)] = part[label] * (0.9 if label in ("t", "ID") else 1.1)
        return out

    def part_sets(self) -> list[Any]:
        """Return each row and each column of the list: every number of it is changed in two ways."""
        sets = [pytest.param([row], self.labels, id=f"row {row}") for row in self.rows]
        return sets + [pytest.param(self.rows, [label], id=f"column {label}") for label in self.labels[3:]]

    def column_in_other_unit(self, label: str) -> dict[str, Any]:
        """Return the inputs that give a column of the list and its unit cell in another unit."""
        place = self.cell(self.head + 1, label)
        unit = self.sheet[place].value
        inputs: dict[str, Any] = {f"Inputs!{place}": OTHER[unit]}
        for row in self.rows:
            value = self.part(row)[label]
            if value is not None:
                inputs[f"Inputs!{self.cell(row, label)}"] = value * FACTORS[unit] / FACTORS[OTHER[unit]]
        return inputs

    def filling(self) -> dict[str, Any]:
        inputs = super().filling()
        for row in self.rows:
            for label, value in self.part(row).items():
                if value is not None:
                    inputs[f"Inputs!{self.cell(row, label)}"] = value
        return inputs

    def typed(self, what: str, value: Any, part: str) -> Recalculation:
        """Return the form with one value typed in: an input, the "unit of" one, or a column "of a part"."""
        if what.startswith("unit of "):
            cell = self.unit_cell(what.removeprefix("unit of ")).coordinate
        elif what.endswith(" of a part"):
            row = next(row for row in self.rows if self.part(row)["part"] == part)
            cell = self.cell(row, what.removesuffix(" of a part"))
        else:
            cell = self.named[what]
        book = openpyxl.load_workbook(BytesIO(self.written()))
        book["Inputs"][cell] = value
        out = BytesIO()
        book.save(out)
        return recalculate(out.getvalue())


# what a run gives


def named(result: Recalculation) -> dict[str, Any]:
    return {one.name: one for one in result.results}


def quantities(result: Recalculation) -> Quantities:
    return {one.name: (one.value, one.unit) for one in result.results}


def in_si(result: Recalculation, name: str) -> float:
    value, unit = quantities(result)[name]
    return float(value) * FACTORS[unit]


def shown(result: Recalculation) -> Any:
    """Return the workbook with the values that were written into it."""
    return openpyxl.load_workbook(BytesIO(result.package), data_only=True)


def table(result: Recalculation, sheet: str, start: int, columns: int, rows: int) -> Grid:
    """Return columns of a table from a column on, in its first rows: those with a number in column A."""
    values = result.values
    found = sorted(
        int(cell[1:])
        for where, cell in values
        if where == sheet and re.fullmatch(r"A\d+", cell) and isinstance(values[where, cell], float)
    )[:rows]
    letters = [openpyxl.utils.get_column_letter(start + k) for k in range(columns)]
    return np.array([[values[sheet, f"{letter}{row}"] for letter in letters] for row in found])


def agrees(found: Any, wanted: Any, scale: float = 0.0, relative: float = 1e-9) -> bool:
    """Compare with the scale of the wanted numbers, or a larger one."""
    wanted = np.asarray(wanted, dtype=float)
    return bool(np.max(np.abs(np.asarray(found) - wanted)) <= relative * max(scale, np.max(np.abs(wanted))))


# checks of a run


def check_same_physics(
    result: Recalculation, usual: Quantities, apart: Collection[str], least: Callable[[str], float]
) -> None:
    """Every named result is the same quantity, and every verdict the same word, whatever unit it stands in.

    Numbers agree to 1e-9 of their size, or of the least scale for their name; those kept apart are mere rounding.
    """
    for name, (found, unit) in quantities(result).items():
        value, usual_unit = usual[name]
        if isinstance(value, str):
            assert found == value, name
        elif name not in apart:
            number, wanted = found * FACTORS[unit], value * FACTORS[usual_unit]
            assert abs(number - wanted) <= 1e-9 * max(abs(wanted), least(name)), (name, number, wanted)


def check_verdict(good: Recalculation, bad: Recalculation, check: str) -> None:
    """A check holds in one run and fails in another, whose verdict counts it."""
    before, after = ({one.name: one.verdict for one in result.checks} for result in (good, bad))
    assert before[f"check_{check}"] == "OK", before
    assert after[f"check_{check}"] == "FAIL", after
    verdict = str(named(bad)["verdict"].value)
    assert re.search(r"\d+ of \d+ checks fail", verdict), verdict


def check_second_run(form: Form) -> None:
    """The filled form has no warning, all its checks hold, and a second run changes no byte."""
    result = form.run({})
    assert result.warnings == (), result.warnings[:3]
    assert result.holds, result.checks
    again = recalculate(result.package)
    assert not again.changed
    assert again.package == result.package


def check_blank(form: Form, always: Iterable[str], working: int) -> None:
    """The blank form refuses beside each input that is always needed, in some cells of Working, and nowhere else."""
    result = form.blank()
    assert all(failure.source is None and failure.reason for failure in result.errors), result.errors[:3]
    places = {(failure.sheet, failure.cell) for failure in result.errors}
    beside = {("Inputs", form.sheet[form.named[name]].offset(0, 2).coordinate) for name in always}
    assert beside <= places, beside - places
    assert [sheet for sheet, _ in places - beside] == ["Working"] * working, places - beside
    verdict = str(named(result)["verdict"].value)
    assert "missing" in verdict, verdict
    assert not result.checks, result.checks


def check_filled_in_again(form: Form) -> None:
    """The blank form, filled in as the filled one is, gives every value of it."""
    result = recalculate(form.written(True), inputs=form.filling())
    assert not result.errors, result.errors[:3]
    assert dict(result.values) == dict(form.run({}).values)


def check_one_refusal(result: Recalculation, sheet: str) -> None:
    """One wrong input is refused where it belongs, without a wall of errors and without a verdict."""
    assert 1 <= len(result.errors) <= 2, result.errors[:3]
    assert result.errors[0].sheet == sheet, result.errors
    assert not result.checks, result.checks


# checks of what is written


def check_built_ins(form: Form) -> set[str]:
    """Only built-ins with check values, no array formula, no boolean; return the functions used."""
    used: set[str] = set()
    for cell in (cell for sheet in form.book for row in sheet.iter_rows() for cell in row):
        assert not isinstance(cell.value, bool), cell
        assert cell.data_type != "a", cell
        if cell.data_type == "f":
            assert isinstance(cell.value, str), cell
            used |= set(re.findall(r"([A-Z][A-Z0-9_.]*)\(", re.sub(r'"[^"]*"', "", cell.value)))
    assert {name for name in used if not name.startswith("RB_")} <= VERIFIED_FUNCTIONS, used
    assert not any(isinstance(value, bool) for value in form.run({}).values.values())
    return used


def check_inputs_named(form: Form) -> None:
    """Every input that stands alone has a name."""
    for row in form.sheet.iter_rows(max_col=4):
        if row[3].style in ("RS input", "RS input text"):
            assert row[3].coordinate in form.named.values(), row[3].coordinate


def check_choices(form: Form, name: str, words: list[str]) -> None:
    """The input is chosen from a list of words, not longer than a cell's rule may be."""
    lists = [rule for rule in form.sheet.data_validations.dataValidation if rule.type == "list"]
    rule = next(rule for rule in lists if form.named[name] in str(rule.sqref))
    assert rule.formula1.strip('"').split(",") == words, rule.formula1
    assert len(rule.formula1) <= 255, rule.formula1


# pages


def check_pages(package: bytes, paper: str, folder: Path, title: str, count: int) -> None:
    """The pages printed on A4 or Letter are counted, and show each text that stands in one line whole."""
    pages = pdf_pages(on_letter(package) if paper == "Letter" else package, folder)
    assert len(pages) == count
    whole = squeezed("".join(pages))
    assert "###" not in whole
    assert "#NAME" not in whole
    for i, page in enumerate(pages, 1):
        assert all(words in page for words in (f"Page {i} of {count}", title, "Drawing")), page
    for text in printed_texts(package):
        assert squeezed(text) in whole, text


def pdf_pages(package: bytes, folder: Path) -> list[str]:
    """Return the text of each page that LibreOffice prints; a folder used again keeps its profile."""
    program = shutil.which("soffice") or shutil.which("libreoffice")
    if program is None or shutil.which("pdftotext") is None:
        assert not os.environ.get("CI"), "LibreOffice and pdftotext must be there"
        pytest.skip("LibreOffice and pdftotext are not both on this machine")
    book, printed = folder / "form.xlsx", folder / "form.pdf"
    book.write_bytes(package)
    printed.unlink(missing_ok=True)
    profile = f"-env:UserInstallation={(folder / 'profile').as_uri()}"
    command = [program, profile, "--headless", "--convert-to", "pdf", "--outdir", str(folder), str(book)]
    for _ in range(2):  # a fresh profile may end its first start without work
        subprocess.run(command, capture_output=True, timeout=180, check=False)
        if printed.exists():
            break
    read = ["pdftotext", "-layout", str(printed), "-"]
    text = subprocess.run(read, capture_output=True, check=True, timeout=60).stdout.decode()
    return text.split("\f")[:-1]


def on_letter(package: bytes) -> bytes:
    """Return the workbook with its sheets set to Letter, every other part as it is."""
    out = BytesIO()
    with zipfile.ZipFile(BytesIO(package)) as source, zipfile.ZipFile(out, "w") as target:
        for item in source.infolist():
            data = source.read(item)
            if item.filename.startswith("xl/worksheets/sheet"):
                assert b'paperSize="9"' in data
                data = data.replace(b'paperSize="9"', b'paperSize="1"')
            target.writestr(item, data)
    return out.getvalue()


def squeezed(text: str) -> str:
    """Return a text without blanks, in which lines that wrap and columns that part do not matter."""
    return re.sub(r"\s+", "", text)


def printed_texts(package: bytes) -> Iterator[str]:
    """Yield every text that stands in one line in the printed part of a sheet."""
    for sheet in openpyxl.load_workbook(BytesIO(package), data_only=True):
        for row in sheet[sheet.print_area.split("!")[-1].replace("$", "")]:
            for cell in row:
                words = isinstance(cell.value, str) and cell.value.strip()
                if words and not cell.alignment.wrap_text and cell.style != "RS symbol":
                    yield str(cell.value)
