"""How commands end: exit codes, and one line on standard error."""

from __future__ import annotations

from typing import Final

import click

CHECK_FAILS: Final = 1
ERROR: Final = 2
INTERRUPTED: Final = 130
PIPE_CLOSED: Final = 141


class Refused(click.ClickException):
    """A command that cannot do what was asked; exit code 1 is kept for checks that fail."""

    exit_code = ERROR


def say(sentence: str) -> None:
    """Print one line on standard error, whatever line breaks the sentence came with."""
    click.echo(f"rigidsheet: {' '.join(sentence.split())}", err=True)
