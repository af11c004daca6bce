"""Unit texts: canonical form, the factor by kind of quantity, refusals with remedies."""

from __future__ import annotations

import math
import subprocess
import sys
from collections.abc import Callable
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rigidsheet.core.errors import InputError, KindError
from rigidsheet.udf.units import factors as units
from rigidsheet.udf.units import kinds as k
from rigidsheet.udf.units.factors import canonical, factor, is_si, readings
from rigidsheet.udf.units.kinds import KINDS, Kind

CANONICAL = {
    "kg*m^2": [
        "kg·m²",
        "kg m2",
        "kg-m2",
        "kg.m^2",
        "[kg m²]",
        "(kg·m^2)",
        "kg × m ** 2",
        "kg⋅m²",
        " kg  m^2 ",
        "kg m^+2",
    ],
    "lb*in*s^2": ["lb-in-s2", "lb in s²", "lb.in.s^2", "lb·in·s²", "lb. in. s2", "lb - in - s^2"],
    "min^-1": ["min-1", "min⁻¹", "min^-1", "min\u22121", "min^(-1)", "[min⁻¹]"],
    "m*s^-2": ["m s-2", "m·s⁻²", "m*s^-2", "m s^\u22122"],
    "m/s^2": ["m/s²", "m/s2", "m / s ^ 2", "m∕s²", "m⁄s^2", "m per s2"],
    "in": ["in.", " in ", "[in.]"],
    "ft*lb": ["ft-lb", "ft.-lb.", "ft. lb", "ft·lb", "ft\u2011lb"],
    "um": ["µm", "μm", "um"],
    "mm": ["㎜", "[mm]", "( mm )"],
    "°/s": ["°/s", "º/s", "° / s"],
    "kg/(m*s)": ["kg/(m s)", "kg/(m·s)", "kg / ( m * s )"],
    "r*p*m": ["r.p.m.", "r. p. m."],
    "lb/in^3": ["lb/cu in", "lb/cu. in.", "lb/in³", "lb per cu in"],
    "in^2": ["sq in", "sq. in.", "in²", "(sq in)"],
    "": ["", "  ", "[]", "()", "([])"],
}


@pytest.mark.parametrize(
    ("text", "form"), [(text, form) for form, texts in CANONICAL.items() for text in texts]
)
def test_one_unit_has_one_canonical_form(text: str, form: str) -> None:
    assert canonical(text) == form
    assert canonical(form) == form


# Factors from the exact definitions: inch 0.0254 m and pound 0.45359237 kg (agreement of 1959), gravity
# 9.80665 m/s^2 (3rd CGPM, 1901), gallons 231 in^3 and 4.54609 l; all from memory.
LBF = 0.45359237 * 9.80665
INCH, FOOT = 0.0254, 0.3048
TURN = 2 * math.pi
READ = [
    *[(k.TORQUE, text, 1.0) for text in ("Nm", "N-m", "N.m", "N m", "N·m", "m N", "[N·m]")],
    *[
        (k.TORQUE, text, LBF * FOOT)
        for text in ("ft-lb", "lb-ft", "ft*lbf", "ft-lbs", "LB-FT", "FT.-LBS.", "pound foot")
    ],
    *[(k.TORQUE, text, LBF * INCH) for text in ("in-lb", "lb-in", "lbf in", "lb.in", "inlb", "inch pounds")],
    *[(k.TORQUE, text, LBF * INCH / 16) for text in ("oz-in", "ozf in", "ozin")],
    (k.TORQUE, "kgf*m", 9.80665),
    (k.TORQUE, "kip-ft", 1000 * LBF * FOOT),
    (k.TORQUE, "dN*m", 0.1),
    (k.TORQUE, "mN*m", 0.001),
    *[(k.INERTIA, text, 0.45359237 * FOOT**2) for text in ("lb-ft2", "lb ft²", "lbm*ft^2", "pound*foot^2")],
    (k.INERTIA, "lb in^2", 0.45359237 * INCH**2),
    (k.INERTIA, "kg*cm^2", 1e-4),
    (k.INERTIA, "g*mm^2", 1e-9),
    (k.INERTIA, "kgm²", 1.0),
    (k.INERTIA, "lb-in-s2", LBF * INCH),
    (k.INERTIA, "in-lb-s2", LBF * INCH),
    (k.INERTIA, "oz-in-s2", LBF * INCH / 16),
    (k.INERTIA, "lbf*ft*s^2", LBF * FOOT),
    (k.INERTIA, "slug*ft^2", LBF * FOOT),
    (k.INERTIA, "kgf*m*s^2", 9.80665),
    (k.GD2, "kgf*m^2", 1.0),
    (k.GD2, "kg m²", 1.0),
    *[(k.FORCE, text, LBF) for text in ("lb", "lbf", "lbs", "lb.", "LBF")],
    (k.FORCE, "oz", LBF / 16),
    (k.FORCE, "kip", 1000 * LBF),
    (k.FORCE, "klbf", 1000 * LBF),
    (k.FORCE, "daN", 10.0),
    (k.FORCE, "KN", 1000.0),
    (k.ACCELERATION, "g", 9.80665),
    (k.ACCELERATION, "gn", 9.80665),
    (k.ACCELERATION, "m s⁻²", 1.0),
    (k.MASS, "g", 0.001),
    (k.MASS, "KG", 1.0),
    (k.MASS, "t", 1000.0),
    *[(k.MASS, text, LBF / INCH) for text in ("lb*s^2/in", "lbf*s^2/in", "lb-s2/in")],
    (k.MASS, "lb", 0.45359237),
    *[
        (k.ANGULAR_VELOCITY, text, TURN / 60)
        for text in ("rpm", "RPM", "r/min", "1/min", "min-1", "min^-1", "rev/min")
    ],
    (k.ANGULAR_VELOCITY, "rev/s", TURN),
    (k.ANGULAR_VELOCITY, "deg/s", TURN / 360),
    (k.ANGULAR_VELOCITY, "rad s⁻¹", 1.0),
    (k.ANGULAR_ACCELERATION, "rpm/s", TURN / 60),
    (k.ANGULAR_ACCELERATION, "rev/min/s", TURN / 60),
    (k.ANGULAR_ACCELERATION, "rev/(min*s)", TURN / 60),
    (k.ANGULAR_ACCELERATION, "deg/s²", TURN / 360),
    (k.FREQUENCY, "1/min", 1 / 60),
    (k.FREQUENCY, "1/s", 1.0),
    (k.DENSITY, "lb/in3", 0.45359237 / INCH**3),
    (k.DENSITY, "g/cm3", 1000.0),
    (k.DENSITY, "kg/l", 1000.0),
    (k.STIFFNESS, "lb/in", LBF / INCH),
    (k.LINE_DENSITY, "lb/in", 0.45359237 / INCH),
    (k.POWER, "hp", 550 * LBF * FOOT),
    (k.POWER, "PS", 75 * 9.80665),
    (k.PRESSURE, "psi", LBF / INCH**2),
    (k.PRESSURE, "N/mm2", 1e6),
    (k.ANGLE, "°", TURN / 360),
    (k.LENGTH, "thou", 0.001 * INCH),
    (k.LENGTH, "mil", 0.001 * INCH),
    (k.AREA, "sq. in.", INCH**2),
    (k.VOLUME, "US_gal", 231 * INCH**3),
    (k.VOLUME, "UK_gal", 4.54609e-3),
    (k.RATIO, "%", 0.01),
    (k.RATIO, "", 1.0),
    (k.RATIO, "[-]", 1.0),
    (k.RATIO, "mm/m", 0.001),
    (k.DENSITY, "lb/cu in", 0.45359237 / INCH**3),
    (k.VOLUME, "litres", 0.001),
    (k.ANGULAR_VELOCITY, "radians per second", 1.0),
    (k.RATIO, "lb/oz", 16.0),
    (k.UNBALANCE, "oz-in", 0.45359237 / 16 * INCH),
    (k.TORSIONAL_STIFFNESS, "Nm/deg", 360 / TURN),
    (k.VELOCITY, "miles per hour", 0.44704),
    # Names that only the registry has.
    (k.LENGTH, "millimetres", 0.001),
    (k.LENGTH, "Millimeter", 0.001),
    (k.LENGTH, "kilometers", 1000.0),
    (k.MASS, "kilograms", 1.0),
    (k.FORCE, "kilonewton", 1000.0),
    (k.FORCE, "pound_force", LBF),
    (k.TORQUE, "newton meters", 1.0),
    (k.PRESSURE, "megapascal", 1e6),
]


@pytest.mark.parametrize(("kind", "text", "size"), READ)
def test_a_unit_has_the_factor_that_its_kind_decides(kind: Kind, text: str, size: float) -> None:
    assert factor(text, kind) == pytest.approx(size, rel=1e-14)
    assert factor(text, kind) == factor(text, kind)


# NIST SP 811 (2008), Guide for the Use of the SI, Appendix B.8, conversion factors as printed (from memory).
SP_811 = [
    ("lbf·ft", k.TORQUE, "1.355818"),
    ("lbf·in", k.TORQUE, "0.1129848"),
    ("ozf·in", k.TORQUE, "0.007061552"),
    ("lb·in²", k.INERTIA, "0.0002926397"),
    ("lb·ft²", k.INERTIA, "0.04214011"),
    ("kip", k.FORCE, "4448.222"),
    ("pdl", k.FORCE, "0.1382550"),
    ("lbf", k.FORCE, "4.448222"),
    ("kgf", k.FORCE, "9.80665"),
    ("kgf·m", k.TORQUE, "9.80665"),
    ("psi", k.PRESSURE, "6894.757"),
    ("rpm", k.ANGULAR_VELOCITY, "0.1047198"),
    ("lbf/ft", k.STIFFNESS, "14.59390"),
    ("lb/in³", k.DENSITY, "27679.90"),
    ("deg", k.ANGLE, "0.01745329"),
    ("slug", k.MASS, "14.59390"),
    ("hp", k.POWER, "745.6999"),
]


@pytest.mark.parametrize(("text", "kind", "printed"), SP_811)
def test_published_factors_agree_to_their_last_printed_digit(text: str, kind: Kind, printed: str) -> None:
    half_of_last_place = 0.5 * 10.0 ** -len(printed.split(".")[1])
    assert abs(factor(text, kind) - float(printed)) <= half_of_last_place * (1 + 1e-9)


REFUSED = [
    (k.LENGTH, "kg", r"must be a unit of length; got 'kg' \(mass\)"),
    (k.LENGTH, "MM", r"'MM' \(not a known unit\)\. Write mm"),
    (k.LENGTH, "Mm", r"Write mm; a million"),
    (k.LENGTH, "M", r"Write m\."),
    (k.LENGTH, "", r"got '' \(no unit\)\. Its SI unit is m"),
    (k.LENGTH, "-", r"no unit"),
    (k.LENGTH, "%", r"\(ratio\)"),
    (k.LENGTH, "milimeter", r"Did you mean millimeter\?"),
    (k.LENGTH, "cubit", r"not a known unit"),
    (k.LENGTH, "kin", r"not a known unit"),
    (k.LENGTH, "light_year", r"not a known unit"),
    (k.LENGTH, "degC", r"Temperature is not used here"),
    (k.LENGTH, "V", r"not a known unit"),
    (k.FORCE, "kg", r"got 'kg' \(mass\)\. kg is a mass; write kgf"),
    (k.FORCE, "t", r"write tf"),
    (k.FORCE, "ton", r"Write tf, kip or kN"),
    (k.FORCE, "Mlb", r"not a known unit"),
    (k.FORCE, "n", r"Write N\."),
    (k.MASS, "ton", r"Write t \(1000 kg\), short_ton or long_ton"),
    (k.MASS, "kgf", r"got 'kgf' \(force\)\. Write kg"),
    (k.MASS, "lbf", r"Write lb\."),
    (k.MASS, "MG", r"Write mg or Mg: capital and small letters differ"),
    (k.MASS, "electron_mass", r"not a known unit"),
    (k.MASS, "u", r"not a known unit"),
    (k.TORQUE, "kg*m", r"write kgf\*m"),
    (k.TORQUE, "kg-cm", r"write kgf\*cm"),
    (k.TORQUE, "t*m", r"Write tf\*m if that is meant"),
    (k.TORQUE, "nm", r"got 'nm' \(length\)\. nm is a length; write Nm"),
    (k.TORQUE, "J", r"write N\*m"),
    (k.TORQUE, "kJ", r"got 'kJ' \(energy\)\. Write it in N\*m"),
    (k.TORQUE, "joules", r"\(energy\)"),
    (k.TORQUE, "kWh", r"\(energy\)"),
    (k.TORQUE, "W*s", r"\(energy\)"),
    (k.TORQUE, "N*m/rad", r"torsional stiffness"),
    (k.TORQUE, "Nm^2", r"Put a \* between the symbols"),
    (k.INERTIA, "lbf*ft^2", r"For WR2.*write lb\*ft\^2"),
    (k.INERTIA, "lbf-in2", r"For WR2"),
    (k.INERTIA, "WR²", r"For WR2"),
    (k.INERTIA, "GD2", r"convert it with RB_GD2"),
    (k.INERTIA, "kgf*m^2", r"convert it with RB_GD2"),
    (k.INERTIA, "kgf mm²", r"convert it with RB_GD2"),
    (k.INERTIA, "mm^4", r"second moment of area"),
    (k.INERTIA, "lb-ft", r"torque or energy or unbalance"),
    (k.ANGULAR_VELOCITY, "1/s", r"got '1/s' \(frequency\)\. Write rad/s, rev/s or rpm"),
    (k.ANGULAR_VELOCITY, "s⁻¹", r"Write rad/s"),
    (k.ANGULAR_VELOCITY, "Hz", r"Write rev/s or rad/s"),
    (k.ANGULAR_VELOCITY, "rad", r"\(angle\)"),
    (k.ANGULAR_ACCELERATION, "1/s^2", r"Write rad/s\^2 or rev/s\^2"),
    (k.FREQUENCY, "rpm", r"60 rpm is 1 Hz"),
    (k.TORSIONAL_STIFFNESS, "N*m", r"Write N\*m/rad or N\*m/deg"),
    (k.ENERGY, "cal", r"not a known unit"),
    (k.ENERGY, "planck_constant", r"not a known unit"),
    (k.VELOCITY, "ms", r"got 'ms' \(time\)\. Write m/s"),
    (k.VELOCITY, "c", r"Write m/s"),
    (k.TIME, "d", r"Write day"),
    (k.TIME, "a", r"not a known unit"),
    (k.PRESSURE, "psig", r"Write psi"),
    (k.PRESSURE, "kg/cm²", r"Write kgf/cm\^2 if that is meant"),
    (k.PRESSURE, "mpa", r"Write MPa"),
    (k.VOLUME, "gal", r"Write US_gal or UK_gal"),
    (k.COUNT, "%", r"must be a unit of count; got '%' \(ratio\)"),
    (k.SECOND_MOMENT_OF_AREA, "kg*m^2", r"moment of inertia"),
]


@pytest.mark.parametrize(("kind", "text", "reason"), REFUSED)
def test_a_unit_of_another_kind_is_refused_with_its_remedy(kind: Kind, text: str, reason: str) -> None:
    error = InputError if "Put a" in reason else KindError
    with pytest.raises(error, match=reason):
        factor(text, kind)


def test_the_argument_is_named() -> None:
    with pytest.raises(KindError) as refusal:
        factor("kg", k.LENGTH, "arm")
    assert str(refusal.value).startswith("`arm` must be a length; got 'kg' (mass).")
    with pytest.raises(
        InputError, match=r"^`arm` must be a unit with one meaning; got 'kg/m s'\. Write /\(m\*s\)"
    ):
        factor("kg/m s", k.DENSITY, "arm")


NO_UNITS = [
    "2*m",
    "m^0",
    "m^99",
    "m^0.5",
    "5'",
    '3"',
    "m//s",
    "m/",
    "/s",
    "*m",
    "m+s",
    "(m",
    "kg/(m/s)",
    "°C",
    "m m^9 m^3",
    "x" * 500,
]


@pytest.mark.parametrize("text", NO_UNITS)
def test_a_text_that_cannot_be_a_unit_is_refused(text: str) -> None:
    with pytest.raises(InputError, match="must be a unit"):
        factor(text, k.LENGTH)
    with pytest.raises(InputError, match="must be a unit"):
        readings(text)


@pytest.mark.parametrize("text", ["kg/m s", "kg/m*s", "kg/m·s", "lb/ft-s", "W/m^2 K"])
def test_a_slash_followed_by_a_product_has_two_meanings(text: str) -> None:
    with pytest.raises(InputError, match=r"one meaning; .*Write /\("):
        factor(text, k.DENSITY)


READINGS = {
    "lb": ["mass", "force"],
    "g": ["mass", "acceleration"],
    "N*m": ["torque", "energy"],
    "ft-lb": ["torque", "energy", "unbalance"],
    "lb/in": ["stiffness", "line load", "line density"],
    "lb/in²": ["pressure", "area density"],
    "kg m2": ["moment of inertia", "GD2"],
    "kgf*m^2": ["GD2"],
    "1/min": ["angular velocity", "frequency"],
    "1/s": ["frequency"],
    "mm": ["length"],
    "kJ": ["energy"],
    "%": ["ratio"],
    "": ["ratio", "count"],
}


@pytest.mark.parametrize(("text", "names"), READINGS.items())
def test_all_kinds_that_a_text_can_mean(text: str, names: list[str]) -> None:
    found = readings(text)
    assert [kind.name for kind, _ in found] == names
    assert [size for _, size in found] == [factor(text, kind) for kind, _ in found]


@pytest.mark.parametrize(
    ("text", "reason"), [("ton", "Write t "), ("V", "known unit"), ("m^7", "known kind of quantity")]
)
def test_a_text_without_a_kind_is_refused(text: str, reason: str) -> None:
    with pytest.raises(KindError, match=reason):
        readings(text)


def test_si_units_are_known_as_such() -> None:
    assert is_si("N·m", k.TORQUE)
    assert is_si("J", k.ENERGY)
    assert not is_si("mm", k.LENGTH)


def test_the_memory_of_texts_is_bounded(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(units, "MOST_SEEN", len(k.JERK.spellings) + 3)
    for blanks in range(1, 9):
        assert factor("m/s^3" + " " * blanks, k.JERK) == 1.0
        assert len(k.JERK.seen) <= len(k.JERK.spellings) + 3
    assert factor("mm/s^3", k.JERK) == 0.001


def test_common_units_do_not_load_the_registry() -> None:
    code = (
        "import sys\n"
        "from rigidsheet.udf.units.factors import factor\n"
        "from rigidsheet.udf.units.kinds import TORQUE, LENGTH\n"
        "assert factor('FT.-LBS.', TORQUE) > 1 and 'pint' not in sys.modules\n"
        "assert factor('millimetres', LENGTH) == 0.001 and 'pint' in sys.modules\n"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


NAMES = "m mm kg g lb lbf in ft s min rad deg rpm N Nm kip psi oz sq cu 1 ° % Pascals kN h KG"
SYMBOLS = st.sampled_from(NAMES.split())
JOINTS = st.sampled_from([*"*/ -.·^()[]2³⁻", "^2", "-1", "^-2", " per ", "**3", "+", "'"])
TEXTS = st.lists(SYMBOLS | JOINTS, max_size=9).map("".join) | st.text(max_size=12)


def answer(read: Callable[..., Any], *args: Any) -> Any:
    """Return what is read, or the refusal; any other exception fails the test."""
    try:
        return read(*args)
    except (InputError, KindError) as refusal:
        return refusal


@settings(max_examples=400, deadline=None)
@given(TEXTS, st.sampled_from(KINDS))
def test_any_text_gives_a_positive_factor_or_a_short_refusal(text: str, kind: Kind) -> None:
    size = answer(factor, text, kind)
    found = answer(readings, text)
    if isinstance(size, float):
        assert 0.0 < size < math.inf
        assert (kind, size) in found
        assert canonical(canonical(text)) == canonical(text)
    else:
        assert len(str(size)) < 255
    if isinstance(found, list):
        assert found
        assert all(factor(text, one) == its_size for one, its_size in found)
    else:
        assert len(str(found)) < 255


@settings(max_examples=200, deadline=None)
@given(
    st.lists(
        st.tuples(st.sampled_from(["kg", "mm", "in", "s", "lbf", "deg", "oz"]), st.integers(-3, 3)),
        max_size=4,
    )
)
def test_the_order_of_a_product_and_the_way_to_write_a_power_change_nothing(
    parts: list[tuple[str, int]],
) -> None:
    parts = [(name, power) for name, power in parts if power]
    one = " ".join(f"{name}{power}" for name, power in parts)
    other = "·".join(f"{name}^{power}" for name, power in reversed(parts))
    for kind in KINDS:
        try:
            expected = factor(one, kind)
        except (InputError, KindError) as refusal:
            with pytest.raises(type(refusal)):
                factor(other, kind)
        else:
            assert factor(other, kind) == pytest.approx(expected, rel=1e-14)
