"""Bodies: the roll-up of a parts list, plates by outline, and turning a whole body."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ...core.body import combine_arrays, inertia_about
from ...core.tensors import offset_tensor
from .. import kinds
from ..arguments import Vector
from ..bodies import MOMENTS
from ..body_terms import BodyTerms, body_fields
from ..declaration import WHAT, Arg, CellFunction, Example, Field, Form, Result
from ..parts import PARTS, read_parts
from ..working import num, tensor_rows, vec

GROUP = "Mass"
DYNAMICS = "Meriam, Kraige: Dynamics, appendix B (mass moments of inertia)"
AT_CENTER, AT_ORIGIN = "mass center", "origin"


def is_center(about: Any) -> bool:
    return about is None or (isinstance(about, str) and about == AT_CENTER)


def rolled_up(data: Any, about: Any) -> BodyTerms:
    """Sum a parts list; the tensor is about the mass center or about the point `about`."""
    parts = read_parts("parts", data)
    body = combine_arrays(parts.masses, parts.centers, parts.inertias)
    if is_center(about):
        point, tensor = body.center, body.inertia
    else:
        point = np.zeros(3) if isinstance(about, str) else about
        tensor = inertia_about(body, point)
    table = Contributions(parts, point, tensor, body.mass)
    problem = (
        ""
        if is_center(about)
        else "one result when `about` is given: a body's record is about its mass center"
    )
    return BodyTerms(body.mass, body.center, tensor, table, record_problem=problem)


@dataclass(frozen=True, eq=False, slots=True)
class Contributions:
    """What each part adds to the mass and to the moments of inertia about a point; a table when looked at."""

    parts: Any
    point: Any
    tensor: Any
    mass: float

    def tensors(self) -> Any:
        """Return the tensor of each part about the point."""
        return self.parts.inertias + offset_tensor(self.parts.masses, self.parts.centers - self.point)

    def __iter__(self) -> Any:
        yield [
            "part",
            "mass [kg]",
            "of mass",
            *(f"{k} [kg*m^2]" for k in MOMENTS),
            *(f"of {k}" for k in MOMENTS),
        ]
        moments = np.diagonal(self.tensors(), axis1=1, axis2=2)
        whole = np.diagonal(self.tensor)
        shares = np.divide(moments, whole, out=np.zeros_like(moments), where=whole > 0.0)
        for name, m, own, share in zip(self.parts.names, self.parts.masses, moments, shares, strict=True):
            yield [name, m, m / self.mass, *own, *share]
        yield ["whole body", self.mass, 1.0, *whole, *(1.0 if w > 0.0 else 0.0 for w in whole)]


def rollup_working(values: tuple[Any, ...], answer: BodyTerms) -> list[str]:
    parts, point = answer.contributions.parts, answer.contributions.point
    tensors = answer.contributions.tensors()
    lines = [
        "Roll-up: m = sum m_i, m r_G = sum m_i r_i, I = sum (I_i + m_i ((d.d) E - d d^T)), d from the point"
    ]
    most = 40
    for name, m, c, t in list(zip(parts.names, parts.masses, parts.centers, tensors, strict=True))[:most]:
        lines.append(
            f"{name[:40]}: m = {num(m)} kg at {vec(c)} m; Ixx, Iyy, Izz about the point = "
            f"{', '.join(num(t[k, k]) for k in range(3))} kg*m^2"
        )
    if len(parts.names) > most:
        lines.append(f"... and {len(parts.names) - most} more rows")
    return [
        *lines,
        f"m = {num(answer.mass)} kg; mass center = {vec(answer.center)} m",
        f"Tensor about {vec(point)} m{' (the mass center)' if is_center(values[1]) else ''}, sheet axes:",
        *tensor_rows(answer.inertia),
        f"Residual: sum m_i (r_i - r_G) = "
        f"{vec((parts.masses[:, None] * (parts.centers - answer.center)).sum(axis=0))} kg*m",
    ]


FUNCTIONS = (
    CellFunction(
        name="RB_ROLLUP",
        group=GROUP,
        line="Mass, mass center and inertia tensor of a parts list with shapes, turns, cut-outs and patterns.",
        args=(
            Arg("parts", PARTS, "table with a header row; one part a row"),
            WHAT,
            Arg(
                "about",
                Vector(kinds.LENGTH, words_for=(AT_CENTER, AT_ORIGIN)),
                "point of the tensor; the mass center when omitted",
                default=None,
            ),
        ),
        result=Result(
            (
                *body_fields("mass center", "tensor about the point"),
                Field("contributions", None, "what each part adds", Form.TABLE, in_record=False),
            ),
        ),
        kernel=rolled_up,
        working=rollup_working,
        source=f"{DYNAMICS}, composite bodies",
        examples=(
            Example(
                '=RB_ROLLUP(B4:K12, "mass", , "kg")',
                "Mass of the tilting table with its bin from the parts list in B4:K12.",
            ),
        ),
    ),
)
