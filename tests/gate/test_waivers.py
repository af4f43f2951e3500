"""Waivers: what they cover, as far as what, how long; stale ones; wrong files."""

from __future__ import annotations

import datetime
import json
from pathlib import Path

import pytest

from netaudit.cli.main import main
from netaudit.failure import InputError
from netaudit.finding import Finding
from netaudit.gate.waive import waive
from netaudit.gate.waivers import Waivers, read_waivers
from netaudit.project.read import read_project

TODAY = datetime.date(2030, 6, 1)
BOARD = """netlist 1
ground GND
ambient 25degC
PS1 supply 12V 9V..15V +:V -:GND
R1 resistor 1k 1% P_tot=50mW V_max=50V 1:V 2:M
R2 resistor 1k 1% P_tot=50mW V_max=50V 1:M 2:GND
R3 resistor 1k P_tot=1W V_max=50V 1:V 2:LOST
mode "low"
  set PS1 6V
end
"""
WAIVER = """[[waiver]]
rule = "stress/power"
board = "b.netlist"
parts = ["R2", "R1"]
ratio = 1.14
reason = "pulsed: 10 % of the time"
reference = "TEST-4"
"""


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    Path("netaudit.toml").write_text('boards = ["*.netlist"]\nwaivers = ["waivers.toml"]\n', encoding="utf-8")
    Path("b.netlist").write_text(BOARD, encoding="utf-8")
    return tmp_path


def written(text: str) -> Waivers:
    Path("waivers.toml").write_text(text, encoding="utf-8")
    return read_waivers(read_project("netaudit.toml"))


def audit(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, dict[str, dict[str, object]]]:
    status = main(["audit", "--format", "json", "b.netlist", *arguments])
    found = json.loads(capsys.readouterr().out)["findings"]
    return status, {f"{f['rule']} {f['device'] or ''}".strip(): f for f in found}


@pytest.mark.usefixtures("folder")
def test_a_waived_finding_stays_visible_and_does_not_count(capsys: pytest.CaptureFixture[str]) -> None:
    written("format = 1\n")
    assert audit(capsys)[0] == 1
    written(f"format = 1\n{WAIVER}")
    status, found = audit(capsys)
    assert status == 0
    assert found["stress/power R1"]["level"] == "error"
    assert found["stress/power R1"]["waived"] == {
        "reason": "pulsed: 10 % of the time", "reference": "TEST-4", "until": "",
    }  # fmt: skip
    assert main(["audit"]) == 0
    said = capsys.readouterr().out
    assert "2 waived" in said
    assert "pulsed: 10 % of the time (TEST-4)" in said.replace("\n    ", " ")


@pytest.mark.usefixtures("folder")
def test_it_comes_back_when_its_ratio_grows(capsys: pytest.CaptureFixture[str]) -> None:
    written(f"format = 1\n{WAIVER.replace('1.14', '1.12')}")
    status, found = audit(capsys)
    assert status == 1
    assert found["stress/power R1"]["waived"] is None
    # 15 V over 990 ohm and 990 ohm of 1 %: 56.8 mW of 50 mW
    assert "ratio 1.14, waived 1.12" in str(found["stress/power R1"]["message"])
    assert "gate/stale-waiver" not in found


@pytest.mark.usefixtures("folder")
def test_without_a_ratio_it_covers_nothing_and_says_what_to_add(capsys: pytest.CaptureFixture[str]) -> None:
    written(f"format = 1\n{WAIVER.replace('ratio = 1.14', '')}")
    status, found = audit(capsys)
    assert status == 1
    assert "add ratio = 1.14" in str(found["stress/power R1"]["message"])


@pytest.mark.parametrize(
    ("text", "said"),
    [
        (WAIVER.replace('"R1"]', '"R1", "R9"]'), "the waiver of stress/power at R1, R2, R9 matches nothing at R9"),
        (WAIVER.replace('"R2", "R1"', '"R9"'), "matches nothing: remove it"),
        (WAIVER.replace("reason", 'mode = "low"\nreason'), "in mode low matches nothing"),
        (WAIVER.replace("reason", "until = 2020-01-31\nreason"), "has expired on 2020-01-31"),
    ],
)
@pytest.mark.usefixtures("folder")
def test_a_stale_one_is_a_finding(text: str, said: str, capsys: pytest.CaptureFixture[str]) -> None:
    written(f"format = 1\n\n{text}")
    _, found = audit(capsys)
    stale = found["gate/stale-waiver"]
    assert (stale["level"], stale["file"], stale["line"]) == ("warning", "waivers.toml", 3)
    assert said in str(stale["message"])
    # a part of the modes says nothing about waivers without a finding
    _, found = audit(capsys, "--mode", "normal")
    assert ("gate/stale-waiver" in found) == ("expired" in said)


@pytest.mark.usefixtures("folder")
def test_one_of_a_board_that_is_not_there_is_a_finding_of_the_project(capsys: pytest.CaptureFixture[str]) -> None:
    written(f"format = 1\n{WAIVER}{WAIVER.replace('b.netlist', 'gone.netlist')}")
    assert main(["audit", "--fail-on", "warning"]) == 1
    said = capsys.readouterr().out.replace("\n    ", " ")
    assert "names gone.netlist, which is no board of this project" in said
    assert main(["audit"]) == 0
    for name in ("sarif", "junit", "markdown", "json"):
        capsys.readouterr()
        main(["audit", "--report", f"{name}=-"])
        assert "gone.netlist" in capsys.readouterr().out
    assert main(["audit", "b.netlist"]) == 0
    assert "gone.netlist" not in capsys.readouterr().out


@pytest.mark.usefixtures("folder")
def test_lint_knows_them_too(capsys: pytest.CaptureFixture[str]) -> None:
    written("format = 1\n")
    assert main(["lint", "--fail-on", "warning"]) == 1
    written(
        'format = 1\n[[waiver]]\nrule = "graph/single-pin-net"\nboard = "b.netlist"\nnets = ["LOST"]\nreason = "kept"\n'
    )
    assert main(["lint", "--fail-on", "warning"]) == 0
    assert "1 waived" in capsys.readouterr().out


class TestMatch:
    """Matching is exact, and free of order."""

    def covers(self, row: str, finding: Finding) -> bool:
        every = written(f'format = 1\n[[waiver]]\nboard = "b"\nreason = "r"\n{row}\n').every
        (found,) = waive([finding], every, TODAY)
        return found.waived is not None

    @pytest.mark.parametrize(
        ("row", "covered"),
        [
            ('rule = "point/drop-out"\nparts = ["R1"]', True),
            ('rule = "point/drop-out"\nparts = ["R2", "R1"]', True),
            ('rule = "point/drop-out"\nparts = ["R1"]\nmode = "normal"', True),
            ('rule = "point/drop-out"\nparts = ["R1"]\nmode = "Normal"', False),
            ('rule = "point/drop-out"\nparts = ["r1"]', False),
            ('rule = "point/drop-out"\nparts = ["R"]', False),
            ('rule = "point/drop-out"\nparts = ["R11"]', False),
            ('rule = "point/drop-out"', False),
            ('rule = "point/drop-out"\nnets = ["R1"]', False),
            ('rule = "point/weak-drive"\nparts = ["R1"]', False),
            ('rule = "point/drop-out"\nparts = ["R1"]\nuntil = 2030-06-01', True),
            ('rule = "point/drop-out"\nparts = ["R1"]\nuntil = "2030-05-31"', False),
        ],
    )
    @pytest.mark.usefixtures("folder")
    def test_names(self, row: str, covered: bool) -> None:
        assert self.covers(row, Finding("point/drop-out", "error", "", device="R1", mode="normal")) == covered

    @pytest.mark.parametrize(
        ("value", "covered"), [(21.0, True), (22.0, True), (22.5, False), (0.5, False), (20.0, True)]
    )
    @pytest.mark.usefixtures("folder")
    def test_a_value_may_not_go_further_from_its_limit(self, value: float, covered: bool) -> None:
        finding = Finding("expect/missed", "error", "", device="D1", value=value, limit=20.0 if value > 1 else 1.0)
        assert self.covers('rule = "expect/missed"\nparts = ["D1"]\nvalue = 22', finding) == covered


@pytest.mark.parametrize(
    ("text", "line", "said"),
    [
        (WAIVER, 1, "old format"),
        (f"format = 0\n{WAIVER}", 1, "format 0"),
        (f"\nformat = 2\n{WAIVER}", 2, "too old for them"),
        ("format = 1\nwaivr = 1\n", 2, "did you mean waiver?"),
        ("format = 1\nwaiver = 1\n", 2, "write [[waiver]]"),
        (f"format = 1\n{WAIVER}\n{WAIVER}ruel = 1\n", 17, "did you mean rule?"),
        (f"format = 1\n{WAIVER.replace('reason', 'reference')}", 8, "not TOML"),
        ('format = 1\n[[waiver]]\nrule = "a/b"\nboard = "x"\n', 2, "without reason"),
        ('format = 1\n[[waiver]]\nrule = "a/b"\nboard = "x"\nreason = "  "\n', 2, "without reason"),
        (f"format = 1\n{WAIVER.replace('stress/power', 'stress/powr')}", 3, "did you mean stress/power?"),
        (f"format = 1\n{WAIVER.replace('stress/power', 'gate/worse')}", 3, "can be waived"),
        (f"format = 1\n{WAIVER}until = 'soon'\n", 9, "a date such as"),
        (f"format = 1\n{WAIVER}until = 5\n", 9, "a date, such as"),
        (f"format = 1\n{WAIVER.replace('1.14', 'true')}", 6, "a number"),
        ("format = 1\n" + WAIVER.replace('"R2", "R1"', ""), 5, "a list of texts"),
    ],
)
@pytest.mark.usefixtures("folder")
def test_what_is_wrong_is_refused_with_its_line(text: str, line: int, said: str) -> None:
    with pytest.raises(InputError) as refused:
        written(text)
    assert said in str(refused.value)
    assert refused.value.place is not None
    assert (refused.value.place.file, refused.value.place.line) == ("waivers.toml", line)
