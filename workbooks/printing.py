"""Tables and progress bars: drawn on a terminal, plain text everywhere else."""

from __future__ import annotations

import sys
import threading
import time
from collections.abc import Iterable, Iterator, Sequence
from contextlib import contextmanager
from typing import Any, Final, TextIO, TypeVar

import click

Item = TypeVar("Item")

PATIENCE: Final = 1.0  # seconds of work before a bar is worth drawing
GAP: Final = "  "


def on_terminal(stream: TextIO) -> bool:
    """Say whether a person is looking at the stream."""
    try:
        return stream.isatty()
    except (AttributeError, ValueError):
        return False


def heading(text: str) -> None:
    """Print a heading, bold on a terminal."""
    click.echo(click.style(text, bold=True))


def table(headers: Sequence[str], rows: Sequence[Sequence[str]], *, numbers: Sequence[str] = ()) -> None:
    """Print rows under headers; columns named in `numbers` are set to the right.

    Columns that are blank in every row are left out.
    """
    kept = [i for i in range(len(headers)) if any(row[i] for row in rows)]
    heads = [headers[i] for i in kept]
    lines = [[row[i] for i in kept] for row in rows]
    if on_terminal(sys.stdout):
        _drawn(heads, lines, numbers)
    else:
        _plain(heads, lines, numbers)


def _plain(heads: list[str], lines: list[list[str]], numbers: Sequence[str]) -> None:
    widths = [max(len(line[i]) for line in (heads, *lines)) for i in range(len(heads))]
    for line in (heads, *lines):
        cells = [
            text.rjust(width) if head in numbers else text.ljust(width)
            for text, width, head in zip(line, widths, heads, strict=True)
        ]
        click.echo((GAP + GAP.join(cells)).rstrip())


def _drawn(heads: list[str], lines: list[list[str]], numbers: Sequence[str]) -> None:
    from rich.box import SIMPLE_HEAD
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    grid = Table(box=SIMPLE_HEAD, pad_edge=False)
    for head in heads:
        grid.add_column(head, justify="right" if head in numbers else "left", overflow="fold")
    for line in lines:
        grid.add_row(*(Text(text, style=_STYLES.get(text, "")) for text in line))
    Console().print(grid)


_STYLES: Final = {"OK": "green", "FAIL": "bold red"}


def steps(items: Iterable[Item], total: int, label: str) -> Iterator[Item]:
    """Yield the items; on a terminal draw how far the work has come once it takes more than a second."""
    if not on_terminal(sys.stderr):
        yield from items
        return
    start = time.monotonic()
    bar: Any = None
    task: Any = None
    try:
        for done, item in enumerate(items):
            if bar is not None:
                bar.update(task, completed=done)
            elif (spent := time.monotonic() - start) > PATIENCE / 4 and spent * total > PATIENCE * done:
                bar = _bar(known=True)
                task = bar.add_task(label, total=total, completed=done)
                bar.start()
            yield item
    finally:
        if bar is not None:
            bar.stop()


@contextmanager
def waiting(label: str) -> Iterator[None]:
    """Draw a moving bar on a terminal while one piece of work takes more than a second."""
    if not on_terminal(sys.stderr):
        yield
        return
    bars: list[Any] = []
    over = threading.Event()

    def draw() -> None:
        if over.wait(PATIENCE):
            return
        bar = _bar(known=False)
        bar.add_task(label, total=None)
        bar.start()
        bars.append(bar)

    drawer = threading.Thread(target=draw, daemon=True)
    drawer.start()
    try:
        yield
    finally:
        over.set()
        drawer.join()
        for bar in bars:
            bar.stop()


def _bar(*, known: bool) -> Any:
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    counted = (MofNCompleteColumn(), TimeRemainingColumn()) if known else ()
    return Progress(
        TextColumn("{task.description}", markup=False),
        BarColumn(),
        *counted,
        console=Console(stderr=True),
        transient=True,
        redirect_stdout=False,  # results on standard output go where the person sent them
        redirect_stderr=False,
    )
