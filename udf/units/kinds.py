"""The kinds of quantity: name, SI unit, dimension, common spellings, and refused ones with the remedy."""

from __future__ import annotations

from math import pi
from typing import Final

from ...core.errors import AbsentError
from .kind import Kind as Kind
from .kind import make_kind, selected, times
from .spellings import GRAVITY

_TURN: Final = 2 * pi
_STANDARD_GRAVITY: Final = float(GRAVITY)
_METRIC_FORCES: Final = "N kN MN daN dN cN mN kgf gf kp"
_POUNDS: Final = "lbf lb ozf oz kip"
_TON: Final = "Write t (1000 kg), short_ton or long_ton"
_WEIGHT_FOR_MASS: Final = {"kgf": "Write kg", "lbf": "Write lb", "ozf": "Write oz", "N": "Divide by g first"}
_TURNS_HINT: Final = "Write rad/s, rev/s or rpm: 1/s does not say whether turns or radians are meant"

LENGTH: Final = make_kind(
    "length",
    "m",
    "mm cm dm km um nm in inch inches ft foot feet yd mi thou mil mils uin micron",
    {
        "MM": "Write mm",
        "Mm": "Write mm; a million meters is 1000 km",
        "M": "Write m",
        "Nm": "Nm is a torque; write nm or m",
        "'": "Write ft",
        '"': "Write in",
    },
)
AREA: Final = make_kind("area", "m^2", "mm^2 cm^2 dm^2 in^2 ft^2 yd^2")
VOLUME: Final = make_kind(
    "volume",
    "m^3",
    "mm^3 cm^3 dm^3 l L ml mL cc in^3 ft^3 yd^3",
    {"gal": "Write US_gal or UK_gal"},
)
MASS: Final = make_kind(
    "mass",
    "kg",
    "g mg Mg t tonne lb lbs lbm oz slug slugs slinch short_ton long_ton "
    "lb*s^2/in lb*s^2/ft lbf*s^2/in lbf*s^2/ft kgf*s^2/m N*s^2/m",
    {**_WEIGHT_FOR_MASS, "ton": _TON, "tons": _TON, "G": "Write g", "T": "Write t"},
)
DENSITY: Final = make_kind(
    "density",
    "kg/m^3",
    "g/cm^3 g/cc g/ml kg/dm^3 kg/l kg/L g/l g/mm^3 kg/mm^3 kg/cm^3 t/m^3 lb/in^3 lb/ft^3 lbm/in^3 lbm/ft^3 "
    "pcf pci oz/in^3 slug/ft^3",
)
AREA_DENSITY: Final = make_kind(
    "area density", "kg/m^2", "g/m^2 g/cm^2 kg/mm^2 lb/ft^2 lb/in^2 oz/ft^2 lbm/ft^2"
)
LINE_DENSITY: Final = make_kind("line density", "kg/m", "g/m g/mm kg/mm g/cm lb/ft lb/in oz/ft lbm/ft lbm/in")
TIME: Final = make_kind(
    "time", "s", "ms us sec second seconds min minutes h hr hour hours day", {"S": "Write s"}
)
ANGLE: Final = make_kind(
    "angle",
    "rad",
    "mrad deg ° degree degrees grad gon arcmin arcsec rev turn turns",
    {
        "r": "Write rad or rev",
        "'": "Write arcmin",
        '"': "Write arcsec",
        "1": "Write rad",
        "%": "A slope is not an angle; write deg or rad",
    },
)
VELOCITY: Final = make_kind(
    "velocity",
    "m/s",
    "mm/s cm/s m/min mm/min km/h in/s in/min ft/s ft/min mph kph kmh ips ipm fps fpm",
    {"ms": "Write m/s", "rpm": "Rim speed is rpm times circumference"},
)
ACCELERATION: Final = make_kind(
    "acceleration",
    "m/s^2",
    "mm/s^2 cm/s^2 in/s^2 ft/s^2 gn",
    {"mg": "Write 0.001 g", "m/s": "Write m/s^2"},
    dict.fromkeys(("g", "G"), _STANDARD_GRAVITY),
)
JERK: Final = make_kind(
    "jerk", "m/s^3", "mm/s^3 in/s^3 ft/s^3 gn/s", special=dict.fromkeys(("g/s", "G/s"), _STANDARD_GRAVITY)
)
ANGULAR_VELOCITY: Final = make_kind(
    "angular velocity",
    "rad/s",
    "mrad/s deg/s °/s deg/min rad/min rev/s rev/min rev/h turn/s turns/min rpm rps krpm",
    {
        "1/s": _TURNS_HINT,
        "s^-1": _TURNS_HINT,
        "Hz": "Write rev/s or rad/s: Hz does not say whether turns or radians are meant",
        "1/h": "Write rev/h",
        "h^-1": "Write rev/h",
    },
    {
        **dict.fromkeys(("1/min", "min^-1", "r/min", "U/min", "r*p*m"), _TURN / 60),
        "r/s": _TURN,
    },
)
ANGULAR_ACCELERATION: Final = make_kind(
    "angular acceleration",
    "rad/s^2",
    "mrad/s^2 deg/s^2 °/s^2 rev/s^2 rev/min/s rev/min^2 rpm/s rpm/min",
    dict.fromkeys(("1/s^2", "s^-2"), "Write rad/s^2 or rev/s^2"),
    {"r/min/s": _TURN / 60, "r/s^2": _TURN},
)
FORCE: Final = make_kind(
    "force",
    "N",
    f"{_METRIC_FORCES} tf lbf lb lbs ozf oz kip kips klbf pdl dyn",
    {
        "kg": "kg is a mass; write kgf for its weight, or N",
        "g": "g is a mass; write gf for its weight, or N",
        "t": "t is a mass; write tf for its weight, or kN",
        "ton": "Write tf, kip or kN",
        "tons": "Write tf, kip or kN",
        "tonf": "Write tf, kip or kN",
        "slug": "slug is a mass; write lbf",
    },
)
TORQUE: Final = make_kind(
    "torque",
    "N*m",
    [
        *times(_METRIC_FORCES, "m cm mm"),
        *times(_POUNDS, "ft in"),
        *times("ft in", _POUNDS),
        *[
            "m*N",
            "Nm",
            "Nmm",
            "Ncm",
            "kNm",
            "MNm",
            "daNm",
            "dNm",
            "cNm",
            "mNm",
            "uNm",
            "ftlb",
            "lbft",
            "inlb",
            "lbin",
            "ozin",
        ],
    ],
    {
        "J": "J is energy; write N*m",
        **{
            f"kg{sign}{one}": f"kg is a mass; write kgf*{one}"
            for sign in ("*", "")
            for one in ("m", "cm", "mm")
        },
        "nm": "nm is a length; write Nm or N*m",
        "NM": "Write Nm or N*m",
        "N*m/rad": "Write N*m",
    },
)
_WR2: Final = "For WR2 (weight times radius squared) write lb*ft^2, lb*in^2 or oz*in^2"
_GD2: Final = "GD2 is four times the moment of inertia; convert it with RB_GD2"
_SECOND_MOMENT: Final = "That is a second moment of area; a moment of inertia has mass"
INERTIA: Final = make_kind(
    "moment of inertia",
    "kg*m^2",
    [
        *times("kg g t lb lbm oz slug", "m^2 cm^2 mm^2 ft^2 in^2"),
        *times("lb lbf oz ozf", "in*s^2 ft*s^2 s^2*in s^2*ft"),
        *times("kgf gf N kN", "m*s^2 cm*s^2 mm*s^2"),
        "in*lb*s^2",
        "ft*lb*s^2",
        "Nm*s^2",
        "in*lbf*s^2",
        "ft*lbf*s^2",
    ],
    {
        **dict.fromkeys(("WR^2", "WK^2", "Wr^2", "Wk^2", *times("lbf ozf", "ft^2 in^2")), _WR2),
        **dict.fromkeys(("GD^2", "N*m^2", *times("kgf gf kp", "m^2 cm^2 mm^2")), _GD2),
        **dict.fromkeys(("m^4", "cm^4", "mm^4", "in^4", "ft^4"), _SECOND_MOMENT),
    },
    {
        "kgm^2": 1.0,
        "kgcm^2": 1e-4,
        "kgmm^2": 1e-6,
        "gcm^2": 1e-7,
        "gmm^2": 1e-9,
    },
)
MOMENTUM: Final = make_kind(
    "momentum", "kg*m/s", "N*s kN*s g*m/s lbf*s lb*s lb*ft/s lbm*ft/s slug*ft/s lb*in/s kgf*s ozf*s"
)
ANGULAR_MOMENTUM: Final = make_kind(
    "angular momentum",
    "kg*m^2/s",
    "N*m*s Nm*s N*mm*s g*cm^2/s lb*ft^2/s lb*in^2/s lbf*ft*s lbf*in*s lb*ft*s lb*in*s ft*lb*s in*lb*s "
    "oz*in*s slug*ft^2/s kgf*m*s",
)
ENERGY: Final = make_kind(
    "energy",
    "J",
    [
        *[
            "mJ",
            "kJ",
            "MJ",
            "N*m",
            "Nm",
            "N*mm",
            "kN*m",
            "W*s",
            "Wh",
            "kWh",
            "kgf*m",
            "kg*m^2/s^2",
            "ftlb",
            "inlb",
        ],
        *times("ft in", "lbf lb ozf oz"),
        *times("lbf lb", "ft in"),
    ],
)
POWER: Final = make_kind(
    "power",
    "W",
    "mW kW MW hp PS metric_hp J/s N*m/s Nm/s kgf*m/s ft*lb/s ft*lbf/s ft*lb/min ft*lbf/min in*lb/s "
    "lb*ft/s lbf*ft/s",
)
PRESSURE: Final = make_kind(
    "pressure",
    "Pa",
    "hPa kPa MPa GPa bar mbar atm N/m^2 N/mm^2 N/cm^2 kN/mm^2 kN/m^2 kgf/cm^2 kgf/mm^2 psi ksi Msi psf "
    "lb/in^2 lbf/in^2 lb/ft^2 lbf/ft^2 kip/in^2",
)
STIFFNESS: Final = make_kind(
    "stiffness",
    "N/m",
    "N/mm N/cm N/um kN/m kN/mm MN/m kgf/mm kgf/cm kgf/m lb/in lbf/in lb/ft lbf/ft kip/in kip/ft oz/in",
)
LINE_LOAD: Final = make_kind(
    "line load", "N/m", "N/mm N/cm kN/m kN/mm kgf/m kgf/mm lb/in lbf/in lb/ft lbf/ft kip/in kip/ft"
)
_PER_ANGLE: Final = "Write N*m/rad or N*m/deg"
TORSIONAL_STIFFNESS: Final = make_kind(
    "torsional stiffness",
    "N*m/rad",
    [
        *times("N*m Nm kN*m kNm MN*m N*mm kgf*m", "rad deg ° mrad", "/"),
        *times("lb*in lbf*in in*lb lb*ft lbf*ft ft*lb oz*in", "rad deg", "/"),
        "N*m/arcmin",
    ],
    dict.fromkeys(("N*m", "Nm", "lb*in", "in*lb", "lb*ft", "ft*lb", "lbf*in", "lbf*ft"), _PER_ANGLE),
)
DAMPING: Final = make_kind("damping", "N*s/m", "N*s/mm kN*s/m lb*s/in lbf*s/in lb*s/ft lbf*s/ft kg/s kgf*s/m")
TORSIONAL_DAMPING: Final = make_kind(
    "torsional damping",
    "N*m*s/rad",
    "Nm*s/rad N*m*s/deg Nm*s/deg lb*in*s/rad lbf*in*s/rad lb*ft*s/rad lbf*ft*s/rad Nm/rpm N*m/rpm",
    dict.fromkeys(("N*m*s", "Nm*s", "lb*in*s", "lb*ft*s"), "Write N*m*s/rad"),
)
FREQUENCY: Final = make_kind(
    "frequency",
    "Hz",
    "mHz kHz 1/s s^-1 1/min min^-1 cpm cps",
    {
        "rpm": "60 rpm is 1 Hz; write Hz",
        "rev/s": "rev/s is an angular velocity; write Hz",
        "rad/s": "rad/s is an angular velocity; divide by 2 pi and write Hz",
    },
)
_WEIGHED: Final = {
    "kgf*m^2": 1.0,
    "kgf*cm^2": 1e-4,
    "kgf*mm^2": 1e-6,
    "kp*m^2": 1.0,
    "N*m^2": 1 / _STANDARD_GRAVITY,
    "lbf*ft^2": selected("lb*ft^2", (1, 2, 0, 0)),
    "lbf*in^2": selected("lb*in^2", (1, 2, 0, 0)),
    "kgm^2": 1.0,
    "kgcm^2": 1e-4,
}
# GD2 is a weight times a diameter squared; its number is the mass in kg times the diameter squared.
GD2: Final = make_kind("GD2", "kg*m^2", "kg*cm^2 kg*mm^2 g*cm^2 t*m^2 lb*ft^2 lb*in^2", special=_WEIGHED)
UNBALANCE: Final = make_kind("unbalance", "kg*m", "g*mm g*cm g*m kg*mm oz*in ozm*in lb*in g*in")
SECOND_MOMENT_OF_AREA: Final = make_kind(
    "second moment of area",
    "m^4",
    "mm^4 cm^4 in^4 ft^4",
    {"kg*m^2": "kg*m^2 is a moment of inertia; a second moment of area is in m^4"},
)
RATIO: Final = make_kind("ratio", "", "% percent ‰", special=dict.fromkeys(("", "-", "1"), 1.0))
COUNT: Final = make_kind("count", "", "", special=dict.fromkeys(("", "-", "1", "pc", "pcs", "ea"), 1.0))

# The order is the order of meaning: where a text fits several kinds, the more usual comes first.
KINDS: Final[tuple[Kind, ...]] = (
    LENGTH,
    AREA,
    VOLUME,
    MASS,
    FORCE,
    TIME,
    ANGLE,
    VELOCITY,
    ACCELERATION,
    JERK,
    ANGULAR_VELOCITY,
    ANGULAR_ACCELERATION,
    TORQUE,
    ENERGY,
    POWER,
    INERTIA,
    GD2,
    UNBALANCE,
    MOMENTUM,
    ANGULAR_MOMENTUM,
    DENSITY,
    PRESSURE,
    AREA_DENSITY,
    STIFFNESS,
    LINE_LOAD,
    LINE_DENSITY,
    TORSIONAL_STIFFNESS,
    DAMPING,
    TORSIONAL_DAMPING,
    FREQUENCY,
    SECOND_MOMENT_OF_AREA,
    RATIO,
    COUNT,
)

_BY_NAME: Final = {kind.name.casefold(): kind for kind in KINDS}


def kind_named(name: str) -> Kind:
    """Return the kind with this name; upper and lower case are alike."""
    kind = _BY_NAME.get(" ".join(name.casefold().split()))
    if kind is None:
        raise AbsentError(
            "kind", "the name of a kind of quantity", name, remedy="Such as length, mass, torque"
        )
    return kind
