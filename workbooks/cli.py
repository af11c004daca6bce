"""The `rigidsheet` command: its groups, and how it ends when something is refused."""

from __future__ import annotations

import contextlib
import os
import sys
from collections.abc import Sequence
from typing import Any

import click

from rigidsheet.core.errors import RigidsheetError

from .commands import asking, hosts, recalculating, starting
from .commands.ending import ERROR, INTERRUPTED, PIPE_CLOSED, say

# A person who works on the code wants to see where it failed.
SHOW_TRACE = "RIGIDSHEET_TRACE"


class Program(click.Group):
    """A group of commands that ends every refusal with one line on standard error and an exit code."""

    def main(
        self,
        args: Sequence[str] | None = None,
        prog_name: str | None = None,
        complete_var: str | None = None,
        standalone_mode: bool = True,
        **extra: Any,
    ) -> Any:
        """Run a command line to its end, and leave the program with its exit code."""
        if not standalone_mode:
            return super().main(args, prog_name, complete_var, standalone_mode=False, **extra)
        _readable_streams()
        code = self._run(args, prog_name, complete_var, **extra)
        try:
            sys.stdout.flush()
        except BrokenPipeError:
            code = _closed_pipe()
        sys.exit(code)

    def _run(
        self, args: Sequence[str] | None, prog_name: str | None, complete_var: str | None, **extra: Any
    ) -> int:
        try:
            code = super().main(args, prog_name, complete_var, standalone_mode=False, **extra)
        except click.ClickException as problem:
            say(problem.format_message())
            return ERROR
        except click.Abort:
            say("stopped")
            return INTERRUPTED
        return code if isinstance(code, int) else 0

    def make_context(
        self, info_name: str | None, args: list[str], parent: click.Context | None = None, **extra: Any
    ) -> click.Context:
        """Read the command line; --help and --version print while it is read."""
        try:
            return super().make_context(info_name, args, parent, **extra)
        except BrokenPipeError:
            raise click.exceptions.Exit(_closed_pipe()) from None

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Return the commands in the order in which a person needs them."""
        return list(self.commands)

    def invoke(self, ctx: click.Context) -> Any:
        """Run the command, and turn whatever it refuses into an exit code."""
        try:
            return super().invoke(ctx)
        except RigidsheetError as refusal:
            say(str(refusal))
            ctx.exit(ERROR)
        except KeyboardInterrupt:
            say("stopped; no file was left half written")
            ctx.exit(INTERRUPTED)
        except BrokenPipeError:
            ctx.exit(_closed_pipe())
        except OSError as problem:
            name = f"{problem.filename}: " if problem.filename else ""
            say(f"{name}{problem.strerror or problem}")
            ctx.exit(ERROR)
        except (click.ClickException, click.exceptions.Exit, click.Abort):
            raise
        except Exception as fault:
            if os.environ.get(SHOW_TRACE):
                raise
            say(
                f"this should not have happened ({type(fault).__name__}: {fault}); set {SHOW_TRACE}=1 to see where"
            )
            ctx.exit(ERROR)


def _readable_streams() -> None:
    """Let a terminal that cannot show a letter show a question mark in its place."""
    for stream in (sys.stdout, sys.stderr):
        with contextlib.suppress(AttributeError, ValueError, OSError):
            stream.reconfigure(errors="replace")  # type: ignore[union-attr]


def _closed_pipe() -> int:
    """Keep the interpreter from complaining at its end that nobody reads the output any more."""
    with contextlib.suppress(OSError, ValueError):
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    return PIPE_CLOSED


@click.group(
    cls=Program,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    no_args_is_help=False,
    invoke_without_command=True,
)
@click.version_option(package_name="rigidsheet", prog_name="rigidsheet", message="%(prog)s %(version)s")
@click.pass_context
def main(ctx: click.Context) -> None:
    """Rigid-body machine design in spreadsheets: units carried, nonsense refused, working shown.

    \b
    Start with        rigidsheet demo
    Your own sheet    rigidsheet recalc FILE
    One formula       rigidsheet try 'RB_TORQUE("85 kg*m^2", "40 deg/s^2")'

    Exit codes: 0 all is well, 1 a check fails, 2 an error or a refusal, 130 stopped by Ctrl-C.
    """
    if ctx.invoked_subcommand is None:
        click.echo(ctx.get_help())


for command in (
    starting.demo,
    starting.templates,
    starting.new,
    recalculating.recalc,
    asking.functions,
    asking.try_formula,
    hosts.excel,
    hosts.calc,
    hosts.pdf,
):
    main.add_command(command)
