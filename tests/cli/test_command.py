"""The command line: exit statuses, one line of error, formats, settings, start-up."""

from __future__ import annotations

import io
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from netaudit import __version__
from netaudit.cli import main as main_module
from netaudit.cli.main import main

CLEAN = """netlist 1
title "divider"
ground GND
ambient 25degC
PS1 supply 12V 9V..15V +:V -:GND
R1 resistor 1k 1% P_tot=250mW 1:V 2:M
R2 resistor 1k 1% P_tot=250mW 1:M 2:GND
"""
WRONG = CLEAN.replace("250mW 1:V", "10mW 1:V")
BROKEN = CLEAN.replace("1k 1% P_tot=250mW 1:V", "1V 1:V")
MODES = CLEAN + 'mode "low"\n  set PS1 6V\nend\n'


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    for name, text in (("clean", CLEAN), ("wrong", WRONG), ("broken", BROKEN), ("modes", MODES)):
        (tmp_path / f"{name}.netlist").write_text(text, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def run(*arguments: str) -> int:
    return main(arguments)


@pytest.mark.usefixtures("folder")
class TestStatus:
    @pytest.mark.parametrize("command", ["lint", "solve", "audit"])
    def test_clean_board_is_0(self, command: str) -> None:
        assert run(command, "clean.netlist") == 0

    def test_finding_is_1(self) -> None:
        assert run("audit", "wrong.netlist") == 1

    def test_fail_on_moves_the_threshold(self) -> None:
        # the only finding of the clean board below is a note on a missing rating
        Path("note.netlist").write_text(CLEAN.replace(" P_tot=250mW 1:M", " 1:M"), encoding="utf-8")
        assert run("audit", "note.netlist") == 0
        assert run("audit", "--fail-on", "warning", "note.netlist") == 0
        assert run("audit", "--fail-on", "note", "note.netlist") == 1
        assert run("audit", "--require-complete", "note.netlist") == 1
        assert run("audit", "--require-complete", "clean.netlist") == 0

    @pytest.mark.parametrize(
        ("arguments", "said"),
        [
            (["audit", "broken.netlist"], "broken.netlist:6:"),
            (["audit", "absent.netlist"], "absent.netlist"),
            (["audit", "--policy", "reckless", "clean.netlist"], "reckless"),
            (["audit", "--mode", "high", "modes.netlist"], "it has normal, low"),
            (["audit", "--set", "R1", "clean.netlist"], "--set R1"),
            (["audit", "--set", "R1=5V", "clean.netlist"], "--set"),
            (["audit", "--set", "R9=5k", "clean.netlist"], "R9"),
            (["audit", "--no-such-option", "clean.netlist"], "--no-such-option"),
            (["audit"], "NETLIST"),
            ([], "COMMAND"),
            (["nonsense"], "nonsense"),
            (["explain", "stress/powr"], "stress/power"),
            (["audit", "-o", "no/such/folder/x", "clean.netlist"], "cannot be written"),
        ],
    )
    def test_wrong_input_is_2_with_one_line(
        self, arguments: list[str], said: str, capsys: pytest.CaptureFixture[str]
    ) -> None:
        assert run(*arguments) == 2
        out, err = capsys.readouterr()
        assert out == ""
        assert len(err.splitlines()) == 1
        assert said in err

    def test_fault_of_ours_is_3_with_its_traceback(
        self, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        def fault(path: str, root: str | None, changes: object) -> None:
            raise ZeroDivisionError("wanted")

        monkeypatch.setattr("netaudit.circuit.load.load_board", fault)
        assert run("lint", "clean.netlist") == 3
        err = capsys.readouterr().err
        assert "Traceback" in err
        assert "ZeroDivisionError: wanted" in err

    def test_interrupt_is_130_without_a_traceback(
        self, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        def interrupt(path: str, root: str | None, changes: object) -> None:
            raise KeyboardInterrupt

        monkeypatch.setattr("netaudit.circuit.load.load_board", interrupt)
        assert run("lint", "clean.netlist") == 130
        assert "Traceback" not in capsys.readouterr().err

    def test_mode_without_a_point_makes_solve_1(self, monkeypatch: pytest.MonkeyPatch) -> None:
        from netaudit.circuit.circuit import Circuit
        from netaudit.solve.point import ModeResult

        def stuck(circuit: Circuit) -> ModeResult:
            return ModeResult(circuit, (), "searched", "", "nothing was found", "M")

        monkeypatch.setattr("netaudit.solve.operate.operate", stuck)
        assert run("solve", "clean.netlist") == 1


@pytest.mark.usefixtures("folder")
class TestJson:
    def read(self, capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, dict[str, object]]:
        status = run(*arguments, "--format", "json")
        out = capsys.readouterr().out

        def refuse(name: str) -> None:
            raise AssertionError(f"{name} is no JSON number")

        record: dict[str, object] = json.loads(out, parse_constant=refuse)
        return status, record

    def test_several_files_make_a_set_and_a_broken_one_hides_none(self, capsys: pytest.CaptureFixture[str]) -> None:
        status = run("audit", "--format", "json", "clean.netlist", "broken.netlist", "wrong.netlist")
        out, err = capsys.readouterr()
        record = json.loads(out)
        assert status == 2
        assert record["schema"] == "netaudit/audit-set/1"
        clean, broken, wrong = record["boards"]
        assert (clean["verdict"], wrong["verdict"]) == ("pass", "fail")
        assert set(broken) == {"netlist", "error"}
        assert broken["netlist"] == "broken.netlist"
        assert broken["error"] in err
        assert run("solve", "--format", "json", "clean.netlist", "wrong.netlist") == 0
        assert json.loads(capsys.readouterr().out)["schema"] == "netaudit/solve-set/1"
        assert run("lint", "--format", "json", "clean.netlist", "wrong.netlist") == 0
        assert json.loads(capsys.readouterr().out)["schema"] == "netaudit/lint-set/1"

    def test_set_changes_every_mode(self, capsys: pytest.CaptureFixture[str]) -> None:
        _, record = self.read(capsys, "solve", "--set", "R2=3k", "--set", "PS1=8V", "modes.netlist")
        volts = [mode["points"][0]["nets"]["M"] for mode in record["modes"]]  # type: ignore[index,attr-defined]  # JSON
        assert volts == pytest.approx([6.0, 6.0])

    def test_mode_picks_one(self, capsys: pytest.CaptureFixture[str]) -> None:
        _, record = self.read(capsys, "solve", "--mode", "low", "modes.netlist")
        assert [mode["mode"] for mode in record["modes"]] == ["low"]  # type: ignore[index,attr-defined]  # JSON

    def test_nominal_and_policy_reach_the_audit(self, capsys: pytest.CaptureFixture[str]) -> None:
        status, record = self.read(capsys, "audit", "--nominal", "--policy", "cautious", "clean.netlist")
        assert status == 0
        assert (record["policy"], record["nominal"]) == ("cautious", True)

    def test_output_goes_to_a_file_whole(self, folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
        assert run("audit", "--format", "json", "-o", "out.json", "clean.netlist") == 0
        assert capsys.readouterr().out == ""
        assert json.loads((folder / "out.json").read_text(encoding="utf-8"))["verdict"] == "pass"
        assert sorted(p.name for p in folder.glob("*.part")) == []


def test_version(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["--version"]) == 0
    assert capsys.readouterr().out == f"netaudit {__version__}\n"


def test_help_teaches_with_an_example(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["--help"]) == 0
    said = capsys.readouterr().out
    assert "netaudit audit board.netlist" in said
    assert "exit status" in said


def test_explain_without_a_name_lists_rules_and_kinds(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["explain"]) == 0
    said = capsys.readouterr().out
    assert "stress/power" in said
    assert "shunt-reference" in said
    assert main(["explain", "stress/power"]) == 0
    assert "T_ref" in capsys.readouterr().out
    assert main(["explain", "zener"]) == 0
    assert "V_Z" in capsys.readouterr().out


class _Terminal(io.StringIO):
    def isatty(self) -> bool:
        return True


def test_caret_only_on_a_terminal(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    stream = _Terminal()
    monkeypatch.setattr(sys, "stderr", stream)
    assert run("audit", "broken.netlist") == 2
    first, source, caret = stream.getvalue().splitlines()
    assert first.startswith("broken.netlist:6:")
    assert source.startswith("R1 resistor 1V")
    assert caret.strip() == "^^"
    assert source[caret.index("^") :].startswith("1V")


def test_control_characters_of_input_do_not_reach_the_terminal(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (folder / "escape.netlist").write_text(CLEAN.replace("resistor 1k", "resistor 1\x1b[31mk"), encoding="utf-8")
    stream = _Terminal()
    monkeypatch.setattr(sys, "stderr", stream)
    assert run("audit", "escape.netlist") == 2
    assert "\x1b" not in stream.getvalue()


def test_broken_pipe_is_quiet(folder: Path) -> None:
    reader, writer = os.pipe()
    os.close(reader)
    done = subprocess.run(
        [sys.executable, "-m", "netaudit", "audit", "--format", "json", "clean.netlist"],
        stdout=writer, stderr=subprocess.PIPE, cwd=folder, check=False,
    )  # fmt: skip
    os.close(writer)
    assert done.stderr == b""
    assert done.returncode == 0


def test_terminal_of_another_encoding_gets_escapes(folder: Path) -> None:
    (folder / "title.netlist").write_text(CLEAN.replace("divider", "Gewächshaus 電圧"), encoding="utf-8")
    for arguments in (["title.netlist"], ["--format", "json", "title.netlist"]):
        done = subprocess.run(
            [sys.executable, "-m", "netaudit", "audit", *arguments],
            capture_output=True, cwd=folder, env={**os.environ, "PYTHONIOENCODING": "latin-1"}, check=False,
        )  # fmt: skip
        assert (done.returncode, done.stderr) == (0, b"")
    assert json.loads(done.stdout.decode("latin-1"))["verdict"] == "pass"


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="needs a device that is always full")
def test_full_disk_is_one_line(folder: Path) -> None:
    with open("/dev/full", "wb") as full:
        done = subprocess.run(
            [sys.executable, "-m", "netaudit", "audit", "clean.netlist"],
            stdout=full, stderr=subprocess.PIPE, cwd=folder, check=False,
        )  # fmt: skip
    assert done.returncode == 2
    assert len(done.stderr.splitlines()) == 1
    assert b"cannot be written" in done.stderr


def test_lint_starts_without_heavy_libraries(folder: Path) -> None:
    script = (
        "import sys; from netaudit.cli.main import main; status = main(['lint', '--format', 'json', 'clean.netlist']); "
        "print([m for m in ('scipy', 'rich', 'networkx', 'matplotlib') if m in sys.modules], file=sys.stderr); "
        "sys.exit(status)"
    )
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, cwd=folder, check=False)
    assert (done.returncode, done.stderr.strip()) == (0, "[]")
    assert json.loads(done.stdout)["schema"] == "netaudit/lint/1"


def test_entry_point_exits_with_the_status(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "argv", ["netaudit", "audit", "wrong.netlist"])
    with pytest.raises(SystemExit) as done:
        main_module.run()
    assert done.value.code == 1
