"""Starting: the demo, the list of templates, a new sheet from one of them."""

from __future__ import annotations

import os
import tempfile
from pathlib import Path
from typing import TYPE_CHECKING

import click

from ..printing import steps, table
from .ending import Refused

if TYPE_CHECKING:
    from ..recalc import Recalculation
    from ..templates import Template

DEMO_FOLDER = "rigidsheet-demo"


@click.command(short_help="Write every template, filled in, and show what it says.")
@click.option("--to", "folder", metavar="DIR", type=click.Path(path_type=Path), help="Folder for the files.")
@click.option("--force", is_flag=True, help="Write over files that are there already.")
def demo(folder: Path | None, force: bool) -> None:
    """Write every template, filled in for one packing line, recalculate it and show what it says.

    Without --to a new folder rigidsheet-demo is made here.
    """
    from ..templates import TEMPLATES

    if not TEMPLATES:
        raise Refused("this installation has no templates")
    target = folder if folder is not None else _free_folder(Path(DEMO_FOLDER))
    files = {name: target / f"{name}.xlsx" for name in TEMPLATES}
    for path in files.values():
        _may_write(path, force)
    target.mkdir(parents=True, exist_ok=True)
    from .showing import show_report

    written = steps(list(files), len(files), "Writing the demo")
    results = {name: make(TEMPLATES[name], files[name], blank=False) for name in written}
    for name, result in results.items():
        show_report(f"{TEMPLATES[name].title}: {files[name]}", result)
        click.echo()
    click.echo(f"The files are in {target.resolve()}")
    click.echo(f"Change an input and run: rigidsheet recalc {next(iter(files.values()))}")
    wrong = [
        f"{files[name].name}: {failure}" for name, result in results.items() for failure in result.errors
    ]
    if wrong:
        raise Refused(wrong[0] + (f" (and {len(wrong) - 1} more)" if len(wrong) > 1 else ""))


@click.command(short_help="List the templates.")
def templates() -> None:
    """List the templates that `new` can start from."""
    from ..templates import TEMPLATES

    table(("template", "title", "what it answers"), [(t.name, t.title, t.line) for t in TEMPLATES.values()])


@click.command(short_help="Start a workbook from a template.")
@click.argument("template")
@click.argument("file", required=False, type=click.Path(path_type=Path))
@click.option("--blank", is_flag=True, help="Leave the cells that you fill in empty.")
@click.option("--force", is_flag=True, help="Write over a file that is there already.")
def new(template: str, file: Path | None, blank: bool, force: bool) -> None:
    """Write the TEMPLATE as a new workbook FILE, here under its own name when FILE is left out.

    A file that is there already is kept unless --force is given.
    """
    from ..templates import TEMPLATES

    chosen = TEMPLATES.get(template.strip().lower().removesuffix(".xlsx"))
    if chosen is None:
        raise click.BadParameter(_unknown(template, list(TEMPLATES)), param_hint="TEMPLATE")
    target = workbook_path(file if file is not None else Path(), chosen.name)
    _may_write(target, force)
    result = make(chosen, target, blank=blank)
    waiting = len([failure for failure in result.errors if failure.source is None])
    click.echo(f"Wrote {target}")
    if blank and waiting:
        click.echo(f"{waiting} cells wait for your inputs; fill them in and run: rigidsheet recalc {target}")


def make(template: Template, target: Path, *, blank: bool) -> Recalculation:
    """Write a template with its values worked out; the file appears whole or not at all."""
    from ..recalc import recalculate

    if not target.parent.is_dir():
        raise Refused(f"there is no folder {target.parent}")
    with tempfile.TemporaryDirectory(prefix="rigidsheet-") as folder:
        draft = Path(folder) / target.name
        template.write(draft, blank)
        return recalculate(draft, to=target)


def workbook_path(file: Path, name: str) -> Path:
    """Return where a new workbook goes: into a folder under `name`, always ending in .xlsx."""
    if file.is_dir() or str(file).endswith(("/", os.sep)):
        return file / f"{name}.xlsx"
    if file.suffix.lower() not in ("", ".xlsx"):
        raise click.BadParameter(f"a workbook ends in .xlsx; got {file.name}", param_hint="FILE")
    return file if file.suffix else file.with_name(f"{file.name}.xlsx")


def _may_write(path: Path, force: bool) -> None:
    if path.exists() and not force:
        raise Refused(f"{path} is there already; name another file, or add --force to replace it")


def _free_folder(folder: Path) -> Path:
    """Return the folder, or the first numbered one that does not exist: an older demo is kept."""
    number = 1
    found = folder
    while found.exists():
        number += 1
        found = folder.with_name(f"{folder.name}-{number}")
    return found


def _unknown(name: str, known: list[str]) -> str:
    import difflib

    close = difflib.get_close_matches(name, known, n=1)
    tail = f"Did you mean {close[0]}?" if close else f"There are: {', '.join(known) or 'none'}."
    return f"there is no template {name!r}. {tail}"
