"""The line from the office to the worker process: starting it, asking it, and surviving its end.

Runs in the Python of the office (3.8 or later, standard library only).
"""

from __future__ import annotations

import marshal
import os
import select
import struct
import subprocess
import tempfile
import threading
import time
from typing import Any

LENGTH = struct.Struct("<I")
LARGEST = 1 << 28  # bytes of one reply; anything above is not a reply
CODEC = 2  # marshal format that every Python 3 reads and writes
REST = 3.0  # seconds without a new start after repeated failures
FAILURES = 3
START_SECONDS = 30.0


class WorkerLost(Exception):
    """The worker could not answer: it is missing, it died, or it did not answer in time."""


def processors() -> int:
    """Return how many processors this process may use."""
    try:
        return len(os.sched_getaffinity(0))
    except AttributeError:
        return os.cpu_count() or 1


# Waking a sleeping process costs more than a typical answer, so both sides look for a while before they
# sleep. With one processor the one that looks would only keep the other from working.
LOOK_SECONDS = 200e-6 if processors() > 1 and hasattr(select, "poll") else 0.0


def clean_environment() -> dict[str, str]:
    """Return the environment without what the office sets for its own Python and libraries."""
    return {
        k: v
        for k, v in os.environ.items()
        if not k.startswith(("PYTHON", "URE_", "UNO_")) and k not in ("LD_LIBRARY_PATH", "DYLD_LIBRARY_PATH")
    }


class Channel:
    """One worker process, started when first asked and again after its end.

    Parameters
    ----------
    command : list of str
        The program to start and its arguments.
    fingerprint : str
        What the worker must report about its functions; another value means another version.
    timeout : float
        Seconds to wait for one answer.
    """

    def __init__(self, command: list[str], fingerprint: str, timeout: float = 60.0) -> None:
        self.command = command
        self.fingerprint = fingerprint
        self.timeout = timeout
        self.process: subprocess.Popen[bytes] | None = None
        self._lock = threading.Lock()
        self._failures = 0
        self._rest_until = 0.0
        self._last_loss = ""
        self._reader = self._writer = -1
        self._poll: Any = None
        self._errors: Any = None

    def ask(self, question: tuple[Any, ...]) -> Any:
        """Return the worker's answer; WorkerLost with the reason when there is none."""
        body = marshal.dumps(question, CODEC)
        frame = LENGTH.pack(len(body)) + body
        with self._lock:
            # A worker that had died since the last call is replaced without the user noticing. One that
            # dies of this very question is not given the question again.
            while True:
                fresh = self.process is None
                if fresh:
                    self._start()
                try:
                    answer = self._exchange(frame)
                except TimeoutError:
                    self._end()
                    raise self._lost(f"did not answer within {self.timeout:g} s and was ended") from None
                except (OSError, EOFError, ValueError):
                    ended = self._end()
                    if fresh:
                        raise self._lost(f"ended while it worked on this ({ended})") from None
                    continue
                self._failures = 0
                return answer

    def _lost(self, what: str) -> WorkerLost:
        self._failures += 1
        self._last_loss = f"The worker process {what}. It is started again with the next call."
        if self._failures >= FAILURES:
            self._rest_until = time.monotonic() + REST
        return WorkerLost(self._last_loss)

    def _start(self) -> None:
        if time.monotonic() < self._rest_until:
            raise WorkerLost(self._last_loss)
        self._errors = tempfile.TemporaryFile()  # noqa: SIM115, open as long as the worker
        options: dict[str, Any] = {}
        if os.name == "nt":
            options["creationflags"] = 0x08000000  # no console window
        else:
            options["start_new_session"] = True  # Ctrl-C in a terminal is meant for the office alone
        try:
            self.process = subprocess.Popen(
                self.command,
                stdin=subprocess.PIPE,
                stdout=subprocess.PIPE,
                stderr=self._errors,
                env=clean_environment(),
                cwd=tempfile.gettempdir(),
                bufsize=0,
                **options,
            )
        except (OSError, ValueError) as error:
            self._errors.close()
            self._rest_until = time.monotonic() + REST
            self._last_loss = (
                f"The worker process cannot be started: {self.command[0]}: {error}. "
                "Run `rigidsheet calc install` again where Rigidsheet is installed."
            )
            raise WorkerLost(self._last_loss) from None
        assert self.process.stdin is not None
        assert self.process.stdout is not None
        self._reader, self._writer = self.process.stdout.fileno(), self.process.stdin.fileno()
        self._poll = None
        if hasattr(select, "poll"):
            self._poll = select.poll()
            self._poll.register(self._reader, select.POLLIN)
        self._greet()

    def _greet(self) -> None:
        """Wait for the worker's first frame, which says which functions it has."""
        try:
            fingerprint = self._receive(START_SECONDS)
        except (OSError, EOFError, ValueError, TimeoutError):
            said = self._said()
            ended = self._end()
            self._rest_until = time.monotonic() + REST
            self._last_loss = (
                f"The worker process did not start ({ended}){': ' + said if said else ''}. "
                "Run `rigidsheet calc install` again where Rigidsheet is installed."
            )
            raise WorkerLost(self._last_loss) from None
        if fingerprint != self.fingerprint:
            self._end()
            self._rest_until = time.monotonic() + REST
            self._last_loss = (
                "The installed Rigidsheet has other functions than this extension. "
                "Run `rigidsheet calc install` again and restart the office."
            )
            raise WorkerLost(self._last_loss)

    def _said(self) -> str:
        """Return the last line the worker wrote to its error output."""
        try:
            self._errors.seek(0)
            lines = self._errors.read()[-2000:].decode("utf-8", "replace").strip().splitlines()
        except (OSError, ValueError):
            return ""
        return lines[-1].rstrip(".")[:160] if lines else ""

    def _end(self) -> str:
        """End the worker and return how it ended."""
        process, self.process = self.process, None
        if process is None:
            return "not started"
        for pipe in (process.stdin, process.stdout):
            try:
                if pipe is not None:
                    pipe.close()
            except OSError:
                pass
        try:
            process.wait(0.2)
            told = f"exit code {process.returncode}"
        except subprocess.TimeoutExpired:
            process.kill()
            process.wait()
            told = "ended by the office"
        self._errors.close()
        return told

    def close(self) -> None:
        """End the worker."""
        with self._lock:
            self._end()

    def _exchange(self, frame: bytes) -> Any:
        rest = memoryview(frame)
        while rest:
            rest = rest[os.write(self._writer, rest) :]
        return self._receive(self.timeout)

    def _receive(self, seconds: float) -> Any:
        if self._poll is None:
            return self._receive_watched(seconds)
        end = time.monotonic() + seconds
        if LOOK_SECONDS:
            poll, until = self._poll.poll, time.monotonic() + LOOK_SECONDS
            while not poll(0) and time.monotonic() < until:
                pass
        first = self._read(65536, end)
        while len(first) < LENGTH.size:
            first += self._read(65536, end)
        (size,) = LENGTH.unpack_from(first)
        if size > LARGEST:
            raise ValueError("not a reply")
        if len(first) < LENGTH.size + size:
            parts, missing = [first], LENGTH.size + size - len(first)
            while missing > 0:
                parts.append(self._read(missing, end))
                missing -= len(parts[-1])
            first = b"".join(parts)
        return marshal.loads(memoryview(first)[LENGTH.size :])

    def _read(self, most: int, end: float) -> bytes:
        if not self._poll.poll(max(0.0, (end - time.monotonic()) * 1000.0)):
            raise TimeoutError
        data = os.read(self._reader, most)
        if not data:
            raise EOFError
        return data

    def _receive_watched(self, seconds: float) -> Any:
        """Receive where pipes cannot be polled: a timer ends a worker that does not answer."""
        late = threading.Event()
        process = self.process
        assert process is not None

        def give_up() -> None:
            late.set()
            process.kill()

        timer = threading.Timer(seconds, give_up)
        timer.daemon = True
        timer.start()
        try:
            (size,) = LENGTH.unpack(self._read_exactly(LENGTH.size))
            if size > LARGEST:
                raise ValueError("not a reply")
            return marshal.loads(self._read_exactly(size))
        except (OSError, EOFError, ValueError):
            if late.is_set():
                raise TimeoutError from None
            raise
        finally:
            timer.cancel()

    def _read_exactly(self, size: int) -> bytes:
        parts = b""
        while len(parts) < size:
            data = os.read(self._reader, size - len(parts))
            if not data:
                raise EOFError
            parts += data
        return parts
