"""The package as it is shipped: its list of folders, its links for the type checker, and what no file may hold."""

from __future__ import annotations

import dataclasses
import re
import shutil
import subprocess
import tomllib
from pathlib import Path

import pytest

import rigidsheet.workbooks

ROOT = Path(__file__).parents[1]
PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
LAYERS = ("core", "udf", "workbooks")


def tracked() -> list[Path]:
    """Return the files under version control, or all files where there is none."""
    names: list[str] = []
    if shutil.which("git"):
        command = ["git", "ls-files", "-z"]
        listed = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
        names = [n for n in listed.stdout.split("\0") if n]
    if not names:
        skipped = re.compile(
            r"(^|/)(\.git|\.venv\w*|__pycache__|build|dist|\.\w+_cache|\.hypothesis|.*\.egg-info)/"
            r"|^(rigidsheet-)?demo(-\d+)?/"
        )
        names = [
            str(p.relative_to(ROOT))
            for p in ROOT.rglob("*")
            if p.is_file() and not skipped.search(f"{p.relative_to(ROOT)}")
        ]
    return [ROOT / n for n in names if (ROOT / n).is_file()]


FILES = tracked()


def test_the_list_of_packages_is_the_list_of_folders() -> None:
    folders = {
        ".".join(("rigidsheet", *path.parent.relative_to(ROOT).parts))
        for layer in LAYERS
        for path in (ROOT / layer).rglob("*.py")
    }
    assert set(PROJECT["tool"]["setuptools"]["packages"]) == folders
    assert PROJECT["tool"]["setuptools"]["package-dir"] == {f"rigidsheet.{layer}": layer for layer in LAYERS}


def test_what_the_package_offers_to_other_programs() -> None:
    """Whoever removes or renames one of these breaks somebody's program; it belongs into the list of changes."""
    assert rigidsheet.workbooks.__all__ == ["Recalculation", "recalculate"]
    fields = {f.name for f in dataclasses.fields(rigidsheet.workbooks.Recalculation)}
    assert {"values", "errors", "results", "checks", "warnings", "package", "path", "changed"} <= fields
    assert isinstance(rigidsheet.workbooks.Recalculation.holds, property)


@pytest.mark.parametrize("layer", LAYERS)
def test_the_type_checker_finds_each_layer(layer: str) -> None:
    link = ROOT / ".types" / "rigidsheet" / layer
    assert link.resolve() == ROOT / layer
    assert (ROOT / layer / "py.typed").is_file()


def test_the_root_holds_what_it_says() -> None:
    top = {path.relative_to(ROOT).parts[0] for path in FILES}
    assert {n for n in top if not n.startswith(".")} <= {
        "README.md",
        "DEVELOPERS.md",
        "pyproject.toml",
        *LAYERS,
        "tests",
    }


# Written in pieces, so that this file does not hold them.
FORBIDDEN = re.compile(
    "|".join(
        (
            r"\blec" r"tures?\b",
            r"\btran" r"script\b",
            r"seed " r"document",
            r"ses" r"sion[ _-]?id",
            r"/wo" r"rk/",
            r"/ho" r"me/\w",
            r"/Us" r"ers/\w",
            r"/tm" r"p/[\w.]+/",
            r"py" r"pi\.org",
            r"files\.python" r"hosted",
            r"registry\.npm" r"js",
            r"proxy\.go" r"lang",
        )
    ),
    re.IGNORECASE,
)


@pytest.mark.parametrize("path", FILES, ids=lambda p: str(p.relative_to(ROOT)))
def test_a_file_speaks_of_the_project_alone(path: Path) -> None:
    try:
        text = path.read_text(encoding="utf-8")
    except UnicodeDecodeError:
        assert path.suffix in {".png", ".xlsx", ".ods", ".pdf"}, (
            "a file that is neither text nor a known kind"
        )
        return
    found = FORBIDDEN.search(text)
    assert found is None, f"line {text[: found.start()].count(chr(10)) + 1}: {found[0]}" if found else ""
