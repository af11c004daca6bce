"""`rigidsheet functions` and `rigidsheet try`."""

from __future__ import annotations

import math
import re

import pytest
from command_line import refused, run

from rigidsheet.core.shapes import SHAPES
from rigidsheet.udf.catalogue import FUNCTIONS, GROUPS
from rigidsheet.udf.compiling import arguments_of

FOOT_POUND = 0.3048 * 0.45359237 * 9.80665  # N*m, NIST SP 811: exact foot and pound, standard gravity
TORQUE = 85 * math.radians(40)  # T = I alpha, Euler's second law for a fixed axis


def test_functions_lists_every_function_under_its_group() -> None:
    lines = run("functions").output.splitlines()
    heads = [i for i, line in enumerate(lines) if line in GROUPS]
    assert [lines[i] for i in heads] == list(GROUPS)
    listed = [line.split()[0] for line in lines if line.startswith("  RB_")]
    assert sorted(listed) == sorted(FUNCTIONS)


@pytest.mark.parametrize("name", list(FUNCTIONS))
def test_full_help_of_every_function(name: str) -> None:
    result = run("functions", name.lower())
    assert result.exit_code == 0
    f = FUNCTIONS[name]
    text = " ".join(result.output.split())
    for part in (f.line, f.source, *(example.formula for example in f.examples)):
        assert " ".join(part.split()) in text
    for argument in arguments_of(f):
        assert argument.name in text
    for field in f.result.fields:
        assert field.name in text


@pytest.mark.parametrize("name", list(FUNCTIONS))
def test_full_help_lists_all_that_a_table_or_record_takes(name: str) -> None:
    text = " ".join(run("functions", name).output.split())
    for argument in arguments_of(FUNCTIONS[name]):
        lines = getattr(argument.shape, "columns", None) or getattr(argument.shape, "entries", ())
        for line in lines:
            assert f"{line.label} " in text
            assert " ".join(line.help.split()) in text
            assert all(other in text for other in line.also)


@pytest.mark.parametrize("name", ["RB_SHAPE", "RB_SHAPE_MASS"])
def test_full_help_of_shapes_tells_sizes_datum_and_axis(name: str) -> None:
    output = run("functions", name).output
    text = " ".join(output.split())
    for shape in SHAPES.values():
        assert f" {shape.name} " in text
        assert shape.datum in text
        assert all(size.label in text for size in shape.sizes)
    assert "slender rod L, [R/D]. Datum at mid-length. Length along z." in text
    assert "thin tube D/R (mean), L, [t]." in text


def test_functions_with_a_word() -> None:
    output = run("functions", "torque").output
    assert "RB_TORQUE" in output
    assert "RB_KIND" not in output
    assert run("functions", "PARALLEL axis").output.count("RB_SHIFT") >= 2
    assert "no function speaks of 'zeppelin'" in refused("functions", "zeppelin")
    assert "Did you mean RB_TORQUE?" in refused("functions", "RB_TORQEU")


def test_try_shows_working_and_result() -> None:
    result = run("try", '=RB_TORQUE("85 kg*m^2", "40 deg/s^2")')
    assert result.exit_code == 0
    assert result.output.splitlines()[0] == "RB_TORQUE"
    assert "T = I alpha = 85 kg*m^2 * 0.698132 rad/s^2" in result.output
    assert result.output.splitlines()[-1] == f"= {TORQUE:.6g} N*m"


@pytest.mark.parametrize(
    ("formula", "last"),
    [
        ('RB_TORQUE("85 kg*m^2","40 deg/s^2","lbf*ft")', f"= {TORQUE / FOOT_POUND:.6g} lbf*ft"),
        ('RB_CONVERT("400 mm","in")', f"= {400 / 25.4:.6g} in"),
        ("IF(1>0,PI()*2,1/0)", f"= {2 * math.pi:.6g}"),
        ("{1,2;3,4}*2", "= 6 | 8"),
        ("RB_ARM({0,0},{0.4,0.25})", "= 0.4 | 0.25"),
        ('RB_ARM({1,2,3},{400,250,0,"mm"})', "= -0.6 | -1.75 | -3"),
        ('RB_MARGIN("212 N*m","340 N*m",,"factor")', f"= {340 / 212:.6g}"),
        ('RB_MARGIN(RB_TORQUE("85 kg*m^2","40 deg/s^2"),340)', f"= {340 / TORQUE - 1:.6g}"),
        ('RB_CHECK("6.2 kN","15 kN","at most",2)', "= OK"),
        ('IFERROR(RB_CONVERT("400 kg","in"),5)', "= 5"),
        ('-RB_CONVERT("1 in","mm")', "= -25.4"),
        ('"a"&"b"', "= ab"),
        ("1>2", "= FALSE"),
        (
            'RB_WHY("RB_TORQUE","85 kg","1 rad/s^2")',
            "= `inertia` must be a moment of inertia; got 'kg' (mass). Write it in kg*m^2.",
        ),
    ],
)
def test_try_goes_the_way_of_a_workbook(formula: str, last: str) -> None:
    result = run("try", formula)
    assert result.exit_code == 0, result.stderr
    assert result.output.splitlines()[-1] == last


def test_try_shows_every_call_once_and_in_order() -> None:
    output = run(
        "try", 'RB_MARGIN(RB_TORQUE("85 kg*m^2","40 deg/s^2"),340)+0*RB_TORQUE("85 kg*m^2","40 deg/s^2")'
    ).output
    heads = [line for line in output.splitlines() if line.startswith("RB_")]
    assert heads == ["RB_TORQUE", "RB_MARGIN"]


def test_try_warns_of_a_number_that_lost_its_unit() -> None:
    result = run("try", 'RB_ANGULAR_ACCELERATION(RB_TORQUE("85 kg*m^2","40 deg/s^2","lbf*ft"),85)')
    assert result.exit_code == 0
    assert re.search(r"Warning: The formula hands a number in '?lbf\*ft'? from RB_TORQUE", result.output)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        (
            'RB_TORQUE("85 kg","40 deg/s^2")',
            "RB_TORQUE is refused with #VALUE!: `inertia` must be a moment of inertia",
        ),
        ('RB_TORQU("85 kg")', "there is no function RB_TORQU. Did you mean RB_TORQUE?"),
        ('RB_MARGIN("0 N","3 N")', "RB_MARGIN is refused with #NUM!: A demand of zero has no margin"),
        ("RB_TORQUE(B3,Inputs!B4)", "has no cells to read; got B3"),
        ("SUM(arm)", "there is no cell or function named arm"),
        ('RB_TORQUE("85 kg*m^2"; 2)', "semicolons"),
        ("RB_TORQUE(1", "parenthesis"),
        ('"abc', "not closed"),
        ("1 2", "no operator"),
        ("1/0", "the formula gives #DIV/0!: something is divided by zero"),
        ('1/0+RB_KIND("kg")', "the formula gives"),
        ("=", "no formula to try"),
        ("", "no formula to try"),
        ("1+" * 6000 + "1", "longer than"),
        ("\x01", "control character"),
    ],
)
def test_try_refuses_in_one_line(formula: str, words: str) -> None:
    line = refused("try", formula)
    assert words in line
    assert "Formula!A1" not in line
