"""Shapes by name: mass, mass center and inertia tensor from labelled sizes.

One convention for all: the axis of revolution, or the length of a bar of given section, is along z; flat
plates lie in the x-y plane; boxes have length, width and height along x, y and z. The datum is the center
where a shape has one, else the middle of its base or a corner; each row says which.
"""

from __future__ import annotations

from .record import Alternative, Rule, Shape, Size, Way
from .resolve import (
    ShapeBody,
    complete_sizes,
    shape_body,
    shape_mass,
    shape_named,
    shape_problem,
    size_labelled,
)
from .table import SHAPES

__all__ = [
    "SHAPES",
    "Alternative",
    "Rule",
    "Shape",
    "ShapeBody",
    "Size",
    "Way",
    "complete_sizes",
    "shape_body",
    "shape_mass",
    "shape_named",
    "shape_problem",
    "size_labelled",
]
