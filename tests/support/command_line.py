"""Runs the command inside the test, or as a process of its own."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

from click.testing import CliRunner, Result

from rigidsheet.workbooks.cli import main

START = "from rigidsheet.workbooks.cli import main; main(prog_name='rigidsheet')"


def run(*arguments: object) -> Result:
    """Run a command line in this process."""
    return CliRunner().invoke(main, [str(one) for one in arguments])


def refused(*arguments: object, code: int = 2) -> str:
    """Run a command line that must fail, and return its one line on standard error."""
    result = run(*arguments)
    assert result.exit_code == code, (result.output, result.stderr)
    lines = result.stderr.splitlines()
    assert len(lines) == 1, result.stderr
    assert lines[0].startswith("rigidsheet: ")
    assert "Traceback" not in result.stderr
    return lines[0].removeprefix("rigidsheet: ")


def process(
    *arguments: object, folder: Path | None = None, **more: object
) -> subprocess.CompletedProcess[str]:
    """Run a command line as a process of its own."""
    command = [sys.executable, "-c", START, *(str(one) for one in arguments)]
    return subprocess.run(command, capture_output=True, text=True, cwd=folder, timeout=120, **more)  # type: ignore[call-overload,no-any-return]
