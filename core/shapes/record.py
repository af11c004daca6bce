"""What a shape is: one row of sizes, words and bare formulas."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Literal, TypeAlias

import numpy as np
from numpy.typing import NDArray

Array: TypeAlias = NDArray[np.float64]
# Canonical label -> value [m] or [rad]; a column of shapes has columns of sizes.
Sizes: TypeAlias = Mapping[str, Array]


@dataclass(frozen=True, slots=True)
class Alternative:
    """Another way to give a size, like the diameter for the radius.

    Parameters
    ----------
    label : str
        What is typed, like D.
    help : str
        What it means.
    times : float
        The size is this many times the typed value [-].
    aliases : tuple of str
        Other spellings of the label.
    """

    label: str
    help: str
    times: float
    aliases: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Size:
    """One size of a shape.

    Parameters
    ----------
    label : str
        What is typed and what the formulas call it.
    help : str
        What it means, and along which axis.
    aliases : tuple of str
        Other spellings of the same size.
    alternatives : tuple of Alternative
        Other sizes that give this one.
    kind : {"length", "angle"}
        Length [m] or angle [rad].
    sign : {"positive", "not negative", "any"}
        Which values make sense.
    for_density : bool
        Asked only to get the mass from a density: the thickness of a thin plate or shell, the diameter of
        a rod or wire. It does not enter the tensor.
    """

    label: str
    help: str
    aliases: tuple[str, ...] = ()
    alternatives: tuple[Alternative, ...] = ()
    kind: Literal["length", "angle"] = "length"
    sign: Literal["positive", "not negative", "any"] = "positive"
    for_density: bool = False


@dataclass(frozen=True, slots=True)
class Way:
    """A set of sizes that is enough, and how the others follow from it.

    Parameters
    ----------
    labels : tuple of str
        The sizes that are given.
    complete : callable
        Takes the given sizes, returns the sizes that follow.
    """

    labels: tuple[str, ...]
    complete: Callable[[Sizes], dict[str, Array]] = lambda sizes: {}


@dataclass(frozen=True, slots=True)
class Rule:
    """What the sizes of one shape owe each other.

    Parameters
    ----------
    text : str
        The rule as a sentence.
    holds : callable
        Takes all sizes, returns where the rule holds.
    """

    text: str
    holds: Callable[[Sizes], NDArray[np.bool_]]


@dataclass(frozen=True, slots=True)
class Shape:
    """One shape: its sizes, where its datum is, and its formulas per unit mass.

    Parameters
    ----------
    name : str
        Plain name, the key in SHAPES.
    sizes : tuple of Size
        Sizes by label.
    dimension : {"solid", "plate", "shell", "line", "point"}
        What `measure` is: volume [m^3], area [m^2] (plate, shell), length [m], or nothing (point, 1).
    datum : str
        Where the datum is and how the axes lie.
    working : tuple of str
        The formulas in symbols: measure, mass center, terms of the tensor about the mass center.
    source : str
        Where the formulas are published.
    measure : callable
        Sizes -> volume, area or length, shape (...).
    center : callable
        Sizes -> mass center seen from the datum [m], shape (..., 3).
    unit_tensor : callable
        Sizes -> tensor about the mass center per unit mass [m^2], shape (..., 3, 3), tensor form.
    rules : tuple of Rule
        What the sizes owe each other.
    ways : tuple of Way
        Sets of sizes that are enough; empty: all that are not `for_density`.
    aliases : tuple of str
        Other names of the shape.
    """

    name: str
    sizes: tuple[Size, ...]
    dimension: Literal["solid", "plate", "shell", "line", "point"]
    datum: str
    working: tuple[str, ...]
    source: str
    measure: Callable[[Sizes], Array]
    center: Callable[[Sizes], Array]
    unit_tensor: Callable[[Sizes], Array]
    rules: tuple[Rule, ...] = ()
    ways: tuple[Way, ...] = ()
    aliases: tuple[str, ...] = ()

    def problem(self, sizes: Sizes) -> str | None:
        """Return the first broken rule as a sentence, with the row if the sizes are columns, or None."""
        for rule in self.rules:
            held = np.atleast_1d(rule.holds(sizes))
            if not held.all():
                where = f" (row {int(np.argmin(held)) + 1})" if held.size > 1 else ""
                return rule.text + where
        return None

    def needed(self) -> tuple[Way, ...]:
        """Return the sets of sizes that are enough."""
        return self.ways or (Way(tuple(size.label for size in self.sizes if not size.for_density)),)

    def section(self) -> Size | None:
        """Return the thickness or wire diameter that a mass from density asks for, if there is one."""
        return next((size for size in self.sizes if size.for_density), None)
