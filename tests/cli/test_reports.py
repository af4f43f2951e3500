"""``--report``: several at once, whole or not at all, wrong requests."""

from __future__ import annotations

import json
import os
from pathlib import Path

import pytest

from netaudit.cli.main import main
from netaudit.report.formats import FORMATS
from tests.report.machine import PUMP, VENT


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    for name, text in (("vent", VENT), ("pump", PUMP), ("broken", "netlist 1\nR1 resistor 5V\n")):
        (tmp_path / f"{name}.netlist").write_text(text, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.mark.usefixtures("folder")
def test_all_at_once_and_the_text_besides(capsys: pytest.CaptureFixture[str]) -> None:
    asked = [f"--report={name}=out.{name}" for name in FORMATS]
    assert main(["audit", "vent.netlist", *asked]) == 1
    assert capsys.readouterr().out.startswith("FAIL")
    assert all(Path(f"out.{name}").stat().st_size > 0 for name in FORMATS)
    assert not list(Path().glob("*.part"))


@pytest.mark.usefixtures("folder")
def test_a_report_on_stdout_stands_instead_of_the_text(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["audit", "pump.netlist", "--report", "sarif=-", "--report", "csv=stress.csv"]) == 0
    assert json.loads(capsys.readouterr().out)["version"] == "2.1.0"
    assert Path("stress.csv").exists()


@pytest.mark.usefixtures("folder")
def test_a_broken_board_does_not_keep_the_reports_from_being_written(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["audit", "pump.netlist", "broken.netlist", "--report", "junit=out.xml"]) == 2
    out, err = capsys.readouterr()
    assert out.startswith("PASS")
    assert err.startswith("broken.netlist:2:")
    assert 'errors="1"' in Path("out.xml").read_text(encoding="utf-8")
    assert main(["audit", "broken.netlist", "--report", "sarif=out.sarif"]) == 2
    assert capsys.readouterr().out == ""
    assert "toolExecutionNotifications" in Path("out.sarif").read_text(encoding="utf-8")


@pytest.mark.parametrize(
    ("asked", "said"),
    [
        (["sarf=x"], "did you mean sarif?"),
        (["sarif"], "write --report sarif=FILE"),
        (["sarif="], "write --report sarif=FILE"),
        (["zzz=x"], "one of json, sarif"),
        (["sarif=x", "csv=x"], "two reports go to x"),
        (["sarif=no/such/folder/x"], "no/such/folder/x cannot be written"),
    ],
)
@pytest.mark.usefixtures("folder")
def test_what_cannot_be_written_is_one_line_and_2(
    asked: list[str], said: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert main(["audit", "pump.netlist", *[f"--report={a}" for a in asked]]) == 2
    out, err = capsys.readouterr()
    assert (out, len(err.splitlines())) == ("", 1)
    assert said in err


def test_on_a_full_disk_the_old_reports_stay_whole(
    folder: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    for name in ("a.csv", "b.md"):
        (folder / name).write_text("old", encoding="utf-8")

    def full(descriptor: int) -> None:
        raise OSError(28, os.strerror(28))

    monkeypatch.setattr(os, "fsync", full)
    assert main(["audit", "pump.netlist", "--report=csv=a.csv", "--report=markdown=b.md"]) == 2
    assert "No space left on device" in capsys.readouterr().err
    assert [(folder / n).read_text(encoding="utf-8") for n in ("a.csv", "b.md")] == ["old", "old"]
    assert sorted(p.name for p in folder.iterdir()) == [
        "a.csv", "b.md", "broken.netlist", "pump.netlist", "vent.netlist",
    ]  # fmt: skip


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no /dev/full here")
@pytest.mark.usefixtures("folder")
def test_a_device_is_written_and_never_replaced(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["audit", "pump.netlist", "--report=csv=/dev/full"]) == 2
    assert "/dev/full cannot be written: No space left" in capsys.readouterr().err
    assert main(["audit", "pump.netlist", "-o", os.devnull]) == 0
    assert Path("/dev/full").is_char_device()
    assert Path(os.devnull).is_char_device()


def test_a_link_stays_a_link(folder: Path) -> None:
    (folder / "real.csv").write_text("old", encoding="utf-8")
    (folder / "link.csv").symlink_to("real.csv")
    assert main(["audit", "pump.netlist", "--report=csv=link.csv"]) == 0
    assert (folder / "link.csv").is_symlink()
    assert (folder / "real.csv").read_text(encoding="utf-8") != "old"
