"""Speed of the cell functions; prints a table of targets and what was measured.

Run: python tests/bench/bench_cells.py [part ...]   parts: text scalar columns list book start
Times are the best of many turns, as other work on the machine only ever adds to them: of the processor inside
this process, on the wall for what other processes do.
"""

from __future__ import annotations

import gc
import io
import itertools
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import numpy as np

sys.path.insert(0, str(Path(__file__).parent.parent / "support"))

from cell_calls import OMITTED, column, rows
from column_calls import CALLS, cell_of, pairs, tubes

from rigidsheet.udf.calling import call
from rigidsheet.udf.catalogue import FUNCTIONS, find
from rigidsheet.udf.cells import Refusal
from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.recalc import Run

Line = tuple[str, float, float, str, bool]  # what, target, measured, unit, whether more is better
LONG = 10_000


def best(act: Callable[[], object], turns: int = 60, enough: float = 0.002) -> float:
    """Return the least processor time of one run [s]; short ones are run many times in a turn.

    Many short turns rather than a few long ones: one of them falls into a quiet moment of a shared machine.
    """
    clock = time.process_time
    act()
    start = clock()
    act()
    runs = max(1, int(enough / max(clock() - start, 1e-7)))
    found = []
    for _ in range(turns):
        start = clock()
        for _ in range(runs):
            act()
        found.append((clock() - start) / runs)
    return min(found)


def best_wall(act: Callable[[], object], turns: int) -> float:
    """Return the least time on the wall of one run [s], for what other processes do."""
    found = []
    for _ in range(turns):
        start = time.perf_counter()
        act()
        found.append(time.perf_counter() - start)
    return min(found)


def calling(name: str, cells: list[Any]) -> Callable[[], object]:
    """Return a call, made sure not to be refused."""
    got = call(name, cells)
    if isinstance(got, Refusal):
        raise SystemExit(f"{name} refused the cells of this table: {got.reason}")
    return lambda: call(name, cells)


def kernel_time(name: str, cells: list[Any]) -> float:
    """Return the time of the bare mechanics behind a call [s], with what the cells mean already read."""
    ready = find(name)
    values = ready.read(cells)
    own, _ = ready.frame.align([values[i] for i in ready.own])
    with np.errstate(all="ignore"):
        return best(lambda: ready.function.kernel(*own))


SHIFT = ["6.1 kg*m^2", "38 kg", "780 mm", "lb*ft^2"]
GEARED = ["2.4 kN*m", "180", "0.86", OMITTED, "12 rpm"]
MOVING = ["49.2 kg*m^2", "166 kg", "(1.434, 1.004) m", "12 deg/s", "1.1 rad/s^2", "(-1.8, 0.4) m/s^2"]


def text_lines() -> Iterator[Line]:
    """Quantities as text against the same formula in plain pint quantities."""
    import pint

    units = pint.UnitRegistry()
    quantity = units.Quantity

    def shift() -> float:
        inertia, mass, arm = quantity("6.1 kg*m^2"), quantity("38 kg"), quantity("780 mm")
        return float((inertia + mass * arm**2).to("lb*ft^2").magnitude)

    def motor() -> float:
        torque, ratio = quantity("2.4 kN*m"), quantity("180")
        efficiency, speed = quantity("0.86"), quantity("12 rpm")
        power = torque * speed
        driven = torque / ratio / efficiency if power.magnitude > 0 else torque / ratio * efficiency
        return float(driven.to("N*m").magnitude)

    def moments() -> float:
        inertia, mass, alpha = quantity("49.2 kg*m^2"), quantity("166 kg"), quantity("1.1 rad/s^2")
        x, y = quantity("1.434 m"), quantity("1.004 m")
        ax, ay = quantity("-1.8 m/s^2") - alpha * y, quantity("0.4 m/s^2") + alpha * x
        return float((inertia * alpha + mass * (x * ay - y * ax)).to("N*m").magnitude)

    calls = (
        ("four texts, one the unit asked for", "RB_SHIFT", SHIFT, shift),
        ("four quantities, two of them bare", "RB_MOTOR_TORQUE", GEARED, motor),
        ("six arguments", "RB_MOMENT_SUM", MOVING, moments),
    )
    for words, name, cells, other in calls:
        label = f"{words}, {name}"
        ours, theirs = best(calling(name, cells)), best(other)
        assert abs(call(name, cells) / other() - 1) < 1e-12
        yield f"{label}: faster than pint", 50.0, theirs / ours, "x", True
        yield f"{label}: over the kernel", 10.0, 1e6 * (ours - kernel_time(name, cells)), "us", False
    texts = [[f"{6 + k / 1e4} kg*m^2", f"{38 + k / 1e4} kg", f"{780 + k / 1e2} mm"] for k in range(5_000)]
    unseen = itertools.cycle(texts)
    new = best(lambda: call("RB_SHIFT", [*next(unseen), "lb*ft^2"]))
    yield "the same RB_SHIFT, each text seen for the first time", 50.0, best(shift) / new, "x", True


MOTION = [
    ["omega", 12.0, "deg/s"],
    ["alpha", 40.0, "deg/s^2"],
    ["gravity", "down", None],
    ["fixed point", "(0, 0) m", None],
]
FLAT_BODY = [["mass", 166.0, "kg"], ["x", 1.434, "m"], ["y", 1.004, "m"], ["inertia", 49.24, "kg*m^2"]]
GATE = [
    ["support", "type", "x [mm]", "y [mm]", "angle [deg]"],
    ["hinge", "pin", 0.0, 0.0, None],
    ["stop", "slot", 900.0, 0.0, 90.0],
]
LOADS = [["load", "Fx [N]", "Fy [N]", "x [mm]", "y [mm]"], ["wind", 120.0, 0.0, 400.0, 900.0]]
# Where a sample of one row is not what the function is for.
OWN_CELLS: dict[str, list[Any]] = {
    "RB_INSTANT_CENTER": [[[0.0, 0.4]], [[0.8, 0.0]], -2.0],
    "RB_INSTANT_CENTER_2": [[[0.0, 0.4]], [[0.8, 0.0]], [[0.0, 0.1]], [[0.2, 0.0]]],
    "RB_OMEGA_FROM": [[[0.0, 0.0], [0.6, 0.0], [0.6, 0.4]], [[0.0, 0.0], [0.0, 1.2], [-0.8, 1.2]]],
    "RB_REACTIONS": [FLAT_BODY, MOTION, LOADS, GATE, "hinge force", "kN"],
    "RB_DRIVE_TORQUE": [FLAT_BODY, MOTION, LOADS, "(0, 0) m", "total", "kN*m"],
    "RB_KINETIC_ENERGY": [FLAT_BODY, MOTION],
    "RB_ANGULAR_MOMENTUM": [FLAT_BODY, MOTION, "origin"],
    "RB_WHY": ["RB_TORQUE", "85 kg", "0.4 rad/s^2"],
    "RB_WORKING": ["RB_TORQUE", "85 kg*m^2", "0.4 rad/s^2"],
}
SLOWER = {"RB_REACTIONS": 300.0, "RB_REACTIONS_3D": float("inf"), "RB_ROLLUP": float("inf")}


def scalar_lines() -> Iterator[Line]:
    """One call of each function, with the cells of a calc sheet."""
    for name in FUNCTIONS:
        cells = OWN_CELLS.get(name) or [a.shape.sample() for a in find(name).arguments if not a.optional]
        measured = 1e6 * best(calling(name, cells))
        yield f"one call of {name}", SLOWER.get(name, 60.0), measured, "us", False
    for name in ("RB_REACTIONS", "RB_DRIVE_TORQUE", "RB_ANGULAR_MOMENTUM", "RB_KINETIC_ENERGY"):
        measured = 1e6 * best(changing(name))
        yield (
            f"{name}, body and motion seen for the first time",
            SLOWER.get(name, 60.0),
            measured,
            "us",
            False,
        )


def changing(name: str) -> Callable[[], object]:
    """Return a call whose body and motion differ each time, so that no reading is remembered."""
    variants = []
    for k in range(2_000):
        body = [["mass", 100.0 + k, "kg"], *FLAT_BODY[1:]]
        motion = [["omega", 12.0 + k / 100, "deg/s"], *MOTION[1:]]
        variants.append([body, motion, *OWN_CELLS[name][2:]])
    turn = itertools.cycle(variants)
    return lambda: call(name, next(turn))


def column_lines() -> Iterator[Line]:
    """A column of 10,000 rows in one call against 10,000 calls (from 500 of them)."""
    rng = np.random.default_rng(4)
    calls: list[tuple[str, str, list[Any], list[list[Any]]]] = []
    for label, (name, arguments) in CALLS.items():
        made = [a(rng, LONG) if callable(a) else None for a in arguments]
        whole = [a if m is None else m for a, m in zip(arguments, made, strict=True)]
        each = [
            [a if m is None else cell_of(m[k : k + 1]) for a, m in zip(arguments, made, strict=True)]
            for k in range(500)
        ]
        calls.append((label, name, whole, each))
    blocks = [rows(block) for block in pairs(rng, LONG)]
    each = [[block[k : k + 1] for block in blocks] for k in range(500)]
    calls.append(("instant center of two", "RB_INSTANT_CENTER_2", blocks, each))
    head, sizes = ["OD [mm]", "ID [mm]", "L [mm]"], tubes(rng, LONG)
    masses = column(rng.uniform(1, 9, LONG))
    each = [[*("tube", masses[k][0]), [head, sizes[k]]] for k in range(500)]
    calls.append(("columns of sizes", "RB_SHAPE", ["tube", masses, [head, *sizes]], each))
    for label, name, whole, each in calls:
        calling(name, whole), calling(name, each[0])
        together = best(lambda name=name, whole=whole: call(name, whole), turns=12)
        alone = best(lambda name=name, each=each: [call(name, c) for c in each], turns=12) * LONG / len(each)
        yield f"column of 10,000: {label} ({1e3 * together:.1f} ms)", 100.0, alone / together, "x", True


def list_lines() -> Iterator[Line]:
    """A parts list of 10,000 rows in one cell."""
    rng = np.random.default_rng(5)
    head = ["part", "qty", "shape", "mass [kg]", "L [mm]", "W [mm]", "H [mm]", "x [mm]", "y [mm]", "z [mm]"]
    table: list[list[Any]] = [head]
    for k in range(LONG):
        table.append(
            [f"part {k}", 1.0, "box", *rng.uniform(1, 900, 4).tolist(), *rng.normal(size=3).tolist()]
        )
    turned: list[list[Any]] = [[*head, "OD [mm]", "t [mm]", "turn x [deg]", "turn z [deg]"]]
    for k, line in enumerate(table[1:]):
        if k % 2:
            turned.append([*line, None, None, 30.0, None])
        else:
            turned.append([*line[:2], "tube", *line[3:5], None, None, *line[7:], 100.0, 8.0, None, 15.0])
    for label, cells in (("boxes", table), ("boxes and tubes, turned", turned)):
        measured = 1e3 * best(calling("RB_ROLLUP", [cells, "Izz"]), turns=15)
        yield f"parts list of 10,000 rows in one cell: {label}", 40.0, measured, "ms", False


MIX = (
    "=RB_TORQUE(A{r},B{r})",
    '=RB_SHIFT(A{r},B{r},C{r},"kg*m^2")',
    '=RB_CONVERT("{r} mm","in")',
    "=RB_MARGIN(A{r},10000)",
    '=RB_SHAPE("tube",B{r},"OD 114.3 mm; ID 101.7 mm; L 520 mm","Izz","kg*mm^2")',
    '=RB_MOMENT_SUM(A{r},B{r},D{r}:E{r},A{r},B{r},D{r}:E{r},"N*m")',
    '=RB_MOTOR_TORQUE(A{r},180,0.86,"N*m")',
    "=RB_GD2(A{r})",
    '=RB_CHECK(A{r},20000)',
    '=RB_REFLECTED_INERTIA(A{r},B{r},"kg*m^2")',
)  # fmt: skip
FORMULAS = 20_000


def book() -> bytes:
    """Return a workbook with 20,000 formulas, ten in each row beside five inputs."""
    import openpyxl

    made = openpyxl.Workbook()
    sheet = made.active
    assert sheet is not None
    for r in range(1, FORMULAS // len(MIX) + 1):
        sheet.append([0.5 * r, 2.0, "0.4 m", 0.3, -0.7, *(formula.format(r=r) for formula in MIX)])
    target = io.BytesIO()
    made.save(target)
    return target.getvalue()


def engine_time(data: bytes) -> float:
    """Return the processor time of the engine and the functions [s], the file already read."""
    run = Run(data, {}, None, None)
    gc.disable()  # as a recalculation does
    start = time.process_time()
    run.work_out(run.open())
    spent = time.process_time() - start
    gc.enable()
    return spent


def book_lines() -> Iterator[Line]:
    """20,000 formulas of ten functions, from the file and back into the file."""
    with tempfile.TemporaryDirectory() as folder:
        path, target = Path(folder) / "mix.xlsx", Path(folder) / "done.xlsx"
        path.write_bytes(book())
        done = recalculate(path, to=target)
        assert len(done.values) == FORMULAS
        assert not done.errors, done.errors[0]
        whole = best(lambda: recalculate(path, to=target), turns=5)
        engine = min(engine_time(path.read_bytes()) for _ in range(5))
    names = ", ".join(formula[1 : formula.index("(")] for formula in MIX)
    print(f"  mix of the workbook, 2,000 of each: {names}")
    yield "20,000 formulas: file loaded, worked out, written", 2.5, whole, "s", False
    yield "20,000 formulas: each, engine included", 60.0, 1e6 * engine / FORMULAS, "us", False


def process(*command: str) -> Callable[[], object]:
    return lambda: subprocess.run(command, check=True, capture_output=True)


def start_lines() -> Iterator[Line]:
    """The command against an empty Python process."""
    command = Path(sys.executable).with_name("rigidsheet")
    if not command.exists():
        print("  the rigidsheet command is not installed beside this Python")
        return
    empty = best_wall(process(sys.executable, "-c", "pass"), turns=15)
    helped = best_wall(process(str(command), "--help"), turns=15)
    yield f"rigidsheet --help ({1e3 * helped:.0f} ms) over python -c pass", 6.0, helped / empty, "x", False


PARTS: dict[str, Callable[[], Iterator[Line]]] = {
    "text": text_lines,
    "scalar": scalar_lines,
    "columns": column_lines,
    "list": list_lines,
    "book": book_lines,
    "start": start_lines,
}


def main(wanted: list[str]) -> None:
    """Print the table."""
    print(f"{'':72} {'target':>9} {'measured':>9}")
    missed = 0
    for part in wanted or list(PARTS):
        for what, target, measured, unit, more in PARTS[part]():
            good = measured >= target if more else measured <= target
            missed += not good
            goal = "none" if target == float("inf") else f"{'>=' if more else '<='} {target:g}"
            print(f"{what:72} {goal:>9} {measured:9.1f} {unit:3} {'ok' if good else 'MISSED'}", flush=True)
    print(f"{missed} missed")


if __name__ == "__main__":
    main(sys.argv[1:])
