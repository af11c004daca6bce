"""Recalculating workbooks: inputs set, results and checks shown, values written into the file."""

from __future__ import annotations

import json
import os
from contextlib import nullcontext
from pathlib import Path
from typing import TYPE_CHECKING

import click

from rigidsheet.core.errors import RigidsheetError

from ..printing import steps, waiting
from .ending import CHECK_FAILS, ERROR, Refused, say

if TYPE_CHECKING:
    from ..cases import Answer
    from ..recalc import Recalculation

_PATH = click.Path(path_type=Path)


@click.command(short_help="Recalculate workbooks and report results and checks.")
@click.argument("files", metavar="FILE...", nargs=-1, required=True, type=_PATH)
@click.option(
    "--set",
    "settings",
    metavar="NAME=VALUE",
    multiple=True,
    help="Set an input cell first, by name or as Sheet!B3: --set arm='400 mm' is converted to the unit beside"
    " the cell. It stays set in the file. May be given several times.",
)
@click.option(
    "--to", metavar="FILE", type=_PATH, help="Write there and leave FILE as it is. May be a folder."
)
@click.option("--no-write", is_flag=True, help="Only report; write nothing.")
@click.option("--json", "as_json", is_flag=True, help="Print one JSON document in place of tables.")
@click.option(
    "--cases",
    metavar="FILE",
    type=_PATH,
    help="A CSV with one row of inputs for each load case; prints one row of results for each. A header is a"
    " name or Sheet!B3, with a unit if need be: arm [mm]. The workbook stays as it is; --to takes a .csv.",
)
@click.pass_context
def recalc(
    ctx: click.Context,
    files: tuple[Path, ...],
    settings: tuple[str, ...],
    to: Path | None,
    no_write: bool,
    as_json: bool,
    cases: Path | None,
) -> None:
    """Recalculate each FILE (.xlsx or .xlsm) and write the values into it.

    Exit code 0 when every check holds, 1 when one fails, 2 for a cell with an error, an unknown function or
    a file that can't be read.
    """
    inputs = settings_read(settings)
    if no_write and to is not None:
        raise click.UsageError("--no-write and --to exclude each other")
    if cases is not None:
        if as_json or no_write:
            raise click.UsageError(
                "--cases prints a CSV and writes no workbook; leave --json and --no-write out"
            )
        ctx.exit(_cases(files, cases, inputs, to))
    ctx.exit(_files(files, targets(files, to), inputs, write=not no_write, as_json=as_json))


def _files(
    files: tuple[Path, ...],
    outputs: list[Path | None],
    inputs: dict[str, str],
    *,
    write: bool,
    as_json: bool,
) -> int:
    alone = len(files) == 1
    pairs = steps(zip(files, outputs, strict=True), len(files), "Recalculating")
    done = [(file, _recalculated(file, output, inputs, write=write, alone=alone)) for file, output in pairs]
    if as_json:
        from .showing import document, refusal

        entries = [
            refusal(str(file), found) if isinstance(found, str) else document(str(file), found, _code(found))
            for file, found in done
        ]
        click.echo(json.dumps({"files": entries}, indent=2, allow_nan=False))
    for number, (file, found) in enumerate(done):
        if isinstance(found, str):
            say(found)
        else:
            _report(file, found, shown=not as_json, first=number == 0)
    return max(ERROR if isinstance(found, str) else _code(found) for _, found in done)


def _recalculated(
    file: Path, output: Path | None, inputs: dict[str, str], *, write: bool, alone: bool
) -> Recalculation | str:
    """Return the recalculated workbook, or the sentence that refuses it: the other files still get done."""
    from ..recalc import recalculate

    try:
        with waiting(f"Recalculating {file.name}") if alone else nullcontext():
            return recalculate(file, inputs=inputs, to=output, write=write)
    except (RigidsheetError, OSError) as refusal:
        return _located(file, refusal)


def _report(file: Path, result: Recalculation, *, shown: bool, first: bool) -> None:
    from .showing import complaint, show_report

    if shown:
        if not first:
            click.echo()
        show_report(_title(file, result), result)
    if sentence := complaint(result):
        say(f"{file.name}: {sentence}")


def _title(file: Path, result: Recalculation) -> str:
    if result.path is None:
        return f"{file}: recalculated, not written"
    if os.path.realpath(result.path) != os.path.realpath(file):
        return f"{file}: recalculated, written to {result.path}"
    return f"{file}: recalculated, {'values written' if result.changed else 'nothing to change'}"


def _code(result: Recalculation) -> int:
    if result.errors:
        return ERROR
    return 0 if result.holds else CHECK_FAILS


def _located(file: Path, refusal: RigidsheetError | OSError) -> str:
    text = str(refusal) if isinstance(refusal, RigidsheetError) else str(refusal.strerror or refusal)
    return text if file.name in text else f"{file.name}: {text}"


def settings_read(settings: tuple[str, ...]) -> dict[str, str]:
    """Return NAME=VALUE texts as a mapping; a sheet name in quotes may hold an equals sign."""
    inputs: dict[str, str] = {}
    for text in settings:
        start = text.find("'!", 1) if text.startswith("'") else 0
        at = text.find("=", max(start, 0))
        name, value = text[:at].strip(), text[at + 1 :].strip()
        if at < 0 or not name or not value:
            raise click.BadParameter(f"write NAME=VALUE, like arm='400 mm'; got {text!r}", param_hint="--set")
        if name.lower() in (known.lower() for known in inputs):
            raise click.BadParameter(f"{name} is set twice; leave one out", param_hint="--set")
        inputs[name] = value
    return inputs


def targets(files: tuple[Path, ...], to: Path | None) -> list[Path | None]:
    """Return where each file is written; None for the file itself."""
    if to is None:
        return [None] * len(files)
    if to.is_dir():
        names = [file.name.lower() for file in files]
        twice = next((name for name in names if names.count(name) > 1), None)
        if twice is not None:
            raise click.BadParameter(f"two files called {twice} cannot go into one folder", param_hint="--to")
        return [to / file.name for file in files]
    if len(files) > 1:
        raise click.BadParameter(f"several files need a folder that exists; got {to}", param_hint="--to")
    kinds = {file.suffix.lower() for file in (files[0], to)}
    if len(kinds) > 1:  # a macro workbook under the other ending is refused by spreadsheet programs
        raise click.BadParameter(
            f"the new file must end in {files[0].suffix}; got {to.name}", param_hint="--to"
        )
    return [to]


def _cases(files: tuple[Path, ...], cases: Path, inputs: dict[str, str], to: Path | None) -> int:
    from .. import case_workers
    from .. import cases as load_cases
    from .showing import counted

    if len(files) != 1:
        raise click.UsageError("--cases takes one workbook")
    if to is not None:
        _case_target(to, (files[0], cases))
    table = load_cases.read(cases)
    with load_cases.opened(files[0], table, inputs) as run:
        answers = list(steps(case_workers.answers(run), len(table.rows), "Load cases"))
    text = load_cases.as_csv(answers)
    if to is None:
        click.echo(text, nl=False)
    else:
        load_cases.save(text, to)
        click.echo(f"{counted(len(answers), 'case')} written to {to}")
    return _case_verdict(answers)


def _case_verdict(answers: list[Answer]) -> int:
    """Say on standard error what is wrong with the cases, and return the exit code."""
    from .showing import counted

    total = counted(len(answers), "case")
    wrong = [answer for answer in answers if answer.error]
    failing = [answer for answer in answers if answer.fails]
    if wrong:
        say(f"{len(wrong)} of {total} with an error, first {wrong[0].case}: {wrong[0].error}")
        return ERROR
    if failing:
        say(f"{len(failing)} of {total} with a failing check, first {failing[0].case}: {failing[0].fails[0]}")
        return CHECK_FAILS
    return 0


def _case_target(to: Path, read: tuple[Path, Path]) -> None:
    if to.is_dir() or to.suffix.lower() != ".csv":
        raise click.BadParameter(f"results of cases go to a .csv file; got {to.name}", param_hint="--to")
    if os.path.realpath(to) in (os.path.realpath(file) for file in read):
        raise Refused(f"{to} is read in this run; name another file for the results")
