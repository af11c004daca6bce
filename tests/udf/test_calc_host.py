"""What passes between Calc and the worker, and the extension itself, as far as no office is needed."""

from __future__ import annotations

import ast
import json
import re
import subprocess
import sys
import zipfile
from pathlib import Path
from xml.etree import ElementTree

import pytest

from rigidsheet.udf.calc.build import build
from rigidsheet.udf.calc.host import (
    express,
    fingerprint,
    host_arguments,
    may_be_one_cell,
    method_name,
    normalise,
)
from rigidsheet.udf.calling import call
from rigidsheet.udf.catalogue import FUNCTIONS
from rigidsheet.udf.cells import OMITTED, Refusal
from rigidsheet.udf.compiling import arguments_of


def test_cells_come_in() -> None:
    given = (3.0, "5", None, (), True, ((1.0, ""), ("m", 2.0)), ((7.0,),), (("",),))
    assert normalise(given) == [3.0, "5", OMITTED, None, True, [[1.0, None], ["m", 2.0]], 7.0, None]


def test_the_blank_end_of_whole_columns_is_dropped_and_that_of_a_range_is_kept() -> None:
    column = ((1.0,), (2.0,), *[("",)] * (2**20 - 2))
    assert normalise((column,)) == [[[1.0], [2.0]]]
    assert normalise((((1.0,), (2.0,), ("",)),)) == [[[1.0], [2.0], [None]]]
    row = ((1.0, 2.0, *[""] * (2**14 - 2)),)
    assert normalise((row,)) == [[[1.0, 2.0]]]
    assert normalise((tuple([("",)] * 2**20),)) == [[[None]]]


def test_answers_go_out() -> None:
    assert express(2.0) == ((2.0,),)
    assert express("OK") == (("OK",),)
    assert express([[1.0, "m"], [2.0, "s"]]) == ((1.0, "m"), (2.0, "s"))
    assert express(Refusal("#NUM!", "why")) == "#NUM!"


def test_methods_have_names_of_their_own() -> None:
    names = [method_name(name) for name in FUNCTIONS]
    assert len({n.lower() for n in names}) == len(names)
    assert all(re.fullmatch(r"rb[A-Z0-9][A-Za-z0-9]*", n) for n in names)
    # the same letters as the function's name, so that headless files with the long names are read too
    assert [n.upper() for n in names] == [name.replace("_", "") for name in FUNCTIONS]


def test_functions_that_ask_about_others_take_the_longest_call() -> None:
    longest = max(len(arguments_of(f)) for f in FUNCTIONS.values())
    assert len(host_arguments(FUNCTIONS["RB_WHY"])) >= 1 + max(
        len(arguments_of(f)) for name, f in FUNCTIONS.items() if name not in ("RB_WHY", "RB_WORKING")
    )
    assert len(host_arguments(FUNCTIONS["RB_WORKING"])) == 1 + longest


def test_functions_declared_as_blocks_never_give_one_cell() -> None:
    blocks = [f for f in FUNCTIONS.values() if not may_be_one_cell(f)]
    assert {"RB_ARM", "RB_VELOCITY_AT"} <= {f.name for f in blocks}
    for f in blocks:
        if f.name == "RB_WORKING":
            continue
        answer = call(f.name, [a.shape.sample() for a in arguments_of(f) if not a.optional])
        assert isinstance(answer, list), f.name
        assert len(answer) * len(answer[0]) > 1


def test_the_extension_holds_every_function(tmp_path: Path) -> None:
    path = build(tmp_path)
    assert path.name == "rigidsheet.oxt"
    with zipfile.ZipFile(path) as archive:
        parts = {name: archive.read(name).decode() for name in archive.namelist()}
    for name, text in parts.items():
        if name.endswith((".xml", ".xcu", ".components")):
            ElementTree.fromstring(text)
        assert str(tmp_path) not in text
    listed = re.findall(r'manifest:full-path="([^"]+)"', parts["META-INF/manifest.xml"])
    assert set(listed) <= parts.keys()
    types, wizard = parts["types.idl"], parts["CalcAddIns.xcu"]
    config = json.loads(parts["config.json"])
    assert config["functions"].keys() == FUNCTIONS.keys()
    assert config["fingerprint"] == fingerprint()
    for name, f in FUNCTIONS.items():
        declared = re.search(rf" {method_name(name)}\((.*?)\);", types)
        assert declared is not None
        assert declared[1].count("[in] any") == len(host_arguments(f))
        assert f'xml:lang="en-US">{name}<' in wizard
    assert types.isascii()


def test_the_same_functions_give_the_same_bytes(tmp_path: Path) -> None:
    first, second = build(tmp_path / "a.oxt"), build(tmp_path / "b.oxt")
    assert first.read_bytes() == second.read_bytes()


def test_the_office_side_needs_nothing_but_its_own_python(tmp_path: Path) -> None:
    with zipfile.ZipFile(build(tmp_path)) as archive:
        sources = {n: archive.read(n).decode() for n in archive.namelist() if n.endswith(".py")}
    allowed = {
        "uno",
        "unohelper",
        "com",
        "org",
        "rigidsheet_channel",
        "rigidsheet_repair",
        "rigidsheet_sight",
    }
    allowed |= set(sys.stdlib_module_names)
    for name, text in sources.items():
        for module in re.findall(r"^\s*(?:import|from) ([\w.]+)", text, re.MULTILINE):
            assert module.split(".")[0] in allowed, (name, module)
        # the oldest Python that the office brings along is 3.8
        ast.parse(text, feature_version=(3, 8))


def test_the_worker_imports_no_unit_registry_and_no_workbook_library() -> None:
    code = (
        "import sys, rigidsheet.udf.calc.worker\n"
        "print([m for m in ('pint', 'openpyxl', 'xlwings', 'formualizer', 'scipy') if m in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


@pytest.mark.parametrize("name", ["RB_WHY", "RB_ARM"])
def test_methods_are_in_camel_case(name: str) -> None:
    assert method_name(name) == {"RB_WHY": "rbWhy", "RB_ARM": "rbArm"}[name]
