"""Questions in the terminal: which functions there are, and what one formula gives."""

from __future__ import annotations

import shutil
import textwrap
from typing import TYPE_CHECKING, Final

import click

from ..printing import heading, table
from .ending import ERROR, Refused, say

if TYPE_CHECKING:
    from rigidsheet.core.shapes.record import Shape
    from rigidsheet.udf.declaration import Arg, CellFunction, Field

WIDEST: Final = 100


@click.command(short_help="List the cell functions, or show the help of one.")
@click.argument("word", required=False)
def functions(word: str | None) -> None:
    """List the cell functions by group; with a WORD those that speak of it, with a name its full help."""
    from rigidsheet.udf import catalogue

    if word is None:
        _list(list(catalogue.FUNCTIONS.values()))
        return
    exact = catalogue.FUNCTIONS.get(word.strip().lstrip("=").upper())
    if exact is not None:
        _help(exact)
        return
    found = [f for f in catalogue.FUNCTIONS.values() if _speaks_of(f, word.strip().lower())]
    if not found:
        from rigidsheet.udf.reading.words import nearest

        close = nearest(word, catalogue.FUNCTIONS)
        raise Refused(f"no function speaks of {word!r}." + (f" Did you mean {close}?" if close else ""))
    _list(found)


def _speaks_of(f: CellFunction, word: str) -> bool:
    from rigidsheet.udf.compiling import arguments_of

    texts = [f.name, f.group, f.line, f.source, *(field.name for field in f.result.fields)]
    for argument in arguments_of(f):
        texts += [argument.name, argument.help, argument.shape.words()]
    return any(word in text.lower() for text in texts)


def _list(found: list[CellFunction]) -> None:
    for group in dict.fromkeys(f.group for f in found):
        heading(group)
        table(("function", "what it gives"), [(f.name, f.line) for f in found if f.group == group])
        click.echo()
    click.echo("Full help of one: rigidsheet functions " + found[0].name)


def _help(f: CellFunction) -> None:
    from rigidsheet.udf.compiling import arguments_of

    arguments = arguments_of(f)
    names = ", ".join(f"[{a.name}]" if a.optional else a.name for a in arguments)
    heading(f"{f.name}({names})")
    click.echo(f"{f.line}\n")
    heading("Arguments")
    width = max(len(a.name) for a in arguments)
    for a in arguments:
        _wrapped(a.name.ljust(width), _meaning(a))
        if _form(a) not in ("text", a.help):
            _wrapped(" " * width, _form(a))
    click.echo()
    for a in arguments:
        _details(a)
    heading("Result")
    if f.result.open:
        click.echo("  Rows of label, value and unit; among them:")
    table(("result", "unit", "what it is"), [(one.name, _unit(one), one.help) for one in f.result.fields])
    click.echo()
    heading("Source")
    _wrapped("", f.source)
    click.echo()
    heading("Examples")
    for example in f.examples:
        click.echo(f"  {example.formula}")
        _wrapped("   ", example.says)
    click.echo(f"\nA bare number is in the unit named in brackets. Group: {f.group}.")


def _details(argument: Arg) -> None:
    """Print what the lines of a table, of a record or of a list of shapes may be."""
    from rigidsheet.core.shapes import SHAPES
    from rigidsheet.udf.reading.records import Record
    from rigidsheet.udf.reading.sizes import Sizes
    from rigidsheet.udf.reading.tables import Table, header_of

    shape = argument.shape
    if isinstance(shape, Table):
        heading(f"Columns of {argument.name}, in any order")
        lines = [(header_of(c), c.help, c.also) for c in shape.columns]
        if shape.more:
            lines.append(("sizes by label", "as OD [mm], L [mm]: see rigidsheet functions RB_SHAPE", ()))
    elif isinstance(shape, Record) and shape.entries:
        heading(f"Lines of {argument.name}: label, value, unit")
        lines = [(e.label, e.help, e.also) for e in shape.entries]
    elif isinstance(shape, Sizes):
        heading("Shapes, with their sizes")
        lines = [(s.name, f"{_sizes(s)}. {s.datum}", s.aliases) for s in SHAPES.values()]
    else:
        return
    width = max(len(label) for label, _, _ in lines)
    for label, meaning, others in lines:
        also = [word for word in others if word != meaning]
        _wrapped(label.ljust(width), meaning + (f" (also: {', '.join(also)})" if also else ""))
    click.echo()


def _sizes(shape: Shape) -> str:
    """Return the sizes of a shape by their labels, what they may be replaced by behind a slash."""
    words = [
        "/".join([*(o.label for o in size.alternatives), size.label])
        + (" (mean)" if size.help.startswith("mean") else "")
        for size in shape.sizes
    ]
    optional = [f"[{w}]" if s.for_density else w for w, s in zip(words, shape.sizes, strict=True)]
    return ", ".join(optional) if optional else "No size"


def _wrapped(lead: str, text: str) -> None:
    """Print a text beside a lead, wrapped to the terminal."""
    indent = " " * (len(lead) + 4 if lead else 2)
    width = max(60, min(WIDEST, shutil.get_terminal_size((WIDEST, 24)).columns))
    lines = textwrap.wrap(
        text, width, initial_indent=f"  {lead}  " if lead else indent, subsequent_indent=indent
    )
    click.echo("\n".join(lines))


def _form(argument: Arg) -> str:
    form = argument.shape.words()
    return f"{form}, {argument.limit.words}" if argument.limit is not None else form


def _meaning(argument: Arg) -> str:
    if argument.optional and "omitted" not in argument.help:
        return f"{argument.help}; may be left out"
    return argument.help


def _unit(field: Field) -> str:
    from rigidsheet.udf.results import dimensional

    if field.kind is None:
        return ""
    return field.kind.si if dimensional(field.kind) else "-"


@click.command(
    "try", short_help="Work out one formula and show how.", context_settings={"ignore_unknown_options": True}
)
@click.argument("formula")
@click.pass_context
def try_formula(ctx: click.Context, formula: str) -> None:
    """Work out one FORMULA and show how: rigidsheet try 'RB_TORQUE("85 kg*m^2", "40 deg/s^2")'.

    Calls may stand inside one another, an argument in the middle may be left out, and blocks of cells are
    written as {1,2;3,4}: a comma to the right, a semicolon downward. Refused: the reason, and exit code 2.
    """
    from ..trial import tried
    from .showing import shown

    trial = tried(formula)
    final = next((step for step in trial.steps if step.reason == trial.reason), None) if trial.error else None
    for step in trial.steps:
        if step is final:
            continue  # told on standard error, once
        heading(step.name)
        if step.reason:
            click.echo(f"  refused: {step.reason}")
        for line in step.lines:
            click.echo(f"  {line}")
        click.echo()
    for sentence in trial.warnings:
        click.echo(f"Warning: {sentence}")
    if trial.error:
        who = f"{final.name} is refused with" if final is not None else "the formula gives"
        say(f"{who} {trial.error}: {trial.reason}")
        ctx.exit(ERROR)
    if len(trial.rows) == 1 and len(trial.rows[0]) == 1:
        click.echo(f"= {shown(trial.rows[0][0])} {trial.unit}".rstrip())
        return
    for row in _aligned([[shown(value) for value in row] for row in trial.rows]):
        click.echo(f"= {row}")


def _aligned(rows: list[list[str]]) -> list[str]:
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))]
    return [
        " | ".join(text.ljust(width) for text, width in zip(row, widths, strict=True)).rstrip()
        for row in rows
    ]
