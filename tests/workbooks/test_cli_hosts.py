"""`rigidsheet excel`, `calc` and `pdf` as far as they go without a spreadsheet program."""

from __future__ import annotations

import zipfile
from pathlib import Path

import pytest
from command_line import refused, run
from gate_book import write

from rigidsheet.udf.catalogue import FUNCTIONS


def test_excel_writes_into_a_folder(tmp_path: Path) -> None:
    folder = tmp_path / "for excel"
    result = run("excel", folder)
    assert result.exit_code == 0
    names = sorted(path.name for path in folder.iterdir())
    assert len(names) == 3
    assert all(str(folder / name) in result.output for name in names)
    kept = folder / next(name for name in names if name.endswith(".conf"))
    kept.write_text("mine")
    assert run("excel", folder).exit_code == 0
    assert kept.read_text() == "mine"


def test_excel_refuses_a_file(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("mine")
    assert "is a file" in refused("excel", tmp_path / "file")


def test_calc_build(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    target = tmp_path / "my functions.oxt"
    assert run("calc", "build", target).output == f"Wrote {target}\n"
    with zipfile.ZipFile(target) as archive:
        wizard = archive.read("CalcAddIns.xcu").decode()
    assert all(name in wizard for name in FUNCTIONS)
    monkeypatch.chdir(tmp_path)
    assert run("calc", "build").output == "Wrote rigidsheet.oxt\n"
    assert "ends in .oxt" in refused("calc", "build", tmp_path / "x.zip")
    assert "none" in refused("calc", "build", tmp_path / "none" / "x.oxt")


@pytest.mark.parametrize("arguments", [("calc", "install"), ("calc", "uninstall"), ("pdf", "gate.xlsx")])
def test_without_an_office(
    arguments: tuple[str, ...], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    write(tmp_path / "gate.xlsx")
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("RIGIDSHEET_OFFICE", str(tmp_path / "none" / "soffice"))
    line = refused(*arguments)
    assert "No LibreOffice was found" in line
    assert "Install LibreOffice" in line


def test_pdf_of_no_file(tmp_path: Path) -> None:
    assert "There is no file" in refused("pdf", tmp_path / "none.xlsx")
