"""Spreadsheet programs: what Excel needs, the extension for Calc, sheets as PDF."""

from __future__ import annotations

from pathlib import Path

import click

from ..printing import waiting

_PATH = click.Path(path_type=Path)


@click.command(short_help="Write what Excel for Windows needs, with the steps.")
@click.argument("folder", metavar="[DIR]", required=False, type=_PATH, default=Path("rigidsheet-excel"))
def excel(folder: Path) -> None:
    """Write what Excel for Windows needs into DIR: functions, configuration lines, the steps in order.

    A file that is there already is kept; the new one gets a number.
    """
    from ..excel_setup import write_setup

    paths = write_setup(folder)
    for path in paths:
        click.echo(f"Wrote {path}")
    click.echo(f"Open {paths[-1]} and go through the steps.")


@click.group(short_help="Build, install or remove the extension for LibreOffice Calc.")
def calc() -> None:
    """The extension that brings the functions to LibreOffice Calc 7.4 and later."""


@calc.command()
@click.argument("file", metavar="[FILE.oxt]", required=False, type=_PATH)
def build(file: Path | None) -> None:
    """Write the extension for Calc, bound to this Python, here when FILE.oxt is left out."""
    from rigidsheet.udf.calc import build as extension

    target = file if file is not None else Path(extension.FILE_NAME)
    if not target.is_dir() and target.suffix.lower() != ".oxt":
        raise click.BadParameter(f"an extension ends in .oxt; got {target.name}", param_hint="FILE.oxt")
    click.echo(f"Wrote {extension.build(target)}")


@calc.command()
def install() -> None:
    """Build the extension and install it in LibreOffice."""
    from .. import office

    with waiting("Installing the extension"):
        said = office.install()
    click.echo(said)


@calc.command()
def uninstall() -> None:
    """Remove the extension from LibreOffice."""
    from .. import office

    with waiting("Removing the extension"):
        said = office.uninstall()
    click.echo(said)


@click.command(short_help="Print a workbook, recalculated, to PDF.")
@click.argument("file", type=_PATH)
@click.argument("out", required=False, type=_PATH)
def pdf(file: Path, out: Path | None) -> None:
    """Print FILE, recalculated and with its charts, to the PDF file OUT, beside FILE when left out.

    A LibreOffice of its own does it in the background; FILE itself is not changed.
    """
    from .. import office

    with waiting(f"Printing {file.name}"):
        made = office.pdf(file, out)
    click.echo(f"Wrote {made}")
