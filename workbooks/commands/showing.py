"""What a recalculated workbook says, for a person and for a program."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from rigidsheet.udf.cells import CellError, Value
from rigidsheet.udf.working import num

from ..errors import address
from ..printing import heading, table
from .ending import ERROR

if TYPE_CHECKING:
    from ..recalc import Recalculation
    from ..report import Check


def shown(value: Value) -> str:
    """Return a value as text: numbers to six digits."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    if isinstance(value, CellError):
        return value.text
    return num(value) if isinstance(value, float) else value


def show_report(title: str, result: Recalculation) -> None:
    """Print results, checks, warnings and errors of one workbook."""
    heading(title)
    verdicts = {(check.sheet, check.cell) for check in result.checks}
    rows = [
        (one.name, shown(one.value), one.unit, address(one.sheet, one.cell))
        for one in result.results
        if (one.sheet, one.cell) not in verdicts and not one.checks and one.value != ""
    ]
    if rows:
        table(("result", "value", "unit", "cell"), rows, numbers=("value",))
    if result.checks:
        click.echo()
        _show_checks(result.checks)
    if result.warnings:
        click.echo()
        table(("warning", "what it is about"), [(one.kind, one.sentence) for one in result.warnings])
    if result.errors:
        click.echo()
        cells = [(address(one.sheet, one.cell), one.error, one.reason) for one in result.errors]
        table(("cell", "error", "reason"), cells)
    click.echo()
    click.echo("  " + summary(result))


def _show_checks(checks: tuple[Check, ...]) -> None:
    rows = [
        (
            one.name,
            one.verdict,
            united(one.demand, one.demand_unit),
            united(one.capacity, one.capacity_unit),
            shown(one.margin),
            address(one.sheet, one.cell),
        )
        for one in checks
    ]
    heads = ("check", "verdict", "demand", "capacity", "margin", "cell")
    table(heads, rows, numbers=("demand", "capacity", "margin"))


def united(value: Value, unit: str) -> str:
    """Return a number with the unit that it was given in."""
    return f"{shown(value)} {unit}".rstrip()


def summary(result: Recalculation) -> str:
    """Return the verdict on a workbook in one sentence."""
    if result.errors:
        return f"{counted(len(result.errors), 'cell')} with an error; nothing can be signed off."
    failing = [check for check in result.checks if check.verdict != "OK"]
    if failing and len(result.checks) == 1:
        return "The one check fails."
    if failing:
        return f"{len(failing)} of {counted(len(result.checks), 'check')} fail."
    if not result.checks:
        return "No errors; the workbook has no checks."
    return "The one check holds." if len(result.checks) == 1 else f"All {len(result.checks)} checks hold."


def counted(number: int, word: str) -> str:
    """Return '1 cell' or '3 cells'."""
    return f"{number} {word}" if number == 1 else f"{number} {word}s"


def complaint(result: Recalculation) -> str:
    """Return the one line that standard error gets about a workbook, empty when all is well."""
    if result.errors:
        first = next((one for one in result.errors if one.source is None), result.errors[0])
        return str(first) + _and_more(len(result.errors) - 1, "cell")
    failing = [check for check in result.checks if check.verdict != "OK"]
    if not failing:
        return ""
    first_check = failing[0]
    numbers = [
        f"{word} {united(value, getattr(first_check, f'{word}_unit', ''))}"
        for word in ("demand", "capacity", "margin")
        if (value := getattr(first_check, word)) is not None
    ]
    where = address(first_check.sheet, first_check.cell)
    text = f"{where} says {first_check.verdict}: {first_check.name}"
    return text + (f" ({', '.join(numbers)})" if numbers else "") + _and_more(len(failing) - 1, "check")


def _and_more(number: int, word: str) -> str:
    return f" (and {counted(number, 'more ' + word)})" if number else ""


def document(file: str, result: Recalculation, code: int) -> dict[str, Any]:
    """Return what a program reads: values, results, checks, errors and warnings of one workbook."""
    return {
        "file": file,
        "written": str(result.path) if result.path is not None else None,
        "changed": result.changed,
        "holds": result.holds,
        "exit_code": code,
        "values": {address(*cell): plain(value) for cell, value in result.values.items()},
        "results": [
            {
                "name": one.name,
                "value": plain(one.value),
                "unit": one.unit,
                "cell": address(one.sheet, one.cell),
            }
            for one in result.results
        ],
        "checks": [
            {
                "name": one.name,
                "verdict": one.verdict,
                "demand": plain(one.demand),
                "demand_unit": one.demand_unit,
                "capacity": plain(one.capacity),
                "capacity_unit": one.capacity_unit,
                "margin": plain(one.margin),
                "cell": address(one.sheet, one.cell),
            }
            for one in result.checks
        ],
        "errors": [
            {
                "cell": address(one.sheet, one.cell),
                "error": one.error,
                "reason": one.reason,
                "formula": f"={one.formula}",
                "source": address(*one.source) if one.source is not None else None,
            }
            for one in result.errors
        ],
        "warnings": [
            {
                "kind": one.kind,
                "sentence": one.sentence,
                "cells": [address(*cell) for cell in one.cells],
            }
            for one in result.warnings
        ],
    }


def refusal(file: str, sentence: str) -> dict[str, Any]:
    """Return what a program reads about a file that was refused."""
    return {"file": file, "written": None, "refused": sentence, "holds": False, "exit_code": ERROR}


def plain(value: Value) -> Any:
    """Return a cell's value as JSON has it; an error as an object that says which."""
    return {"error": value.text} if isinstance(value, CellError) else value
