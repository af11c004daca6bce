"""Numbers are read strictly: one meaning, or a refusal that says what to write."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rigidsheet.core.errors import InputError
from rigidsheet.udf.units.numbers import read_number, split_quantity

READ = {
    "0.4": 0.4,
    "5": 5.0,
    "5.": 5.0,
    ".5": 0.5,
    "+5": 5.0,
    "-5": -5.0,
    "\u22125": -5.0,
    " 12.5 ": 12.5,
    "1e3": 1000.0,
    "1E+3": 1000.0,
    "1.5e\u22123": 0.0015,
    "007": 7.0,
    "\u00a05\u00a0": 5.0,
}

REFUSED = {
    "0,4": r"Write 0\.4 with a point",
    ",4": r"Write 0\.4 with a point",
    "-0,4": r"Write -0\.4 with a point",
    "0,400": r"Write 0\.400 with a point",
    "1,25": r"Write 1\.25 with a point",
    "1,250": r"Write 1250, or 1\.250 if the comma is a decimal sign",
    "1,250.5": r"Write 1250\.5\.",
    "1,250,000": r"Write 1250000\.",
    "1.250,5": r"Write 1250\.5\.",
    "1 250": r"Write 1250 without the space",
    "-1\u202f250": r"Write -1250 without the space",
    "12 250.5": r"Write 12250\.5 without the space",
    "1_000": r"Write 1000 without the mark",
    "1'250": r"Write 1250 without the mark",
    "1 1/2": r"Write 1\.5\.",
    "-1-1/2": r"Write -1\.5\.",
    "3/8": r"Write 0\.375\.",
    "1/0": r"Nothing is divided by 0",
    "½": r"Write the digits 0 to 9",
    "2**3": r"Write the result, or a formula",
    "2*3": r"Write the result, or a formula",
    "2+3": r"Write the result, or a formula",
    "=2": r"Write the result, or a formula",
    "1.2.3": r"one decimal point",
    "1e400": r"that a computer can hold",
    "-1e400": r"that a computer can hold",
    "1e-400": r"that a computer can hold.*write 0",
    "nan": r"Write a finite number",
    "-inf": r"Write a finite number",
    "Infinity": r"Write a finite number",
    "\u0663": r"Write the digits 0 to 9",
    "\uff15": r"Write the digits 0 to 9",
    "1\u0663": r"Write the digits 0 to 9",
    "±5": r"Write the number alone",
    "~5": r"Write the number alone",
    ">5": r"Write the number alone",
    "\u20135": r"Write -5\.",
    "- 5": r"Write -5\.",
    "(5)": r"Write -5\.",
    "5-": r"Write -5\.",
    "5%": r"Write 0\.05\.",
    "3:2": r"one number, 1\.5\.",
    "3:0": r"Nothing is divided by 0",
    "1×10³": r"Write 1e3\.",
    "1.5 x 10^-3": r"Write 1\.5e-3\.",
    "10^6": r"Write 1e6\.",
    "5 mm": r"unit is not read here",
    "1450 1/min": r"unit is not read here",
    "": r"Nothing was given",
    "   ": r"Nothing was given",
    "--5": r"must be a number; got '--5'",
    "e5": r"number comes first",
    "0x10": r"unit is not read here",
    "five": r"must be a number; got 'five'",
    ".": r"must be a number",
    "TRUE": r"must be a number",
}


@pytest.mark.parametrize(("text", "value"), READ.items())
def test_a_plain_number_is_read(text: str, value: float) -> None:
    assert read_number(text) == value
    assert split_quantity(text) == (value, "")


@pytest.mark.parametrize(("text", "reason"), REFUSED.items())
def test_everything_else_is_refused_with_its_remedy(text: str, reason: str) -> None:
    with pytest.raises(InputError, match=reason):
        read_number(text)
    with pytest.raises(InputError, match=r"^`arm` must be a number"):
        read_number(text, "arm")


QUANTITIES = {
    "400 mm": (400.0, "mm"),
    "400mm": (400.0, "mm"),
    " 400  mm ": (400.0, "mm"),
    "1e5 m": (1e5, "m"),
    "3.5E-3kg": (0.0035, "kg"),
    "\u22125 mm": (-5.0, "mm"),
    "5%": (5.0, "%"),
    "45°": (45.0, "°"),
    "5 [mm]": (5.0, "[mm]"),
    "5 (mm)": (5.0, "(mm)"),
    "5 kg/(m s)": (5.0, "kg/(m s)"),
    "5 N m / (rad)": (5.0, "N m / (rad)"),
    "5 lb in s2": (5.0, "lb in s2"),
    "5 sq in": (5.0, "sq in"),
    "1450 1/min": (1450.0, "1/min"),
    "1450 1 / min": (1450.0, "1 / min"),
    "1450 r/min": (1450.0, "r/min"),
    "5 m/s²": (5.0, "m/s²"),
    "5 µm": (5.0, "µm"),
    "5 in.": (5.0, "in."),
}

NO_QUANTITIES = {
    "0,4 m": r"Write 0\.4 m with a point",
    "1 250 mm": r"Write 1250 mm without the space",
    "1,250 mm": r"Write 1250 mm, or 1\.250 mm if the comma",
    "1 1/2 in": r"Write 1\.5 in\.",
    "1/2 in": r"Write 0\.5 in\.",
    "5 ft 3 in": r"Write 63 in\.",
    "5' 3\"": r"Write 63 in\.",
    "5'-3 1/2\"": r"must be a number with a unit",
    "5'": r"Write 5 ft\.",
    '3"': r"Write 3 in\.",
    "3 m 20 cm": r"One cell holds one number",
    "±5 mm": r"Write the number alone",
    "5 mm ±0.1": r"one number with one unit",
    "5 ±0.1 mm": r"must be a number with a unit",
    "10-12 mm": r"must be a number with a unit",
    "5 mm + 3 mm": r"One cell holds one number",
    "1.5 mm (approx)": r"Leave out the remark",
    "5 N [guess]": r"Leave out the remark",
    "11/min": r"Write 11 1/min\.",
    "1450 /min": r"Write 1450 1/min\.",
    "5 · mm": r"Write 5 mm\.",
    "5*mm": r"Write 5 mm\.",
    "1×10³ mm": r"Write 1e3 mm\.",
    "1e400 mm": r"that a computer can hold",
    "1e-400 mm": r"that a computer can hold",
    "mm": r"must be a number with a unit",
    "mm 5": r"number comes first",
    "5-": r"Write -5\.",
    "5 -": r"Write -5\.",
    "\u0665 mm": r"Write the digits 0 to 9",
    "2**3 mm": r"Write the result",
    "1.2.3 mm": r"one decimal point",
    "": r"Nothing was given",
}


@pytest.mark.parametrize(("text", "parts"), QUANTITIES.items())
def test_a_quantity_is_split_into_number_and_unit(text: str, parts: tuple[float, str]) -> None:
    assert split_quantity(text) == parts


@pytest.mark.parametrize(("text", "reason"), NO_QUANTITIES.items())
def test_what_is_no_quantity_is_refused_with_its_remedy(text: str, reason: str) -> None:
    with pytest.raises(InputError, match=reason):
        split_quantity(text)


def test_zero_has_no_sign() -> None:
    assert math.copysign(1.0, read_number("-0")) == 1.0
    assert math.copysign(1.0, split_quantity("-0 mm")[0]) == 1.0


@given(st.floats(allow_nan=False, allow_infinity=False))
def test_every_float_that_python_writes_is_read_back(value: float) -> None:
    assert read_number(repr(value)) == value
    assert split_quantity(f"{value!r} mm") == (value, "mm")


def answer(read: Callable[[str], Any], text: str) -> Any:
    """Return what is read, or the refusal; any other exception fails the test."""
    try:
        return read(text)
    except InputError as refusal:
        return refusal


@settings(max_examples=300)
@given(st.text(max_size=40) | st.text("0123456789.,'\"+-−eE/*^ 1m()[]°%±\u0663", max_size=14))
def test_any_text_gives_a_finite_number_or_a_short_refusal(text: str) -> None:
    number = answer(read_number, text)
    assert math.isfinite(number) if isinstance(number, float) else len(str(number)) < 255
    parts = answer(split_quantity, text)
    if isinstance(parts, InputError):
        assert len(str(parts)) < 255
    else:
        assert math.isfinite(parts[0])
        assert parts[1] == parts[1].strip()


@pytest.mark.parametrize(
    "text", [" " * 30000 + "x", "5 a" + " " * 30000 + "(", "1" * 30000 + "x", "1,000" * 6000]
)
def test_a_whole_cell_of_text_is_refused(text: str) -> None:
    # A spreadsheet cell holds up to 32767 characters.
    for read in (read_number, split_quantity):
        with pytest.raises(InputError, match="number") as refusal:
            read(text)
        assert len(str(refusal.value)) < 255
