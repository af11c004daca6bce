"""What a kind of quantity is, and how its table of common spellings is made."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from types import MappingProxyType
from typing import Final

from .spellings import SYMBOLS, Powers, canonical, measures, terms_of

_PINT_NAMES: Final = ("[mass]", "[length]", "[time]")


@dataclass(frozen=True, eq=False)
class Kind:
    """A kind of quantity, compared by identity.

    Parameters
    ----------
    name : str
        The kind as a designer says it, such as "moment of inertia".
    si : str
        Its SI unit in the form that the reader itself reads.
    powers : tuple of int
        Powers of mass, length, time and angle.
    spellings : Mapping[str, float]
        Common canonical spellings and what they multiply by to be SI.
    hints : Mapping[str, str]
        Canonical spellings that are refused for this kind, each with its remedy.
    """

    name: str
    si: str
    powers: Powers
    spellings: Mapping[str, float] = field(repr=False)
    hints: Mapping[str, str] = field(repr=False)
    # Texts as users typed them, each resolved once; `units.factor` fills it and keeps it bounded.
    seen: dict[str, float] = field(init=False, repr=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "seen", dict(self.spellings))

    @property
    def phrase(self) -> str:
        """The name with its article: "a length", "an area"."""
        return f"{'an' if self.name[0] in 'aeiou' else 'a'} {self.name}"

    @property
    def dimension(self) -> Mapping[str, int]:
        """The dimension as pint writes it; pint has no dimension for angles."""
        return {name: power for name, power in zip(_PINT_NAMES, self.powers[:3], strict=True) if power}


def make_kind(
    name: str,
    si: str,
    common: Iterable[str] | str,
    hints: Mapping[str, str] | None = None,
    special: Mapping[str, float] | None = None,
) -> Kind:
    """Return a kind whose common spellings have the factor that its dimension selects.

    `special` holds spellings that mean something else in this kind than symbol by symbol.
    """
    powers = measures(terms_of(si), SYMBOLS.__getitem__)[0].powers if si else (0, 0, 0, 0)
    texts = common.split() if isinstance(common, str) else common
    table: dict[str, float] = {}
    for text in (si, *texts):
        if text:
            table[canonical(text)] = selected(canonical(text), powers)
    table.update(special or {})
    return Kind(name, si, powers, MappingProxyType(table), MappingProxyType(dict(hints or {})))


def selected(unit: str, powers: Powers) -> float:
    """Return the factor of the one reading of a unit with the wanted dimension."""
    [factor] = [m.factor() for m in measures(terms_of(unit), SYMBOLS.__getitem__) if m.powers == powers]
    return factor


def times(left: str, right: str, sign: str = "*") -> list[str]:
    """Return each left text joined with each right text."""
    return [f"{one}{sign}{two}" for one in left.split() for two in right.split()]
