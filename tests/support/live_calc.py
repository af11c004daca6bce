"""A private LibreOffice for the tests: own profile, own pipe, ended by its own process id."""

from __future__ import annotations

import json
import os
import shutil
import signal
import subprocess
import threading
import time
import uuid
from collections.abc import Iterator
from contextlib import contextmanager, suppress
from pathlib import Path
from typing import Any

from rigidsheet.core.errors import AbsentError
from rigidsheet.workbooks.office import START_AGAIN, Office, find, private_profile

DRIVER = Path(__file__).with_name("calc_driver.py")
# Calc's number of an error -> the text of the same error everywhere
ERROR_TEXTS = {
    519: "#VALUE!",
    503: "#NUM!",
    32767: "#N/A",
    532: "#DIV/0!",
    524: "#REF!",
    525: "#NAME?",
    521: "#NULL!",
}


def office_python(office: Office) -> str | None:
    """Return a Python that can talk to the office, or None."""
    for name in (office.program / "python", "/usr/bin/python3", shutil.which("python3")):
        if name and Path(name).exists():
            tried = subprocess.run([str(name), "-E", "-c", "import uno"], capture_output=True)
            if tried.returncode == 0:
                return str(name)
    return None


def missing() -> str:
    """Return why no office can be driven here, or an empty text."""
    try:
        office = find()
    except AbsentError as error:
        return str(error)
    if office_python(office) is None:
        return "no Python with `uno` was found (Debian, Ubuntu: apt install python3-uno)"
    return ""


def family(pid: int) -> list[int]:
    """Return every process below one, whichever thread started it."""
    found: list[int] = []
    for folder in Path("/proc").iterdir():
        if folder.name.isdigit():
            try:
                parent = int((folder / "stat").read_text().rpartition(")")[2].split()[1])
            except OSError:
                continue
            if parent == pid:
                found.append(int(folder.name))
    return found


def alive(pid: int) -> bool:
    """Say whether a process is there and not only waiting to be reaped."""
    try:
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0] != "Z"
    except OSError:
        return False


def gone_within(pid: int, seconds: float) -> bool:
    """Wait for the end of a process."""
    end = time.monotonic() + seconds
    while alive(pid):
        if time.monotonic() > end:
            return False
        time.sleep(0.02)
    return True


class LiveCalc:
    """A running private office; its methods are those of the driver."""

    def __init__(self, office: Office, options: list[str], environment: dict[str, str] | None = None) -> None:
        self.pipe = f"rigidsheet{uuid.uuid4().hex}"
        self.command = [
            str(office.soffice),
            "--headless",
            "--norestore",
            "--nologo",
            "--nodefault",
            f"--accept=pipe,name={self.pipe};urp;",
            *options,
        ]
        self.environment = dict(os.environ, **(environment or {}))
        self.process = self._start()
        python = office_python(office)
        assert python is not None
        self.driver = subprocess.Popen(
            [python, "-E", str(DRIVER), self.pipe],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            text=True,
        )
        self._watch = threading.Thread(target=self._start_again, daemon=True)
        self._watch.start()
        if not self._line():
            self.stop()
            raise RuntimeError("the office did not start")

    def _start(self) -> subprocess.Popen[bytes]:
        return subprocess.Popen(
            self.command,
            env=self.environment,
            stdin=subprocess.DEVNULL,
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )

    def _start_again(self) -> None:
        """A fresh profile ends its first start and asks for another."""
        if self.process.wait() == START_AGAIN:
            self.process = self._start()

    def _line(self) -> Any:
        assert self.driver.stdout is not None
        line = self.driver.stdout.readline()
        return None if not line else json.loads(line) or {"ready": True}

    def ask(self, what: str, *arguments: Any) -> Any:
        """Let the driver do one thing."""
        assert self.driver.stdin is not None
        self.driver.stdin.write(json.dumps([what, arguments]) + "\n")
        self.driver.stdin.flush()
        reply = self._line()
        if reply is None:
            raise RuntimeError("the office has gone")
        if "failed" in reply:
            raise RuntimeError(reply["failed"])
        return reply["value"]

    def read(self, doc: int, sheet: int | str, where: str) -> list[list[Any]]:
        """Return cells as numbers, texts, None, or {'error': code}."""
        return [[plain(c) for c in row] for row in self.ask("read", doc, sheet, where)]

    def read_each(self, doc: int, sheet: int | str, places: list[str]) -> list[list[list[Any]]]:
        """Return several blocks of cells."""
        found = self.ask("read_each", doc, sheet, places)
        return [[[plain(c) for c in row] for row in block] for block in found]

    def cell(self, doc: int, sheet: int | str, where: str) -> Any:
        """Return one cell."""
        return self.read(doc, sheet, where)[0][0]

    def workers(self) -> list[int]:
        """Return the worker processes of this office."""
        return family(self.process.pid)

    def stop(self, signal_number: int | None = None) -> int:
        """End the office, by a signal or in the ordinary way, and return its exit code."""
        if signal_number is not None:
            os.kill(self.process.pid, signal_number)
        else:
            with suppress(RuntimeError, OSError):
                self.ask("terminate")
        try:
            code = self.process.wait(20)
        except subprocess.TimeoutExpired:
            os.kill(self.process.pid, signal.SIGKILL)
            code = self.process.wait(10)
        self.release()
        return code

    def release(self) -> None:
        """End the driver and close the line to it."""
        if self.driver.stdin is not None:
            with suppress(OSError):
                self.driver.stdin.close()
        try:
            self.driver.wait(5)
        except subprocess.TimeoutExpired:
            self.driver.kill()
            self.driver.wait()
        if self.driver.stdout is not None:
            self.driver.stdout.close()


def plain(cell: dict[str, Any]) -> Any:
    """Return a cell as number, text, None or error ('Err:504' where no other program has that error)."""
    if "error" in cell:
        return {"error": ERROR_TEXTS.get(cell["error"], f"Err:{cell['error']}")}
    return cell.get("number", cell.get("text"))


@contextmanager
def private_office(environment: dict[str, str] | None = None) -> Iterator[LiveCalc]:
    """Give a running private office with the extension; it is ended and its profile deleted at the end."""
    office = find()
    with private_profile(office) as profile:
        calc = LiveCalc(office, profile.options, environment)
        try:
            yield calc
        finally:
            if calc.process.poll() is None:
                calc.stop()
            calc.release()
