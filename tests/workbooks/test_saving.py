"""The file on disk is the old one or the new one, whole, whatever happens."""

from __future__ import annotations

import os
import random
import signal
import stat
import subprocess
import sys
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import workbook_parts as parts

from rigidsheet.workbooks import recalculate
from rigidsheet.workbooks.errors import FileChanged, FileRefused
from rigidsheet.workbooks.files import saving

BOOK = parts.workbook({"S": {"A1": "=1+1", "B1": "=RB_X()"}})


def with_value(value: float) -> dict[str, Callable[..., Any]]:
    return {"RB_X": lambda: value}


@pytest.fixture
def path(tmp_path: Path) -> Path:
    file = tmp_path / "book.xlsx"
    file.write_bytes(BOOK)
    return file


def test_the_second_run_does_not_touch_the_file(path: Path) -> None:
    first = recalculate(path, functions=with_value(5.0))
    assert first.changed
    assert first.path == path
    assert path.read_bytes() == first.package
    os.utime(path, ns=(10**18, 10**18))
    before = path.stat()
    second = recalculate(path, functions=with_value(5.0))
    after = path.stat()
    assert not second.changed
    assert (after.st_mtime_ns, after.st_ino) == (before.st_mtime_ns, before.st_ino)


def test_another_file_can_be_written_and_the_source_stays(path: Path, tmp_path: Path) -> None:
    target = tmp_path / "out.xlsx"
    result = recalculate(path, to=target, functions=with_value(5.0))
    assert path.read_bytes() == BOOK
    assert target.read_bytes() == result.package
    from_bytes = recalculate(BOOK, to=str(target), functions=with_value(6.0))
    assert target.read_bytes() == from_bytes.package != result.package
    assert recalculate(BOOK, functions=with_value(6.0)).path is None
    with pytest.raises(FileRefused, match="no path to write to"):
        recalculate(BOOK, write=True, functions=with_value(6.0))


def test_nothing_is_written_when_not_asked(path: Path) -> None:
    result = recalculate(path, write=False, functions=with_value(5.0))
    assert result.changed
    assert result.values["S", "B1"] == 5.0
    assert path.read_bytes() == BOOK


def test_permissions_and_symbolic_links_stay(path: Path, tmp_path: Path) -> None:
    path.chmod(0o640)
    link = tmp_path / "link.xlsx"
    link.symlink_to(path)
    recalculate(link, functions=with_value(5.0))
    assert link.is_symlink()
    assert path.read_bytes() != BOOK
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_a_read_only_file_is_refused(path: Path) -> None:
    path.chmod(0o444)
    with pytest.raises(FileRefused, match="read-only"):
        recalculate(path, functions=with_value(5.0))
    assert path.read_bytes() == BOOK


@pytest.mark.parametrize(
    ("name", "reason"),
    [("missing.xlsx", "no such file"), (".", "folder"), ("nowhere/x.xlsx", "no such file")],
)
def test_a_file_that_cannot_be_read_is_refused(name: str, reason: str, tmp_path: Path) -> None:
    with pytest.raises(FileRefused, match=reason):
        recalculate(tmp_path / name, functions={})


def test_a_target_that_cannot_be_written_is_refused(path: Path, tmp_path: Path) -> None:
    for target in (tmp_path / "no" / "out.xlsx", tmp_path):
        with pytest.raises(FileRefused, match=r"folder cannot be written to|not an ordinary file"):
            recalculate(path, to=target, functions=with_value(5.0))


def test_a_file_open_in_a_program_that_locks_it_is_refused(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def locked(*_: object) -> None:
        raise PermissionError(13, "The process cannot access the file")

    monkeypatch.setattr(os, "replace", locked)
    with pytest.raises(FileRefused, match="Close it in the spreadsheet program"):
        recalculate(path, functions=with_value(5.0))
    assert path.read_bytes() == BOOK
    assert [p.name for p in path.parent.iterdir()] == [path.name]


@pytest.mark.parametrize("change", ["content", "removed", "touched"])
def test_a_file_changed_meanwhile_is_not_overwritten(path: Path, change: str) -> None:
    other = parts.workbook({"S": {"A1": "=2+2"}})

    def meanwhile() -> float:
        if change == "content":
            path.write_bytes(other)
        elif change == "removed":
            path.unlink()
        else:
            os.utime(path, ns=(10**18, 10**18))
        return 1.0

    with pytest.raises(FileChanged, match=r"changed while it was being recalculated.*book\.xlsx"):
        recalculate(path, functions={"RB_X": meanwhile})
    if change != "removed":
        assert path.read_bytes() == (other if change == "content" else BOOK)
    assert all(p.suffix == ".xlsx" for p in path.parent.iterdir())


def test_a_full_disk_leaves_the_old_file(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", full)
    with pytest.raises(FileRefused, match="No space left on device"):
        recalculate(path, functions=with_value(5.0))
    assert path.read_bytes() == BOOK
    assert [p.name for p in path.parent.iterdir()] == [path.name]


WRITER = """
import sys
from rigidsheet.workbooks import recalculate
value = float(sys.argv[2])
while True:
    value += 1.0
    recalculate(sys.argv[1], functions={"RB_X": lambda: value})
    sys.stdout.write(f"{value}\\n")
    sys.stdout.flush()
"""


@pytest.mark.skipif(sys.platform == "win32", reason="ends the writer with a POSIX signal")
def test_a_writer_killed_at_any_moment_leaves_a_whole_file(tmp_path: Path) -> None:
    path = tmp_path / "book.xlsx"
    filler = {"xl/media/image1.bin": bytes(random.Random(7).randbytes(2_000_000))}
    path.write_bytes(parts.workbook({"S": {f"A{i}": "=RB_X()" for i in range(1, 60)}}, parts=filler))
    dice = random.Random(20)
    for trial in range(40):
        command = [sys.executable, "-c", WRITER, str(path), str(1000.0 * trial)]
        with subprocess.Popen(command, stdout=subprocess.PIPE) as writer:
            assert writer.stdout is not None
            writer.stdout.readline()
            start = time.monotonic()
            saved = [writer.stdout.readline()]
            round_ = time.monotonic() - start  # how long the writer takes now, on this machine
            time.sleep(dice.uniform(0.0, 1.5) * round_)
            writer.send_signal(signal.SIGKILL)
            saved += writer.stdout.readlines()
            writer.wait()
        done = max(float(line) for line in saved if line.endswith(b"\n"))
        whole = parts.unpacked(path.read_bytes())  # checks every part's checksum
        assert whole["xl/media/image1.bin"] == filler["xl/media/image1.bin"]
        sheet = whole["xl/worksheets/sheet1.xml"].decode()
        values = {piece.partition("</v>")[0] for piece in sheet.split("<v>")[1:]}
        assert len(values) == 1  # all cells of one run, never a mixture
        assert float(values.pop()) in (done, done + 1.0)  # what was saved last, or what was being saved


def test_a_new_file_gets_the_usual_permissions(tmp_path: Path) -> None:
    before = os.umask(0o027)
    try:
        saving.save(b"data", tmp_path / "new.xlsx", None)
    finally:
        os.umask(before)
    assert stat.S_IMODE((tmp_path / "new.xlsx").stat().st_mode) == 0o640
