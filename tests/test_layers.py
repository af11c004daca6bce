"""The layers: imports run one way, nothing heavy is loaded early, core is documented, modules stay short."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
from collections.abc import Iterator
from graphlib import CycleError, TopologicalSorter
from pathlib import Path

import pytest

import rigidsheet.core.shapes

ROOT = Path(__file__).parents[1]
LAYERS = ("core", "udf", "workbooks")
# What each layer may import when it is imported, beside the standard library and the layers below.
THIRD_PARTY = {
    "core": {"numpy"},
    "udf": {"numpy"},
    "workbooks": {"numpy", "click", "rich", "openpyxl", "formualizer"},
}
# Imported only inside the function that needs it.
LATER = {
    "core": {"scipy"},
    "udf": {"pint", "xlwings"},
    "workbooks": {"openpyxl", "formualizer", "rich", "xlwings", "click"},
}
# An adapter is only imported by its host, which has the package anyway.
ADAPTERS = {"rigidsheet.udf.excel_calls": {"xlwings"}}
# Run in the Python of an office, which has neither numpy nor this package.
IN_THE_OFFICE = ("addin", "rigidsheet_channel", "rigidsheet_repair", "rigidsheet_sight")
OFFICE_MODULES = {"uno", "unohelper", "com", "org", *IN_THE_OFFICE}

MODULES = {
    ".".join(("rigidsheet", *path.relative_to(ROOT).with_suffix("").parts)).removesuffix(".__init__"): path
    for layer in LAYERS
    for path in sorted((ROOT / layer).rglob("*.py"))
}
TREES = {name: ast.parse(path.read_text(encoding="utf-8")) for name, path in MODULES.items()}


def layer_of(module: str) -> str:
    return module.split(".")[1]


def in_office(module: str) -> bool:
    return module.startswith("rigidsheet.udf.calc.") and module.rsplit(".", 1)[1] in IN_THE_OFFICE


def imported(module: str) -> Iterator[tuple[str, bool]]:
    """Yield each module that `module` imports, and whether that happens as soon as it is imported."""
    early = set(early_nodes(TREES[module]))
    package = module if MODULES[module].name == "__init__.py" else module.rpartition(".")[0]
    for node in ast.walk(TREES[module]):
        if isinstance(node, ast.Import):
            for alias in node.names:
                yield alias.name, node in early
        elif isinstance(node, ast.ImportFrom):
            base = node.module or ""
            if node.level:
                above = package.split(".")[: len(package.split(".")) - node.level + 1]
                base = ".".join([*above, *([node.module] if node.module else [])])
            for alias in node.names:
                full = f"{base}.{alias.name}"
                yield (full if full in MODULES else base), node in early


def early_nodes(tree: ast.AST) -> Iterator[ast.AST]:
    """Yield the nodes that run when a module is imported: not inside functions, not for type checkers only."""
    for node in ast.iter_child_nodes(tree):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda):
            continue
        if isinstance(node, ast.If) and "TYPE_CHECKING" in ast.dump(node.test):
            continue
        yield node
        yield from early_nodes(node)


@pytest.mark.parametrize("module", MODULES)
def test_imports_run_one_way(module: str) -> None:
    layer = layer_of(module)
    for name, early in imported(module):
        top = name.split(".")[0]
        if top == "rigidsheet":
            assert name in MODULES, f"{module} imports {name}, which is not there"
            assert LAYERS.index(layer_of(name)) <= LAYERS.index(layer), f"{module} imports {name}"
        elif top not in sys.stdlib_module_names and not (in_office(module) and top in OFFICE_MODULES):
            own = ADAPTERS.get(module, set())
            allowed = THIRD_PARTY[layer] | own if early else THIRD_PARTY[layer] | LATER[layer]
            assert top in allowed, f"{module} imports {name}{' at once' if early else ''}"


def test_no_cycle_of_imports() -> None:
    graph = {m: {name for name, early in imported(m) if early and name in MODULES} - {m} for m in MODULES}
    try:
        list(TopologicalSorter(graph).static_order())
    except CycleError as error:
        pytest.fail(" -> ".join(error.args[1]))


HEAVY = ("pint", "openpyxl", "xlwings", "formualizer", "scipy", "sympy", "rich", "pandas", "matplotlib")


def loaded(code: str) -> set[str]:
    """Return the packages from outside the standard library that a fresh Python loads for `code`."""
    told = subprocess.run(
        [sys.executable, "-c", f"import sys\n{code}\nprint('|'.join(sys.modules))"],
        capture_output=True,
        text=True,
        check=True,
        cwd=ROOT,
    )
    names = {name.split(".")[0] for name in told.stdout.splitlines()[-1].split("|")}
    return {n for n in names if n not in sys.stdlib_module_names and not n.startswith(("_", "sitecustomize"))}


def test_calling_a_function_loads_numpy_alone() -> None:
    found = loaded(
        "import rigidsheet.udf.calling as c; assert c.call('RB_TORQUE', ['2 kg*m^2', '9 deg/s^2']) > 0"
    )
    assert found == {"rigidsheet", "numpy"}


def test_core_loads_numpy_alone() -> None:
    modules = [m for m in MODULES if layer_of(m) == "core"]
    assert loaded("import " + ", ".join(modules)) == {"rigidsheet", "numpy"}


def test_the_help_of_the_command_loads_nothing_heavy() -> None:
    code = (
        "from rigidsheet.workbooks.cli import main\ntry:\n    main(['--help'])\nexcept SystemExit:\n    pass"
    )
    assert not loaded(code) & {*HEAVY, "numpy"}, "what only a real command needs"


# -- documentation of what core offers

SECTIONS = ("Parameters", "Returns", "Notes", "References")
UNIT = re.compile(r"\[[^\]]+\]")
# Formulas of the table of shapes and words of messages: each is described by its row, nobody calls them by hand.
INSIDE = {"errors"} | {
    f"shapes.{p.stem}" for p in (ROOT / "core" / "shapes").glob("*.py") if p.stem != "__init__"
}


def public_functions() -> Iterator[tuple[str, ast.FunctionDef]]:
    """Yield every function of core that other layers may call, and what a body can do."""
    offered = set(rigidsheet.core.shapes.__all__)
    for module, tree in TREES.items():
        if layer_of(module) != "core":
            continue
        inside = module.removeprefix("rigidsheet.core.") in INSIDE
        for node in tree.body:
            if (
                isinstance(node, ast.FunctionDef)
                and not node.name.startswith("_")
                and (not inside or node.name in offered)
            ):
                yield f"{module}.{node.name}", node
            if isinstance(node, ast.ClassDef) and node.name == "RigidBody":
                for part in node.body:
                    if isinstance(part, ast.FunctionDef) and not part.name.startswith("_"):
                        yield f"{module}.{node.name}.{part.name}", part


FUNCTIONS = dict(public_functions())


def section(text: str, title: str) -> str:
    found = re.search(rf"^{title}\n-+\n(.*?)(?=^\w[^\n]*\n-+\n|\Z)", text, re.MULTILINE | re.DOTALL)
    return found[1] if found else ""


def test_there_is_something_to_document() -> None:
    assert len(FUNCTIONS) > 60


@pytest.mark.parametrize("name", FUNCTIONS)
def test_a_public_function_of_core_is_documented(name: str) -> None:
    node = FUNCTIONS[name]
    text = ast.get_docstring(node) or ""
    first = text.split("\n")[0]
    assert first.endswith("."), f"no summary in one line: {first!r}"
    own = [
        a.arg
        for a in (*node.args.posonlyargs, *node.args.args, *node.args.kwonlyargs)
        if a.arg not in ("self", "cls")
    ]
    for title in SECTIONS:
        if title != "Parameters" or own:
            assert section(text, title).strip(), f"no section {title}"
    described = section(text, "Parameters")
    for a in own:
        assert re.search(rf"^(\w+, )*{a}(, \w+)* : ", described, re.MULTILINE), f"`{a}` is not described"
    for entry in re.split(r"^(?=\w[\w, ]* : )", described, flags=re.MULTILINE):
        if re.match(r"[\w, ]+ : .*\b(float|array|ndarray)", entry):
            assert UNIT.search(entry), f"no unit in: {entry.strip()}"
    returns = section(text, "Returns")
    if re.match(r"\s*([\w, ]+ : )?(float|ndarray|array)", returns):
        assert UNIT.search(returns), f"no unit in what is returned: {returns.strip()}"


# -- sizes

# One long table of data, which no cut would make clearer.
TABLES = {"rigidsheet.udf.units.spellings._symbols"}


@pytest.mark.parametrize("module", MODULES)
def test_a_module_stays_under_400_lines(module: str) -> None:
    assert len(MODULES[module].read_text(encoding="utf-8").splitlines()) < 400


def members() -> Iterator[tuple[str, ast.FunctionDef]]:
    """Yield every function of the package."""
    for module, tree in TREES.items():
        for node in ast.walk(tree):
            if isinstance(node, ast.FunctionDef):
                yield f"{module}.{node.name}", node


def test_no_function_is_longer_than_60_lines() -> None:
    lengths = {}
    for name, node in members():
        assert node.end_lineno is not None
        doc = ast.get_docstring(node) or ""
        lengths[name] = node.end_lineno - node.lineno + 1 - len(doc.splitlines())
    assert {name: count for name, count in lengths.items() if count > 60 and name not in TABLES} == {}


def test_every_class_of_core_says_what_it_is() -> None:
    silent = [
        f"{module}.{node.name}"
        for module, tree in TREES.items()
        if layer_of(module) == "core"
        for node in ast.walk(tree)
        if isinstance(node, ast.ClassDef) and not node.name.startswith("_") and not ast.get_docstring(node)
    ]
    assert silent == []
