"""The process that answers the calls of the Calc extension; runs where Rigidsheet is installed.

Frames of four bytes of length and a marshalled body on the original standard input and output. The first
frame goes out: the fingerprint of the functions. Then one reply for each question.
"""

from __future__ import annotations

import ctypes
import marshal
import os
import select
import struct
import sys
import threading
import time
from typing import Any, Final

from ..calling import call
from .host import express, fingerprint, normalise

LENGTH: Final = struct.Struct("<I")
CODEC: Final = 2
WATCH_SECONDS: Final = 0.5


def processors() -> int:
    """Return how many processors this process may use."""
    try:
        return len(os.sched_getaffinity(0))
    except AttributeError:
        return os.cpu_count() or 1


LOOK_SECONDS: Final = 200e-6 if processors() > 1 and hasattr(select, "poll") else 0.0


def leave_with(parent: int) -> None:
    """End this process when the office is gone, which a long computation would not notice by itself."""
    if os.name == "nt":
        kernel: Any = getattr(ctypes, "windll").kernel32  # noqa: B009, only there on Windows
        handle = kernel.OpenProcess(0x00100000, False, parent)  # the right to wait for its end
        if handle:
            kernel.WaitForSingleObject(handle, 0xFFFFFFFF)
            os._exit(0)
        return
    while os.getppid() == parent:
        time.sleep(WATCH_SECONDS)
    os._exit(0)


def own_pipes() -> tuple[int, int]:
    """Return the two pipes to the office, and turn what anything prints to the error output."""
    questions, answers = os.dup(0), os.dup(1)
    os.dup2(2, 1)
    empty = os.open(os.devnull, os.O_RDONLY)
    os.dup2(empty, 0)
    os.close(empty)
    return questions, answers


def send(pipe: int, message: Any) -> None:
    """Write one frame."""
    body = marshal.dumps(message, CODEC)
    rest = memoryview(LENGTH.pack(len(body)) + body)
    while rest:
        rest = rest[os.write(pipe, rest) :]


def answer(question: Any) -> Any:
    """Return what goes back for one question: rows of floats and texts, or the text of an error."""
    name, arguments = question
    return express(call(name, normalise(arguments)))


class Questions:
    """Reads frames from the office."""

    def __init__(self, pipe: int) -> None:
        self.pipe = pipe
        self._poll: Any = None
        if LOOK_SECONDS:
            self._poll = select.poll()
            self._poll.register(pipe, select.POLLIN)

    def next(self) -> Any:
        """Return the next question; EOFError when the office has closed its end."""
        if self._poll is not None:
            poll, until = self._poll.poll, time.monotonic() + LOOK_SECONDS
            while not poll(0) and time.monotonic() < until:
                pass
        data = os.read(self.pipe, 65536)
        while len(data) < LENGTH.size:
            data += self._more(65536)
        (size,) = LENGTH.unpack_from(data)
        missing = LENGTH.size + size - len(data)
        if missing > 0:
            parts = [data]
            while missing > 0:
                parts.append(self._more(missing))
                missing -= len(parts[-1])
            data = b"".join(parts)
        return marshal.loads(memoryview(data)[LENGTH.size :])

    def _more(self, most: int) -> bytes:
        data = os.read(self.pipe, most)
        if not data:
            raise EOFError
        return data


def main() -> int:
    """Answer until the office closes its end."""
    parent = os.getppid()
    threading.Thread(target=leave_with, args=(parent,), daemon=True).start()
    asked, answers = own_pipes()
    questions = Questions(asked)
    try:
        send(answers, fingerprint())
        while True:
            send(answers, answer(questions.next()))
    except (EOFError, BrokenPipeError, OSError):
        return 0


if __name__ == "__main__":
    sys.exit(main())
