"""Many load cases at once: when one process would take long, every processor gets its share."""

from __future__ import annotations

import gc
import multiprocessing
import os
import signal
import time
from collections.abc import Iterator, Mapping
from concurrent.futures import ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from contextlib import contextmanager
from typing import Final

from .cases import Answer, Cases, Row, Table
from .errors import FileRefused

TRIAL: Final = 1.0  # seconds after which the rest is estimated
WORTH: Final = 4.0  # seconds of remaining work for which starting processes pays
MOST: Final = 16  # processes
SHARE: Final = 20  # load cases that a process takes at a time

_mine: Cases | None = None


def answers(cases: Cases) -> Iterator[Answer]:
    """Yield the answers of all load cases in their order, the same whatever process worked them out."""
    rows = cases.table.rows
    start = time.monotonic()
    for done, row in enumerate(rows):
        spent = time.monotonic() - start
        if done and spent > TRIAL and processors() > 1 and spent / done * (len(rows) - done) > WORTH:
            yield from _shared(cases, rows[done:])
            return
        yield cases.answer(row)


def processors() -> int:
    """Return how many processors this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def _shared(cases: Cases, rows: tuple[Row, ...]) -> Iterator[Answer]:
    shares = [rows[i : i + SHARE] for i in range(0, len(rows), SHARE)]
    pool = ProcessPoolExecutor(
        min(processors(), MOST, len(shares)),
        multiprocessing.get_context("spawn"),  # the engine must not be copied in the middle of its work
        _begin,
        (cases.data, cases.table, dict(cases.inputs)),
    )
    try:
        with _started_deaf():
            found = pool.map(_work, shares)
        for share in found:
            yield from share
    except BrokenProcessPool:
        raise FileRefused(
            "a process ended before its load cases were worked out", remedy="Run it again with fewer cases"
        ) from None
    finally:
        pool.shutdown(wait=True, cancel_futures=True)


@contextmanager
def _started_deaf() -> Iterator[None]:
    """Hold Ctrl-C back while processes start: they inherit that, and this one gets it afterwards."""
    if not hasattr(signal, "pthread_sigmask"):
        yield
        return
    before = signal.pthread_sigmask(signal.SIG_BLOCK, [signal.SIGINT])
    try:
        yield
    finally:
        signal.pthread_sigmask(signal.SIG_SETMASK, before)


def _begin(data: bytes, table: Table, inputs: Mapping[str, object]) -> None:
    """Load the workbook in a process of its own, which leaves Ctrl-C to the one that started it."""
    global _mine
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    gc.disable()  # as in the process that started it: there are no cycles to find
    _mine = Cases(data, table, inputs)


def _work(rows: tuple[Row, ...]) -> list[Answer]:
    assert _mine is not None
    return [_mine.answer(row) for row in rows]
