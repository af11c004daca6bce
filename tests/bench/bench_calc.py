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

from rigidsheet.udf.calc import build as extension
from rigidsheet.udf.calc.build import SERVICE
from rigidsheet.udf.calc.host import method_name
from rigidsheet.udf.calling import call
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


def numbers(calc: Any, doc: int) -> None:
    """Fill columns A to F with 1,000 rows of numbers that differ."""
    rows = [[str(round(c + 0.001 * r, 6)) for c in range(1, 7)] for r in range(1, ROWS + 1)]
    calc.ask("fill", doc, 0, f"A1:F{ROWS}", rows)


# One of each in turn: the mix of the figure for 20,000 formulas.
MIX = (
    ("RB_TORQUE", "A{r};B{r}"),
    ("RB_CONVERT", 'A{r}&" m";"mm"'),
    ("RB_MARGIN", "A{r};F{r}"),
    ("RB_VELOCITY_AT", "A{r}:B{r};C{r};D{r}:E{r}"),
)


def mixed(calc: Any, doc: int, only: int | None = None) -> None:
    """Fill twenty columns of 1,000 formulas."""
    columns = FORMULAS // ROWS
    rows = []
    for r in range(1, ROWS + 1):
        line = []
        for c in range(columns):
            name, arguments = MIX[only if only is not None else c % len(MIX)]
            line.append(f"={long_name(name)}({arguments.format(r=r)})")
        rows.append(line)
    calc.ask("fill", doc, 0, f"H1:AA{ROWS}", rows)


def best(calc: Any, doc: int) -> float:
    """Return the shortest of a few hard recalculations in seconds."""
    calc.ask("calculate", doc)
    return float(min(calc.ask("calculate", doc) for _ in range(TURNS)))


def line(what: str, value: str, target: str = "") -> None:
    print(f"{what:<66}{value:>14}  {target}")


def whole(calc: Any) -> None:
    """Measure 20,000 formulas against the stand-in and a built-in formula."""
    times = {}
    doc = calc.ask("new")
    numbers(calc, doc)
    for what, formula in (
        ("built-in product", "=A{r}*B{r}"),
        ("stand-in", "=ORG.RIGIDSHEET.STANDIN.FUNCTIONS.PRODUCT(A{r};B{r})"),
    ):
        rows = [[formula.format(r=r)] * (FORMULAS // ROWS) for r in range(1, ROWS + 1)]
        calc.ask("fill", doc, 0, f"H1:AA{ROWS}", rows)
        times[what] = best(calc, doc)
        found = calc.cell(doc, 0, "H2")
        assert found == 1.002 * 2.002, (what, found)
        line(f"{FORMULAS:,} x {what}", f"{times[what]:.3f} s")
    for i, (name, _) in enumerate(MIX):
        mixed(calc, doc, i)
        seconds = best(calc, doc)
        line(f"{FORMULAS:,} x {name}", f"{seconds:.3f} s", f"{seconds / times['stand-in']:.2f} x stand-in")
    mixed(calc, doc)
    seconds = best(calc, doc)
    assert calc.cell(doc, 0, "H2") == 1.002 * 2.002, calc.cell(doc, 0, "H2")
    line(f"{FORMULAS:,} x mix of these", f"{seconds:.3f} s", "at most 2.0 s")
    line("  against the stand-in", f"{seconds / times['stand-in']:.2f} x", "at most 3 x")
    calc.ask("close", doc)


def column(calc: Any) -> None:
    """Measure one call over 1,000 rows against 1,000 calls."""
    doc = calc.ask("new")
    numbers(calc, doc)
    name = long_name("RB_VELOCITY_AT")
    single = [[f"={name}(A{r}:B{r};C{r};D{r}:E{r})"] for r in range(1, ROWS + 1)]
    calc.ask("fill", doc, 0, f"H1:H{ROWS}", single)
    one_by_one = best(calc, doc)
    calc.ask("fill", doc, 0, f"H1:H{ROWS}", [[""]] * ROWS)
    calc.ask("array", doc, 0, f"H1:I{ROWS}", f"={name}(A1:B{ROWS};C1:C{ROWS};D1:E{ROWS})")
    at_once = best(calc, doc)
    wanted = call("RB_VELOCITY_AT", [[[2.0, 3.0]], 4.0, [[5.0, 6.0]]])
    assert calc.read(doc, 0, f"H{ROWS}:I{ROWS}") == wanted, wanted
    line(f"{ROWS:,} calls of RB_VELOCITY_AT", f"{one_by_one * 1e3:.2f} ms")
    line(f"one call over {ROWS:,} rows", f"{at_once * 1e3:.2f} ms")
    line("  faster by", f"{one_by_one / at_once:.0f} x", "at least 50 x")
    calc.ask("close", doc)


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
        finally:
            calc.stop()


if __name__ == "__main__":
    main()
