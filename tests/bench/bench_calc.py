"""Speed of the functions in a live LibreOffice Calc; prints a table.

Run: python tests/bench/bench_calc.py
"""

from __future__ import annotations

import sys
import time
import zipfile
from pathlib import Path
from typing import Any

sys.path.insert(0, str(Path(__file__).parent.parent / "support"))

import live_calc
import openpyxl

from rigidsheet.udf.calc import build as extension
from rigidsheet.udf.calc.build import SERVICE
from rigidsheet.udf.calc.host import method_name
from rigidsheet.udf.calling import call
from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.office import find, layer, private_profile, run_unopkg

FORMULAS = 20_000
ROWS = 1_000
TURNS = 5

STAND_IN = """
import unohelper
from com.sun.star.lang import XServiceInfo, XServiceName
from org.rigidsheet.standin import XStandIn
NAME = "org.rigidsheet.standin.Functions"
class StandIn(unohelper.Base, XStandIn, XServiceInfo, XServiceName):
    def __init__(self, context): pass
    def getServiceName(self): return NAME
    def getImplementationName(self): return NAME
    def supportsService(self, name): return name in self.getSupportedServiceNames()
    def getSupportedServiceNames(self): return (NAME, "com.sun.star.sheet.AddIn")
    def product(self, a, b): return ((a * b,),)
g_ImplementationHelper = unohelper.ImplementationHelper()
g_ImplementationHelper.addImplementation(StandIn, NAME, (NAME, "com.sun.star.sheet.AddIn"))
"""


def stand_in(path: Path) -> Path:
    """Write an extension with one function that multiplies two cells inside the office process."""
    name = "org.rigidsheet.standin.Functions"
    node, prop = extension.node, extension.prop
    arguments = node("a0", prop("DisplayName", "a")) + node("a1", prop("DisplayName", "b"))
    function = node(
        "product", prop("DisplayName", "STANDIN") + f'<node oor:name="Parameters">{arguments}</node>'
    )
    wizard = (
        f'{extension.HEAD}<oor:component-data {extension.REGISTRY} oor:name="CalcAddIns"><node oor:name="AddInInfo">'
        + node(name, f'<node oor:name="AddInFunctions">{function}</node>')
        + "</node></oor:component-data>"
    )
    components = (
        f'{extension.HEAD}<components xmlns="http://openoffice.org/2010/uno-components">'
        '<component loader="com.sun.star.loader.Python" uri="addin.py">'
        f'<implementation name="{name}"><service name="{name}"/>'
        '<service name="com.sun.star.sheet.AddIn"/></implementation></component></components>'
    )
    idl = (
        "module org { module rigidsheet { module standin { interface XStandIn {\n"
        "  sequence< sequence< any > > product([in] any a0, [in] any a1);\n}; }; }; };\n"
    )
    manifest = "".join(p for p in extension.manifest().splitlines(True)).replace(
        '<manifest:file-entry manifest:media-type="application/vnd.sun.star.configuration-data" '
        'manifest:full-path="Jobs.xcu"/>',
        "",
    )
    with zipfile.ZipFile(path, "w") as archive:
        archive.writestr("META-INF/manifest.xml", manifest)
        archive.writestr(
            "description.xml", extension.description().replace(extension.IDENTIFIER, "org.rigidsheet.standin")
        )
        archive.writestr("types.idl", idl)
        archive.writestr("CalcAddIns.xcu", wizard)
        archive.writestr("rigidsheet.components", components)
        archive.writestr("addin.py", STAND_IN)
    return path


def long_name(name: str) -> str:
    return f"{SERVICE.upper()}.{method_name(name).upper()}"


def numbers(calc: Any, doc: int, count: int, shift: int = 0) -> None:
    """Fill columns A to F with rows of numbers that all differ."""
    rows = [[str(round(c + 1e-5 * r + 1e-7 * shift, 8)) for c in range(1, 7)] for r in range(1, count + 1)]
    calc.ask("fill", doc, 0, f"A1:F{count}", rows)


# One of each in turn: the mix of the figure for 20,000 formulas.
MIX = (
    ("RB_TORQUE", "A{r};B{r}"),
    ("RB_CONVERT", 'A{r}&" m";"mm"'),
    ("RB_MARGIN", "A{r};F{r}"),
    ("RB_VELOCITY_AT", "A{r}:B{r};C{r};D{r}:E{r}"),
)


def mixed(only: int | None = None) -> list[list[str]]:
    """Return a column of formulas, each row with cells of its own."""
    rows = []
    for r in range(1, FORMULAS + 1):
        name, arguments = MIX[only if only is not None else r % len(MIX)]
        rows.append([f"={long_name(name)}({arguments.format(r=r)})"])
    return rows


def column_of(formula: str) -> list[list[str]]:
    return [[formula.format(r=r)] for r in range(1, FORMULAS + 1)]


def again(calc: Any, doc: int) -> float:
    """Return the shortest of a few hard recalculations in seconds, with the same inputs every time."""
    calc.ask("calculate", doc)
    return float(min(calc.ask("calculate", doc) for _ in range(TURNS)))


def fresh(calc: Any, doc: int) -> float:
    """Return the shortest of a few hard recalculations in seconds, with every input new each time."""
    times = []
    for turn in range(1, TURNS + 1):
        numbers(calc, doc, FORMULAS, turn)
        times.append(float(calc.ask("calculate", doc)))
    return min(times)


def line(what: str, value: str, target: str = "") -> None:
    print(f"{what:<66}{value:>14}  {target}")


def whole(calc: Any) -> None:
    """Measure 20,000 formulas against the stand-in and a built-in formula."""
    doc = calc.ask("new")
    calc.ask("automatic", doc, False)
    numbers(calc, doc, FORMULAS)
    where = f"H1:H{FORMULAS}"
    line(f"hard recalculation of {FORMULAS:,} formulas", "new inputs", "same inputs")
    calc.ask("fill", doc, 0, where, column_of("=ORG.RIGIDSHEET.STANDIN.FUNCTIONS.PRODUCT(A{r};B{r})"))
    base = fresh(calc, doc), again(calc, doc)
    assert calc.cell(doc, 0, "H2") == calc.cell(doc, 0, "A2") * calc.cell(doc, 0, "B2")

    def show(what: str, formulas: list[list[str]], target: str = "") -> None:
        calc.ask("fill", doc, 0, where, formulas)
        new, same = fresh(calc, doc), again(calc, doc)
        line(f"  {what}", f"{new:.3f} s", f"{same:.3f} s   {target}")
        line("    against the stand-in", f"{new / base[0]:.2f} x", f"{same / base[1]:.2f} x")

    line("  stand-in", f"{base[0]:.3f} s", f"{base[1]:.3f} s")
    show("built-in product", column_of("=A{r}*B{r}"))
    for i, (name, _) in enumerate(MIX):
        show(name, mixed(i))
    show("mix of these four", mixed(), "at most 2.0 s and 3 x")
    assert calc.cell(doc, 0, "H4") == calc.cell(doc, 0, "A4") * calc.cell(doc, 0, "B4")
    calc.ask("close", doc)


def renewed(calc: Any, doc: int) -> float:
    """Return the shortest of a few hard recalculations in seconds, with new inputs each time."""
    times = []
    for turn in range(1, TURNS + 1):
        numbers(calc, doc, ROWS, turn)
        times.append(float(calc.ask("calculate", doc)))
    return min(times)


def column(calc: Any) -> None:
    """Measure one call over 1,000 rows against 1,000 calls."""
    doc = calc.ask("new")
    numbers(calc, doc, ROWS)
    name = long_name("RB_VELOCITY_AT")
    single = [[f"={name}(A{r}:B{r};C{r};D{r}:E{r})"] for r in range(1, ROWS + 1)]
    calc.ask("fill", doc, 0, f"H1:H{ROWS}", single)
    calc.ask("automatic", doc, False)
    one_by_one = renewed(calc, doc)
    calc.ask("fill", doc, 0, f"H1:H{ROWS}", [[""]] * ROWS)
    calc.ask("array", doc, 0, f"H1:I{ROWS}", f"={name}(A1:B{ROWS};C1:C{ROWS};D1:E{ROWS})")
    at_once = renewed(calc, doc)
    a, b, omega, x, y, _ = calc.read(doc, 0, f"A{ROWS}:F{ROWS}")[0]
    wanted = call("RB_VELOCITY_AT", [[[a, b]], omega, [[x, y]]])
    assert calc.read(doc, 0, f"H{ROWS}:I{ROWS}") == wanted, wanted
    line(f"{ROWS:,} calls of RB_VELOCITY_AT", f"{one_by_one * 1e3:.2f} ms")
    line(f"one call over {ROWS:,} rows", f"{at_once * 1e3:.2f} ms")
    line("  faster by", f"{one_by_one / at_once:.0f} x", "at least 50 x")
    calc.ask("close", doc)


def file_of(path: Path, shift: int) -> None:
    """Write a workbook with the mix of the four functions, its inputs moved a little by `shift`."""
    book = openpyxl.Workbook(write_only=True)
    sheet = book.create_sheet("Sheet")
    for r in range(1, FORMULAS + 1):
        name, arguments = MIX[r % len(MIX)]
        inputs = [round(c + 1e-5 * r + 1e-7 * shift, 8) for c in range(1, 7)]
        sheet.append([*inputs, None, f"={name}({arguments.format(r=r).replace(';', ',')})"])
    book.save(path)


def from_file(calc: Any, folder: Path) -> None:
    """Measure a file loaded and hard recalculated by the running office, and worked out without it.

    The inputs are new each time, as the office would else answer from what it knows.
    """
    path, target = folder / "formulas.xlsx", folder / "done.xlsx"
    office, alone = [], []
    for shift in range(1, 4):
        file_of(path, shift)
        start = time.perf_counter()
        doc = calc.ask("load", str(path))
        calc.ask("calculate", doc)
        office.append(time.perf_counter() - start)
        last = calc.cell(doc, 0, f"H{FORMULAS}")
        calc.ask("close", doc)
        start = time.perf_counter()
        done = recalculate(path, to=target)
        alone.append(time.perf_counter() - start)
        assert not done.errors
        assert abs(done.values["Sheet", f"H{FORMULAS}"] - last) <= 1e-12 * abs(last)
    line(f"file of {FORMULAS:,} formulas: loaded, hard recalculated in the office", f"{min(office):.3f} s")
    line("  headless: loaded, worked out, written", f"{min(alone):.3f} s")
    line("  faster by", f"{min(office) / min(alone):.1f} x", "at least 2 x")


def headless() -> None:
    """Show what the calls themselves cost without any office."""
    cells: dict[str, Any] = {
        "RB_TORQUE": [1.0, 2.0],
        "RB_CONVERT": ["1 m", "mm"],
        "RB_MARGIN": [1.0, 6.0],
        "RB_VELOCITY_AT": [[[1.0, 2.0]], 3.0, [[4.0, 5.0]]],
    }
    for name, arguments in cells.items():
        start = time.perf_counter()
        for _ in range(5000):
            call(name, arguments)
        line(f"call of {name} with no office", f"{(time.perf_counter() - start) / 5000 * 1e6:.1f} us")


def main() -> None:
    reason = live_calc.missing()
    if reason:
        print(reason)
        raise SystemExit(1)
    office = find()
    headless()
    with private_profile(office) as profile:
        path = stand_in(profile.folder / "standin.oxt")
        run_unopkg(office, ["add", "--force", *layer(), str(path), *profile.options])
        calc = live_calc.LiveCalc(office, profile.options)
        try:
            whole(calc)
            column(calc)
            from_file(calc, profile.folder)
        finally:
            calc.stop()


if __name__ == "__main__":
    main()
