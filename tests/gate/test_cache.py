"""The cache: the same reports with it and without, only changed boards solved, broken and foreign entries."""

from __future__ import annotations

import json
import os
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

import netaudit
from netaudit.audit.records import Audit
from netaudit.cli.main import main
from netaudit.gate import run as run_module
from netaudit.gate.codec import from_plain, to_plain
from netaudit.report.json_text import audit_record
from netaudit.report.style import Style
from netaudit.report.text import audit_text
from tests.report.machine import PUMP, VENT

ROOT = Path(__file__).parent.parent.parent
SAMPLES = sorted((ROOT / "sample_netlists").glob("*.netlist"))
TABLE = '[CHIP]\nkind = "resistor"\n[CHIP.ratings]\nP_tot = "70mW"\n'


@pytest.mark.parametrize("path", SAMPLES, ids=lambda p: p.stem)
def test_plain_values_hold_all_that_reports_need(path: Path) -> None:
    audit = netaudit.load(str(path)).audit("cautious")
    back = from_plain(json.loads(json.dumps(to_plain(audit))))
    assert audit_record(back, False, "1") == audit_record(audit, False, "1")
    assert audit_text(back, False, Style(), True, "1") == audit_text(audit, False, Style(), True, "1")
    assert back.parts == audit.parts
    assert back.board.expectations == audit.board.expectations


def test_plain_values_hold_samples_too() -> None:
    from netaudit.audit.statistics import Plan

    audit = netaudit.loads(VENT).audit("cautious", plan=Plan(32, together=(("R1", "R2"),)))
    back = from_plain(json.loads(json.dumps(to_plain(audit))))
    assert (back.plan, back.samples) == (audit.plan, audit.samples)


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    for name, text in (("vent", VENT), ("pump", PUMP), ("broken", "netlist 1\nR1 resistor 5V\n")):
        Path(f"{name}.netlist").write_text(text, encoding="utf-8")
    Path("parts.toml").write_text(TABLE, encoding="utf-8")
    Path("netaudit.toml").write_text(
        'boards = ["*.netlist"]\nparts = ["parts.toml"]\ncache = ".cache"\n', encoding="utf-8"
    )
    return tmp_path


@pytest.fixture
def solved(monkeypatch: pytest.MonkeyPatch) -> Iterator[list[str]]:
    """The boards that were really solved."""
    names: list[str] = []
    real: Callable[..., Audit] = run_module.solve

    def counted(job: object, *rest: object) -> Audit:
        names.append(job.path)  # type: ignore[attr-defined]  # a job
        return real(job, *rest)

    monkeypatch.setattr(run_module, "solve", counted)
    yield names
    names.clear()


def audit(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, str, str]:
    status = main(["audit", "--workers", "1", *arguments])
    out, err = capsys.readouterr()
    return status, out, err


@pytest.mark.usefixtures("folder")
def test_only_what_changed_is_solved_and_everything_is_said(
    solved: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    fresh = audit(capsys, "--no-cache")
    assert solved == ["broken.netlist", "pump.netlist", "vent.netlist"]
    assert not Path(".cache").exists()
    solved.clear()
    assert audit(capsys) == fresh
    assert solved == ["broken.netlist", "pump.netlist", "vent.netlist"]
    solved.clear()
    assert audit(capsys) == fresh
    assert solved == ["broken.netlist"]
    solved.clear()
    Path("pump.netlist").write_text(PUMP.replace("1k", "10k"), encoding="utf-8")
    changed = audit(capsys)
    assert solved == ["broken.netlist", "pump.netlist"]
    assert changed != fresh
    solved.clear()
    # both revisions are kept
    Path("pump.netlist").write_text(PUMP, encoding="utf-8")
    assert audit(capsys) == fresh
    assert solved == ["broken.netlist"]


@pytest.mark.parametrize(
    "change",
    [
        lambda: Path("parts.toml").write_text(TABLE.replace("70mW", "80mW"), encoding="utf-8"),
        lambda: Path("netaudit.toml").write_text(
            Path("netaudit.toml").read_text(encoding="utf-8") + "# again\n", encoding="utf-8"
        ),
        lambda: Path(".cache", next(p.name for p in Path(".cache").glob("*-*.json"))).write_text("[", encoding="utf-8"),
        lambda: [p.write_text('[[{"vent.netlist": 5}, "../x"], 5]', encoding="utf-8") for p in Path(".cache").glob("*.json")],
        lambda: [p.write_text("[1, 2]", encoding="utf-8") for p in Path(".cache").glob("*-*.json")],
    ],
)  # fmt: skip
@pytest.mark.usefixtures("folder")
def test_whatever_a_board_reads_counts_and_a_broken_entry_is_none(
    change: Callable[[], object], solved: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    fresh = audit(capsys)
    solved.clear()
    change()
    again = audit(capsys)
    assert solved != ["broken.netlist"]
    assert again[0] == fresh[0]


@pytest.mark.parametrize(
    "arguments",
    [["--policy", "cautious"], ["--nominal"], ["--set", "R1=2k"], ["--samples", "16"], ["--policy", "own.toml"]],
)
@pytest.mark.usefixtures("folder")
def test_options_count(arguments: list[str], solved: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    Path("own.toml").write_text('base = "none"\n', encoding="utf-8")
    audit(capsys, "pump.netlist")
    solved.clear()
    first = audit(capsys, "pump.netlist", *arguments)
    assert solved == ["pump.netlist"]
    assert audit(capsys, "pump.netlist", *arguments) == first
    assert solved == ["pump.netlist"]
    Path("own.toml").write_text('base = "cautious"\n', encoding="utf-8")
    audit(capsys, "pump.netlist", *arguments)
    assert len(solved) == (2 if "own.toml" in arguments else 1)


@pytest.mark.usefixtures("folder")
def test_verdict_options_do_not_count(solved: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    audit(capsys, "vent.netlist")
    solved.clear()
    assert audit(capsys, "pump.netlist", "--fail-on", "note", "--require-complete")[0] == 0
    assert audit(capsys, "vent.netlist", "--fail-on", "note")[0] == 1
    assert solved == ["pump.netlist"]


@pytest.mark.usefixtures("folder")
def test_a_new_project_file_above_counts(solved: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    Path("netaudit.toml").unlink()
    audit(capsys, "pump.netlist", "--cache", ".cache")
    solved.clear()
    Path("netaudit.toml").write_text("", encoding="utf-8")
    audit(capsys, "pump.netlist", "--cache", ".cache")
    assert solved == ["pump.netlist"]


def test_a_cache_that_cannot_be_written_is_one_line_and_2(
    folder: Path, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    (folder / ".cache").write_text("a file", encoding="utf-8")
    status, out, err = audit(capsys, "pump.netlist")
    assert (status, out, len(err.splitlines())) == (2, "", 1)
    assert ".cache cannot be written: " in err
    assert "--no-cache" in err
    (folder / ".cache").unlink()

    def full(source: str, target: str) -> None:
        raise OSError(28, os.strerror(28))

    monkeypatch.setattr(os, "replace", full)
    status, out, err = audit(capsys, "pump.netlist")
    assert (status, out, len(err.splitlines())) == (2, "", 1)
    assert "No space left" in err
    assert not list((folder / ".cache").glob("*.part"))
