"""Many load cases at once: when one process would take long, every processor gets its share."""

from __future__ import annotations

import gc
import multiprocessing
import os
import signal
import time
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from multiprocessing.connection import Connection
from multiprocessing.context import SpawnProcess
from typing import Final

from .cases import Answer, Cases, Row, Table
from .errors import FileRefused

TRIAL: Final = 1.0  # seconds after which the rest is estimated
WORTH: Final = 4.0  # seconds of remaining work for which starting processes pays
MOST: Final = 16  # processes
SHARE: Final = 20  # load cases that a process takes at a time


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
    """Yield the answers of rows that several processes work out, each its own shares in turn."""
    shares = [rows[i : i + SHARE] for i in range(0, len(rows), SHARE)]
    count = min(processors(), MOST, len(shares))
    workers: list[tuple[SpawnProcess, Connection]] = []
    try:
        with _started_deaf():
            for k in range(count):
                workers.append(_started(cases, shares[k::count]))
        for i in range(len(shares)):
            yield from _received(workers[i % count][1])
    finally:
        # Whatever happened, nobody is waited for: a killed process holds nothing that could be half done.
        for process, answered in workers:
            process.kill()
            process.join()
            answered.close()


def _started(cases: Cases, shares: list[tuple[Row, ...]]) -> tuple[SpawnProcess, Connection]:
    # The engine must not be copied in the middle of its work: a new process, not a fork.
    context = multiprocessing.get_context("spawn")
    answered, told = context.Pipe(duplex=False)
    arguments = (told, cases.data, cases.table, dict(cases.inputs), shares)
    process = context.Process(target=_work, args=arguments, daemon=True)
    process.start()
    told.close()
    return process, answered


def _received(answered: Connection) -> list[Answer]:
    """Return the answers of the next share, or raise what went wrong in the process that owes it."""
    try:
        found: list[Answer] | Exception = answered.recv()
    except EOFError:
        raise FileRefused(
            "a process ended before its load cases were worked out", remedy="Run it again with fewer cases"
        ) from None
    if isinstance(found, Exception):
        raise found
    return found


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


def _work(
    told: Connection, data: bytes, table: Table, inputs: Mapping[str, object], shares: list[tuple[Row, ...]]
) -> None:
    """Work shares out in a process of its own, which leaves Ctrl-C to the one that started it."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    gc.disable()  # as in the process that started it: there are no cycles to find
    try:
        mine = Cases(data, table, inputs)
        for rows in shares:
            told.send([mine.answer(row) for row in rows])
    except Exception as problem:  # worded and raised by the process that asked
        told.send(problem)
