"""Commands in a project: its boards, tables and settings, the command line's words first, and ``init``."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from netaudit.cli.main import main
from netaudit.project.read import read_project
from netaudit.project.starter import look_around

DIVIDER = """netlist 1
ground GND
ambient 25degC
PS1 supply 12V 9V..15V +:V -:GND
R1 resistor 1k 1% part=CHIP 1:V 2:M
R2 resistor 1k 1% part=CHIP 1:M 2:GND
"""
TABLE = '[CHIP]\nkind = "resistor"\n[CHIP.ratings]\nP_tot = "70mW"\n'


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "boards").mkdir()
    for name in ("one", "two"):
        (tmp_path / "boards" / f"{name}.netlist").write_text(DIVIDER, encoding="utf-8")
    (tmp_path / "parts.toml").write_text(TABLE, encoding="utf-8")
    (tmp_path / "netaudit.toml").write_text('boards = ["boards/*.netlist"]\nparts = ["parts.toml"]\n', encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def add(text: str) -> None:
    with Path("netaudit.toml").open("a", encoding="utf-8") as stream:
        stream.write(text)


@pytest.mark.parametrize("command", ["audit", "lint", "solve"])
@pytest.mark.usefixtures("folder")
def test_without_files_the_projects_boards_are_taken(command: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert main([command, "--format", "json"]) == 0
    record = json.loads(capsys.readouterr().out)
    assert [b["netlist"] for b in record["boards"]] == ["boards/one.netlist", "boards/two.netlist"]
    assert set(record["boards"][0]["files"]) == {"boards/one.netlist", "parts.toml", "netaudit.toml"}


@pytest.mark.usefixtures("folder")
def test_from_a_folder_below_too(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    monkeypatch.chdir("boards")
    assert main(["lint", "--format", "json"]) == 0
    assert len(json.loads(capsys.readouterr().out)["boards"]) == 2


@pytest.mark.usefixtures("folder")
def test_settings_hold_for_named_files_too_and_the_command_line_wins(capsys: pytest.CaptureFixture[str]) -> None:
    add('policy = "cautious"\nfail-on = "warning"\n[corners]\nvalues = "nominal"\nsamples = 16\n')
    assert main(["audit", "--format", "json", "boards/one.netlist"]) == 0
    record = json.loads(capsys.readouterr().out)
    assert (record["policy"], record["nominal"]) == ("cautious", True)
    # 57 mW at 15 V of 70 mW: below the rating, above 60 % of it
    assert main(["audit", "--no-nominal", "boards/one.netlist"]) == 1
    assert main(["audit", "--no-nominal", "--policy", "none", "boards/one.netlist"]) == 0
    assert main(["audit", "--no-nominal", "--fail-on", "error", "boards/one.netlist"]) == 0


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("polcy = 'x'\n", "netaudit.toml:3:1: netaudit.toml has no key polcy; did you mean policy?"),
        ("policy = 'caut'\n", "there is no policy caut"),
        ("[gate]\nstep = 5%\n", "netaudit.toml:4"),
    ],
)
@pytest.mark.usefixtures("folder")
def test_a_wrong_project_is_one_line_and_2(text: str, said: str, capsys: pytest.CaptureFixture[str]) -> None:
    add(text)
    assert main(["audit"]) == 2
    out, err = capsys.readouterr()
    assert (out, len(err.splitlines())) == ("", 1)
    assert said in err


def test_a_table_that_is_not_there_names_the_line(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (folder / "parts.toml").unlink()
    assert main(["lint", "boards/one.netlist"]) == 2
    assert "netaudit.toml:2:1: parts: no file matches 'parts.toml'" in capsys.readouterr().err


def test_init_writes_what_is_there_and_overwrites_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "b").mkdir()
    (tmp_path / ".hidden").mkdir()
    (tmp_path / ".hidden" / "x.netlist").write_text(DIVIDER, encoding="utf-8")
    (tmp_path / "b" / "main.netlist").write_text(
        f'{DIVIDER}include "shared.netlist"\nparts "t.toml"\n', encoding="utf-8"
    )
    (tmp_path / "b" / "shared.netlist").write_text("netlist 1\n", encoding="utf-8")
    (tmp_path / "b" / "notes.txt").write_text("netlist of things to buy\n", encoding="utf-8")
    (tmp_path / "b" / "panel.edf").write_text("(edif)", encoding="utf-8")
    found = look_around(".")
    assert (found.boards, found.parts, found.exports) == (("b/main.netlist",), ("b/t.toml",), ("b/panel.edf",))
    assert main(["init"]) == 0
    said = capsys.readouterr().out
    assert "1 boards, 1 part tables and 1 exports" in said
    assert "netaudit audit" in said
    text = (tmp_path / "netaudit.toml").read_text(encoding="utf-8")
    assert read_project("netaudit.toml").boards == ("b/main.netlist",)
    assert '#   "b/panel.edf"' in text
    assert main(["init"]) == 2
    assert "is there already" in capsys.readouterr().err
    assert (tmp_path / "netaudit.toml").read_text(encoding="utf-8") == text


def test_every_commented_key_of_a_new_file_is_one(tmp_path: Path) -> None:
    from netaudit.project.starter import Found, starter

    text = starter(Found((), (), ()))
    lines = [line.removeprefix("# ") if " = " in line else line for line in text.splitlines()]
    (tmp_path / "netaudit.toml").write_text("\n".join(lines), encoding="utf-8")
    project = read_project(str(tmp_path / "netaudit.toml"))
    assert (project.waivers, project.gate.stress_step, project.corners.samples) == (("waivers.toml",), 0.2, 1024)
