"""`rigidsheet demo`, `templates` and `new`, with a template of the tests' own, and with the real ones."""

from __future__ import annotations

from pathlib import Path
from types import MappingProxyType

import openpyxl
import pytest
from command_line import refused, run
from gate_book import write

from rigidsheet.workbooks import templates
from rigidsheet.workbooks.templates import Template


def write_gate(path: Path, blank: bool) -> None:
    write(path)
    if blank:
        book = openpyxl.load_workbook(path)
        for row in range(2, 7):
            book["Inputs"].cell(row, 2).value = None
        book.save(path)


@pytest.fixture
def gate(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    table = MappingProxyType({"gate": Template("gate", "Gate", "What the hinge carries", write_gate)})
    monkeypatch.setattr(templates, "TEMPLATES", table)
    monkeypatch.chdir(tmp_path)


@pytest.mark.usefixtures("gate")
class TestOneTemplate:
    def test_templates(self) -> None:
        output = run("templates").output
        assert "gate" in output
        assert "What the hinge carries" in output

    def test_new_is_worked_out_and_named_after_the_template(self) -> None:
        result = run("new", "gate")
        assert (result.exit_code, result.output) == (0, "Wrote gate.xlsx\n")
        assert openpyxl.load_workbook("gate.xlsx", data_only=True)["Checks"]["E2"].value == "OK"

    def test_new_overwrites_only_when_told(self) -> None:
        Path("gate.xlsx").write_text("mine")
        assert "there already" in refused("new", "gate")
        assert Path("gate.xlsx").read_text() == "mine"
        assert run("new", "gate", "--force").exit_code == 0
        assert run("recalc", "gate.xlsx").exit_code == 0

    def test_new_under_another_name(self, tmp_path: Path) -> None:
        assert run("new", "GATE", "north gate").output == "Wrote north gate.xlsx\n"
        (tmp_path / "jobs").mkdir()
        run("new", "gate", "jobs")
        assert (tmp_path / "jobs" / "gate.xlsx").is_file()
        assert "ends in .xlsx" in refused("new", "gate", "gate.ods")
        assert "no folder" in refused("new", "gate", "none/gate.xlsx")
        assert "there is no template 'gait'. Did you mean gate?" in refused("new", "gait")

    def test_blank(self) -> None:
        result = run("new", "gate", "--blank")
        assert result.exit_code == 0
        assert "wait for your inputs" in result.output
        assert "must be" in refused("recalc", "gate.xlsx")

    def test_demo(self, tmp_path: Path) -> None:
        result = run("demo")
        assert result.exit_code == 0
        for word in (
            "Gate: ",
            "torque",
            "39.6539",
            "N*m",
            "Pin load",
            "3.24882",
            str(tmp_path / "rigidsheet-demo"),
        ):
            assert word in result.output
        assert (tmp_path / "rigidsheet-demo" / "gate.xlsx").is_file()

    def test_demo_keeps_what_is_there(self, tmp_path: Path) -> None:
        run("demo")
        run("demo")
        assert (tmp_path / "rigidsheet-demo-2" / "gate.xlsx").is_file()
        assert "there already" in refused("demo", "--to", "rigidsheet-demo")
        assert run("demo", "--to", "rigidsheet-demo", "--force").exit_code == 0
        (tmp_path / "file").write_text("mine")
        refused("demo", "--to", "file")


def test_every_real_template(tmp_path: Path) -> None:
    for name in templates.TEMPLATES:
        assert name in run("templates").output
        assert run("new", name, tmp_path).exit_code == 0
        result = run("recalc", tmp_path / f"{name}.xlsx")
        assert result.exit_code in (0, 1)
        assert "nothing to change" in result.output
        blank = tmp_path / f"{name} blank.xlsx"
        assert run("new", name, blank, "--blank").exit_code == 0
        refused("recalc", blank)
