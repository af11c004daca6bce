"""The line between the office and its worker, with a real worker and no office."""

from __future__ import annotations

import os
import signal
import sys
import time
from collections.abc import Iterator
from pathlib import Path

import pytest

from rigidsheet.udf.calc import rigidsheet_channel as channel_module
from rigidsheet.udf.calc.host import fingerprint
from rigidsheet.udf.calc.rigidsheet_channel import Channel, WorkerLost
from rigidsheet.udf.calling import call

COMMAND = [sys.executable, "-E", "-P", "-m", "rigidsheet.udf.calc.worker"]
ARM = ("RB_ARM", ("(0, 0) m", "(3, 4) m"))


@pytest.fixture(params=["polled", "watched"])
def channel(request: pytest.FixtureRequest, monkeypatch: pytest.MonkeyPatch) -> Iterator[Channel]:
    """A line to a worker; `watched` is the way where pipes cannot be polled."""
    if request.param == "watched":
        monkeypatch.setattr(channel_module.select, "poll", None)
        monkeypatch.delattr(channel_module.select, "poll")
    made = Channel(COMMAND, fingerprint(), timeout=20.0)
    yield made
    made.close()


def worker_of(channel: Channel) -> int:
    assert channel.process is not None
    return channel.process.pid


def test_questions_are_answered_in_turn(channel: Channel) -> None:
    assert channel.ask(ARM) == ((3.0, 4.0),)
    assert channel.ask(("RB_KIND", ("kg",))) == (("mass",),)
    assert channel.ask(("RB_KIND", ("furlongs",))) == "#VALUE!"
    assert channel.ask(("RB_NONE", ())) == "#N/A"


def test_long_questions_and_answers_pass(channel: Channel) -> None:
    rows = tuple((float(r), float(2 * r)) for r in range(20_000))
    got = channel.ask(("RB_ARM", ("(0, 0) m", rows)))
    assert [list(r) for r in got] == call("RB_ARM", ["(0, 0) m", [list(r) for r in rows]])


def test_a_dead_worker_is_replaced(channel: Channel) -> None:
    channel.ask(ARM)
    first = worker_of(channel)
    os.kill(first, signal.SIGKILL)
    time.sleep(0.05)
    assert channel.ask(ARM) == ((3.0, 4.0),)
    assert worker_of(channel) != first


def test_a_silent_worker_is_ended(channel: Channel) -> None:
    channel.ask(ARM)
    channel.timeout = 0.4
    first = worker_of(channel)
    os.kill(first, signal.SIGSTOP)
    with pytest.raises(WorkerLost, match=r"did not answer within 0\.4 s"):
        channel.ask(ARM)
    with pytest.raises(ProcessLookupError):
        os.kill(first, 0)
    channel.timeout = 20.0
    assert channel.ask(ARM) == ((3.0, 4.0),)


def test_a_missing_interpreter_is_named(tmp_path: Path) -> None:
    line = Channel([str(tmp_path / "nobody")], fingerprint())
    with pytest.raises(WorkerLost, match="nobody"):
        line.ask(ARM)
    start = time.monotonic()
    with pytest.raises(WorkerLost, match="nobody"):
        line.ask(ARM)
    assert time.monotonic() - start < 0.1, "a sheet full of formulas must not try again for each"


def test_what_a_worker_said_before_it_died_is_told() -> None:
    line = Channel([sys.executable, "-c", "raise SystemExit('no numbers today')"], fingerprint())
    with pytest.raises(WorkerLost, match="no numbers today"):
        line.ask(ARM)


def test_another_version_is_refused() -> None:
    line = Channel(COMMAND, "something else")
    with pytest.raises(WorkerLost, match="other functions than this extension"):
        line.ask(ARM)
    assert line.process is None


def test_the_environment_of_the_office_stays_there(monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("PYTHONHOME", "PYTHONPATH", "URE_BOOTSTRAP", "UNO_PATH", "LD_LIBRARY_PATH"):
        monkeypatch.setenv(name, "/somewhere")
    monkeypatch.setenv("KEPT", "yes")
    environment = channel_module.clean_environment()
    assert environment["KEPT"] == "yes"
    assert "/somewhere" not in environment.values()
