"""The worker process of the extension: its death, its silence, its absence, and the end of the office."""

from __future__ import annotations

import os
import signal
import sys
import time
from pathlib import Path

import pytest
from live_calc import LiveCalc, alive, gone_within, private_office

pytestmark = [pytest.mark.live, pytest.mark.usefixtures("office_here")]

VALUE = {"error": "#VALUE!"}


def sheet(calc: LiveCalc) -> int:
    """Open a document with a call that answers 3 m in mm, and the question why it might not."""
    doc: int = calc.ask("new")
    calc.ask(
        "put",
        doc,
        0,
        {"A1": 3, "B1": "m", "A2": '=RB_CONVERT(A1:B1,"mm")', "A3": '=RB_WHY("RB_CONVERT",A1:B1,"mm")'},
    )
    return doc


def test_a_killed_worker_is_replaced_unnoticed(calc: LiveCalc) -> None:
    doc = sheet(calc)
    assert calc.cell(doc, 0, "A2") == 3000.0
    (worker,) = calc.workers()
    os.kill(worker, signal.SIGKILL)
    assert gone_within(worker, 2.0)
    calc.ask("put", doc, 0, {"A1": 4})
    assert calc.cell(doc, 0, "A2") == 4000.0
    (second,) = calc.workers()
    assert second != worker
    assert not Path(f"/proc/{worker}").exists(), "the dead worker was not reaped"
    calc.ask("close", doc)


def test_a_worker_that_hangs_gives_an_error_with_a_reason_and_is_replaced() -> None:
    with private_office({"RIGIDSHEET_TIMEOUT": "0.7"}) as calc:
        doc = sheet(calc)
        assert calc.cell(doc, 0, "A2") == 3000.0
        (worker,) = calc.workers()
        os.kill(worker, signal.SIGSTOP)
        start = time.monotonic()
        calc.ask("put", doc, 0, {"A1": 4})
        assert calc.cell(doc, 0, "A2") == VALUE
        assert time.monotonic() - start < 3.0
        assert not alive(worker)
        assert "did not answer within 0.7 s" in calc.cell(doc, 0, "A3")
        calc.ask("put", doc, 0, {"A1": 5})
        assert calc.cell(doc, 0, "A2") == 5000.0
        assert calc.cell(doc, 0, "A3") == "Not refused: the call has an answer."
        # the same call that was lost is answered when it is asked again
        calc.ask("put", doc, 0, {"A1": 4})
        assert calc.cell(doc, 0, "A2") == 4000.0
        assert calc.cell(doc, 0, "A3") == "Not refused: the call has an answer."


def interpreter(path: Path, body: str) -> str:
    """Write a program that stands for the interpreter of the worker."""
    path.write_text(f"#!{sys.executable}\n{body}\n")
    path.chmod(0o755)
    return str(path)


DIES_ON_A_NUMBER = """
import os, sys
from rigidsheet.udf.calc import worker
ordinary = worker.answer
def answer(question):
    if question[0] == "RB_CONVERT" and question[1][0][0][0] == 13.0:
        os._exit(7)
    return ordinary(question)
worker.answer = answer
sys.exit(worker.main())
"""

NOISY = """
import os, sys
from rigidsheet.udf.calc import worker
ordinary = worker.answer
def answer(question):
    print("noise")
    sys.stdout.flush()
    os.system("echo more noise")
    assert sys.stdin.read() == ""
    return ordinary(question)
worker.answer = answer
sys.exit(worker.main())
"""


def test_a_call_that_kills_the_worker_is_an_error_and_the_next_call_works(tmp_path: Path) -> None:
    program = interpreter(tmp_path / "python", DIES_ON_A_NUMBER)
    with private_office({"RIGIDSHEET_PYTHON": program}) as calc:
        doc = sheet(calc)
        assert calc.cell(doc, 0, "A2") == 3000.0
        calc.ask("put", doc, 0, {"A1": 13})
        assert calc.cell(doc, 0, "A2") == VALUE
        assert "exit code 7" in calc.cell(doc, 0, "A3")
        calc.ask("put", doc, 0, {"A4": "=SUM(A1:A2)", "A5": "=IFERROR(A2,-1)"})
        assert calc.cell(doc, 0, "A4") == VALUE
        assert calc.cell(doc, 0, "A5") == -1.0
        calc.ask("put", doc, 0, {"A1": 14})
        assert calc.cell(doc, 0, "A2") == 14000.0


def test_what_a_library_prints_does_not_reach_the_office(tmp_path: Path) -> None:
    program = interpreter(tmp_path / "python", NOISY)
    with private_office({"RIGIDSHEET_PYTHON": program}) as calc:
        doc = sheet(calc)
        assert calc.cell(doc, 0, "A2") == 3000.0


@pytest.mark.parametrize(
    ("body", "reason"),
    [
        (None, "cannot be started"),
        ("import no_such_module_here", "No module named 'no_such_module_here'"),
        ("print('hello')", "did not start"),
    ],
)
def test_a_missing_worker_gives_an_error_with_the_reason(
    tmp_path: Path, body: str | None, reason: str
) -> None:
    program = str(tmp_path / "absent")
    if body is not None:
        program = interpreter(tmp_path / "python", body)
    with private_office({"RIGIDSHEET_PYTHON": program}) as calc:
        doc = sheet(calc)
        assert calc.cell(doc, 0, "A2") == VALUE
        said = calc.cell(doc, 0, "A3")
        assert reason in said
        assert "rigidsheet calc install" in said
        assert calc.workers() == []


def test_other_functions_than_the_extension_knows_are_refused(tmp_path: Path) -> None:
    body = """
import sys
from rigidsheet.udf.calc import worker
worker.fingerprint = lambda: "another"
sys.exit(worker.main())
"""
    with private_office({"RIGIDSHEET_PYTHON": interpreter(tmp_path / "python", body)}) as calc:
        doc = sheet(calc)
        assert calc.cell(doc, 0, "A2") == VALUE
        assert "other functions than this extension" in calc.cell(doc, 0, "A3")


@pytest.mark.parametrize("how", [None, signal.SIGTERM, signal.SIGKILL])
def test_no_worker_outlives_the_office(how: int | None) -> None:
    with private_office() as calc:
        doc = sheet(calc)
        assert calc.cell(doc, 0, "A2") == 3000.0
        (worker,) = calc.workers()
        code = calc.stop(how)
        assert code == 0 or how is not None
        assert gone_within(worker, 3.0)


def test_a_worker_busy_in_a_function_does_not_outlive_a_killed_office(tmp_path: Path) -> None:
    busy = tmp_path / "busy"
    body = f"""
import pathlib, sys, time
from rigidsheet.udf.calc import worker
def answer(question):
    pathlib.Path({str(busy)!r}).touch()
    while True:
        time.sleep(0.01)
worker.answer = answer
sys.exit(worker.main())
"""
    with private_office({"RIGIDSHEET_PYTHON": interpreter(tmp_path / "python", body)}) as calc:
        doc: int = calc.ask("new")
        assert calc.driver.stdin is not None
        calc.driver.stdin.write(f'["put", [{doc}, 0, {{"A1": "=RB_KIND(\\"m\\")"}}]]\n')
        calc.driver.stdin.write(f'["read", [{doc}, 0, "A1"]]\n')
        calc.driver.stdin.flush()
        end = time.monotonic() + 10
        while not busy.exists():
            assert time.monotonic() < end
            time.sleep(0.02)
        (worker,) = calc.workers()
        os.kill(calc.process.pid, signal.SIGKILL)
        assert gone_within(worker, 3.0)
