"""The file on disk: read once, replaced whole or not at all."""

from __future__ import annotations

import contextlib
import os
import stat
import tempfile
from dataclasses import dataclass
from pathlib import Path

from ..errors import FileChanged, FileRefused


@dataclass(frozen=True)
class Seen:
    """What a file looked like when it was read."""

    path: Path
    data: bytes
    mark: tuple[int, int, int]


def load(path: Path) -> Seen:
    """Read a file once, and remember its size and time stamp."""
    try:
        real = path.resolve(strict=True)
        with real.open("rb") as file:
            data = file.read()
            status = os.fstat(file.fileno())
    except FileNotFoundError:
        raise FileRefused("there is no such file", where=path.name) from None
    except IsADirectoryError:
        raise FileRefused("this is a folder, not a workbook", where=path.name) from None
    except OSError as error:
        raise FileRefused(f"the file cannot be read: {error.strerror or error}", where=path.name) from None
    return Seen(real, data, _mark(status))


def _mark(status: os.stat_result) -> tuple[int, int, int]:
    return status.st_size, status.st_mtime_ns, status.st_ino


def save(data: bytes, target: Path, seen: Seen | None) -> bool:
    """Put `data` into `target` in one step; False when the file holds it already.

    The data goes to a temporary file in the same folder, onto the disk, and then takes the name over, so
    that at any moment the name leads to the old file or to the new one, whole. A symbolic link stays one.

    Parameters
    ----------
    data : bytes
        The new content.
    target : Path
        Where it goes.
    seen : Seen or None
        The file as it was read; refused when `target` is that file and has changed since.
    """
    target = Path(os.path.realpath(target))
    same = seen is not None and target == seen.path
    if same and seen is not None and data == seen.data:
        return False
    mode = _writable(target)
    try:
        handle, name = tempfile.mkstemp(prefix=f".{target.stem[:40]}-", suffix=".tmp", dir=target.parent)
    except OSError as error:
        raise FileRefused(
            f"the folder cannot be written to: {error.strerror or error}", where=target.name
        ) from None
    temporary = Path(name)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if mode is not None:
            os.chmod(temporary, mode)
        if same and seen is not None:
            _unchanged(seen)
        os.replace(temporary, target)
    except PermissionError:
        raise FileRefused(
            "the file cannot be replaced", remedy="Close it in the spreadsheet program", where=target.name
        ) from None
    except OSError as error:
        raise FileRefused(
            f"the file cannot be written: {error.strerror or error}", where=target.name
        ) from None
    finally:
        with contextlib.suppress(FileNotFoundError):
            temporary.unlink()
    _flush_folder(target.parent)
    return True


def _writable(target: Path) -> int | None:
    """Return the permissions of an existing target, None for a new one; refuse a read-only file."""
    try:
        status = target.stat()
    except FileNotFoundError:
        umask = os.umask(0)
        os.umask(umask)
        return 0o666 & ~umask
    if not stat.S_ISREG(status.st_mode):
        raise FileRefused("the target is not an ordinary file", where=target.name)
    if not status.st_mode & 0o222 or not os.access(target, os.W_OK):
        raise FileRefused("the file is read-only", remedy="Write to another file", where=target.name)
    return stat.S_IMODE(status.st_mode)


def _unchanged(seen: Seen) -> None:
    try:
        now = _mark(seen.path.stat())
    except FileNotFoundError:
        now = (0, 0, 0)
    if now != seen.mark:
        raise FileChanged(
            "the file was changed while it was being recalculated",
            remedy="Run it again",
            where=seen.path.name,
        )


def _flush_folder(folder: Path) -> None:
    """Bring the new name onto the disk; not every system lets a folder be flushed."""
    with contextlib.suppress(OSError):
        handle = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(handle)
        finally:
            os.close(handle)
