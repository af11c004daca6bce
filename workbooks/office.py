"""LibreOffice on this machine: finding it, installing the extension, and a private office of our own."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
import tempfile
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from rigidsheet.core.errors import AbsentError, InputError
from rigidsheet.udf.calc.build import FILE_NAME, IDENTIFIER, build

__all__ = ["Office", "build", "find", "install", "pdf", "private_profile", "uninstall"]

START_AGAIN: Final = 81  # how an office ends the first start of a fresh profile
CONVERT_SECONDS: Final = 180.0
INSTALL_SECONDS: Final = 120.0

HOW_TO_INSTALL: Final = (
    "Install LibreOffice 7.4 or later with Calc and its Python "
    "(Debian, Ubuntu: apt install libreoffice-calc python3-uno), or set RIGIDSHEET_OFFICE to its soffice"
)


@dataclass(frozen=True)
class Office:
    """An installed LibreOffice."""

    program: Path  # the folder with the executables

    @property
    def soffice(self) -> Path:
        """The executable itself, so that the process started is the office and no script around it."""
        return self._executable("soffice.bin", "soffice.exe", "soffice")

    @property
    def unopkg(self) -> Path:
        """The tool that installs extensions."""
        return self._executable("unopkg.com", "unopkg.exe", "unopkg")

    def _executable(self, *names: str) -> Path:
        for name in names:
            if (self.program / name).exists():
                return self.program / name
        raise AbsentError("", f"The LibreOffice in {self.program} has no {names[-1]}", remedy=HOW_TO_INSTALL)


@dataclass(frozen=True)
class Profile:
    """A profile of our own: nothing of the user's office is read or changed."""

    folder: Path

    @property
    def options(self) -> list[str]:
        """The options that make an office or unopkg use this profile."""
        return [
            f"-env:UserInstallation={(self.folder / 'user').as_uri()}",
            f"-env:UNO_SHARED_PACKAGES_CACHE={(self.folder / 'shared').as_uri()}",
        ]


def candidates() -> Iterator[Path]:
    """Yield where an soffice may be, the user's choice first."""
    chosen = os.environ.get("RIGIDSHEET_OFFICE")
    if chosen:
        yield Path(chosen)
        return
    for name in ("soffice", "libreoffice", "localc"):
        found = shutil.which(name)
        if found:
            yield Path(found)
    if sys.platform == "darwin":
        yield Path("/Applications/LibreOffice.app/Contents/MacOS/soffice")
    elif os.name == "nt":
        for root in ("PROGRAMFILES", "PROGRAMFILES(X86)"):
            yield Path(os.environ.get(root, "C:\\")) / "LibreOffice" / "program" / "soffice.exe"
    else:
        yield Path("/usr/lib/libreoffice/program/soffice")
        yield from sorted(Path("/opt").glob("libreoffice*/program/soffice"), reverse=True)


def find() -> Office:
    """Return the LibreOffice of this machine; AbsentError with what to install when there is none."""
    for path in candidates():
        if path.exists():
            return Office(path.resolve().parent)
    raise AbsentError("", "No LibreOffice was found on this machine", remedy=HOW_TO_INSTALL)


def layer() -> list[str]:
    """Return where unopkg installs to: root may only use the layer of all users."""
    return ["--shared"] if hasattr(os, "geteuid") and os.geteuid() == 0 else []


def run_unopkg(office: Office, arguments: Sequence[str]) -> None:
    """Run unopkg and turn its failure into a sentence."""
    try:
        done = subprocess.run(
            [str(office.unopkg), *arguments],
            capture_output=True,
            text=True,
            errors="replace",
            timeout=INSTALL_SECONDS,
            stdin=subprocess.DEVNULL,
        )
    except subprocess.TimeoutExpired:
        raise InputError(
            "",
            f"unopkg did not finish within {INSTALL_SECONDS:g} s",
            remedy="Close LibreOffice and try again",
        ) from None
    if done.returncode != 0:
        said = [line.strip() for line in (done.stderr + done.stdout).splitlines() if line.strip()]
        told = [line for line in said if "unopkg failed" not in line]
        reason = (
            told[0].removeprefix("ERROR:").partition(" at ./")[0].strip()
            if told
            else f"exit code {done.returncode}"
        )
        raise InputError(
            "", f"The extension was not changed: {reason}", remedy="Close LibreOffice and try again"
        )


def install() -> str:
    """Build the extension for the running interpreter, install it in LibreOffice, and say so."""
    office = find()
    with tempfile.TemporaryDirectory(prefix="rigidsheet-") as folder:
        extension = build(Path(folder) / FILE_NAME)
        run_unopkg(office, ["add", "--force", *layer(), str(extension)])
    return f"Installed in {office.program}. Restart LibreOffice; the functions then work in Calc."


def uninstall() -> str:
    """Remove the extension from LibreOffice, and say so."""
    office = find()
    run_unopkg(office, ["remove", *layer(), IDENTIFIER])
    return f"Removed from {office.program}. Restart LibreOffice."


@contextmanager
def private_profile(office: Office) -> Iterator[Profile]:
    """Give a fresh profile with the extension installed; it is deleted at the end."""
    with tempfile.TemporaryDirectory(prefix="rigidsheet-office-", ignore_cleanup_errors=True) as folder:
        profile = Profile(Path(folder))
        extension = build(profile.folder / FILE_NAME)
        run_unopkg(office, ["add", "--force", *layer(), str(extension), *profile.options])
        yield profile


def run_private(office: Office, profile: Profile, arguments: Sequence[str], seconds: float) -> str:
    """Run a private office to its end and return what it said; it is ended by its own id when late."""
    command = [str(office.soffice), "--headless", "--norestore", "--nologo", *profile.options, *arguments]
    environment = dict(os.environ, RIGIDSHEET_RECALCULATE="1")
    while True:
        process = subprocess.Popen(
            command,
            stdin=subprocess.DEVNULL,
            stdout=subprocess.PIPE,
            stderr=subprocess.STDOUT,
            env=environment,
            text=True,
            errors="replace",
        )
        try:
            said, _ = process.communicate(timeout=seconds)
        except subprocess.TimeoutExpired:
            raise InputError("", f"LibreOffice did not finish within {seconds:g} s and was ended") from None
        finally:
            if process.poll() is None:
                process.kill()
                process.communicate()
        if process.returncode != START_AGAIN:
            return said


def pdf(file: str | Path, out: str | Path | None = None) -> Path:
    """Write the sheets of a workbook, recalculated and with their charts, as PDF and return its path.

    Parameters
    ----------
    file : str or Path
        The workbook; it is copied first and never changed.
    out : str or Path, optional
        The PDF; beside the workbook when omitted, and a folder gets the workbook's name.
    """
    source = Path(file)
    if not source.is_file():
        raise InputError("", f"There is no file {source}")
    target = Path(out) if out is not None else source.with_suffix(".pdf")
    if target.is_dir():
        target = target / f"{source.stem}.pdf"
    if not target.parent.is_dir():
        raise InputError("", f"There is no folder {target.parent}")
    office = find()
    with private_profile(office) as profile:
        inside, made = profile.folder / "in", profile.folder / "out"
        inside.mkdir()
        made.mkdir()
        copy = inside / source.name
        shutil.copyfile(source, copy)
        arguments = ["--convert-to", "pdf:calc_pdf_Export", "--outdir", str(made), str(copy)]
        said = run_private(office, profile, arguments, CONVERT_SECONDS)
        result = made / f"{source.stem}.pdf"
        if not result.is_file():
            lines = [line for line in said.splitlines() if line.strip()]
            raise InputError(
                "", f"LibreOffice made no PDF of {source.name}{': ' + lines[-1] if lines else ''}"
            )
        part = target.with_name(target.name + ".part")
        try:
            shutil.copyfile(result, part)
            os.replace(part, target)
        finally:
            part.unlink(missing_ok=True)
    return target
