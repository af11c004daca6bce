"""What the sheets share: places of values, units on offer, cautions, the printed page."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

from openpyxl.utils import get_column_letter

from rigidsheet.udf.limits import Limit

# What the unit cells offer, most usual first; each can be typed over with any unit of the kind.
UNITS: Final[Mapping[str, tuple[str, ...]]] = {
    "length": ("mm", "cm", "m", "in", "ft"),
    "mass": ("kg", "g", "t", "lb"),
    "density": ("kg/m^3", "g/cm^3", "lb/in^3", "lb/ft^3"),
    "time": ("s", "ms", "min"),
    "angle": ("deg", "rad"),
    "velocity": ("m/s", "mm/s", "m/min", "ft/s", "in/s"),
    "acceleration": ("m/s^2", "mm/s^2", "g", "ft/s^2"),
    "angular velocity": ("rad/s", "deg/s", "rpm"),
    "angular acceleration": ("rad/s^2", "deg/s^2"),
    "force": ("N", "kN", "lbf", "kip"),
    "torque": ("N*m", "kN*m", "lbf*ft", "lbf*in"),
    "energy": ("J", "kJ", "ft*lbf"),
    "power": ("W", "kW", "hp"),
    "pressure": ("Pa", "kPa", "bar", "psi"),
    "moment of inertia": ("kg*m^2", "kg*mm^2", "lb*ft^2", "lb*in^2"),
    "stiffness": ("N/m", "N/mm", "lbf/in"),
}
CAUTIONS: Final = (
    "Results are as good as the model: rigid bodies, loads as entered.",
    "Stored energy, gravity and pinch points hurt people: secure the machine before you work on it.",
    "Machine-safety law, local codes and a licensed or competent engineer decide; this sheet does not.",
)
FIELDS: Final = ("Drawing", "Revision", "Date", "By", "Checked")
# Printable size that both A4 and Letter have inside the margins, in mm: width, height of a portrait page.
PRINTABLE: Final = (186.0, 250.0)
MARGIN_SIDE, MARGIN_TOP, MARGIN_FOOT = 12.0, 12.0, 16.0  # mm
LONGEST_LIST: Final = 255  # characters that a list of words inside a validation can have


def list_of(words: Sequence[str]) -> str:
    """Return words as the list of a validation, in which a comma parts them; refuse what it cannot hold."""
    for word in words:
        if word != word.strip() or not word or "," in word or '"' in word:
            raise ValueError(f"{word!r} must be a word without comma, quotation mark and blanks at its ends")
    text = ",".join(words)
    if len(text) > LONGEST_LIST:
        raise ValueError(
            f"a list must have up to {LONGEST_LIST} characters; got {len(text)} ({text[:40]}...)"
        )
    return f'"{text}"'


def outside(ref: str, limit: Limit | None) -> str:
    """Return the formula that is true for a number outside a limit; empty when every number is within."""
    if limit is None or limit.nonzero:
        return f"AND(ISNUMBER({ref}),{ref}=0)" if limit is not None else ""
    sides = [
        f"{ref}{sign}{bound:g}"
        for sign, bound in (("<=" if limit.low_open else "<", limit.low), (">", limit.high))
        if abs(bound) != float("inf")
    ]
    return f"AND(ISNUMBER({ref}),OR({','.join(sides)}))"


def pixels(digits: float) -> int:
    """Return the width on screen of a column of so many digits of the standard type."""
    return int(digits * 7.0 + 5.0)


def millimeters(digits: float) -> float:
    """Return the printed width of a column at full size."""
    return pixels(digits) * 25.4 / 96.0


@dataclass(frozen=True, slots=True)
class Place:
    """A value cell with its unit cell and its number in SI."""

    sheet: str
    row: int
    value_column: int
    unit_column: int
    si_column: int

    def _at(self, column: int) -> str:
        return f"{self.sheet}!${get_column_letter(column)}${self.row}"

    @property
    def ref(self) -> str:
        return self._at(self.value_column)

    @property
    def unit(self) -> str:
        return self._at(self.unit_column)

    @property
    def pair(self) -> str:
        return f"{self.ref}:${get_column_letter(self.unit_column)}${self.row}"

    @property
    def si(self) -> str:
        return self._at(self.si_column)
