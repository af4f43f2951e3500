"""A batch for the tests of machine-readable reports, and their golden files.  Regenerate them with

python -m tests.report.machine
"""

from __future__ import annotations

import os
import re
from dataclasses import replace
from pathlib import Path

import pytest

import netaudit
from netaudit.audit.batch import Batch, BoardResult
from netaudit.audit.records import Audit
from netaudit.finding import Waived
from netaudit.place import Place
from netaudit.report.formats import FORMATS

HERE = Path(__file__).parent
ENDINGS = {"sarif": "sarif", "junit": "xml", "markdown": "md", "csv": "csv", "json": "json"}
_NUMBER = re.compile(r"(?<![\w.])-?\d+(?:\.\d+)?(?:e-?\d+)?")

VENT = """netlist 1
title "Greenhouse vent, indicator"
ground GND
ambient 25degC -20degC..60degC
PS1 supply 12V 10.8V..13.2V I_max=1A +:VIN -:GND
R1 resistor 330R 5% P_tot=125mW V_max=200V 1:VIN 2:A
D1 led material=red I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=300K/W A:A K:GND
R2 resistor 10k 5% P_tot=125mW V_max=200V 1:VIN 2:DANGLING
U1 unmodelled VCC:VIN GND:GND
expect current D1 1mA..20mA
expect voltage A 1V..3V
"""
PUMP = """netlist 1
ground GND
ambient 25degC
PS1 supply 5V 4.9V..5.1V I_max=1A +:VCC -:GND
R1 resistor 1k 1% P_tot=100mW V_max=50V 1:VCC 2:GND
"""


def board(name: str, text: str, policy: str = "cautious") -> BoardResult:
    audit = netaudit.loads(text, name).audit(policy)
    return BoardResult(name, audit, audit.fails())


def waived(result: BoardResult, rule: str) -> BoardResult:
    """The result with the findings of a rule waived."""
    audit = result.audit
    assert audit is not None
    waiver = Waived("measured on ten boards, 21 mA at most", "TEST-17", "2031-01-01")
    found = tuple(replace(f, waived=waiver) if f.rule == rule else f for f in audit.findings)
    changed: Audit = replace(audit, findings=found)
    return replace(result, audit=changed, failed=changed.fails())


def batch() -> Batch:
    """A board with errors, a waiver, a part without a model and expectations; a clean one; one that cannot be read."""
    broken = BoardResult(
        "boards/door.netlist", None, True, "boards/door.netlist:3:4: what is this?; mend it",
        Place("boards/door.netlist", 3, 4),
    )  # fmt: skip
    vent = waived(board("boards/vent.netlist", VENT), "stress/forward-current")
    return Batch((vent, board("boards/pump.netlist", PUMP), broken), "VERSION")


def report(name: str, made: Batch) -> str:
    """A report's text with a fixed time."""
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("SOURCE_DATE_EPOCH", "1893456000")
        return FORMATS[name].render(made)


def golden(name: str) -> Path:
    return HERE / "golden" / f"batch.{ENDINGS[name]}"


def same_text(one: str, other: str) -> None:
    """Equal but for the last digits of numbers, in which processors differ."""
    assert _NUMBER.sub("#", one) == _NUMBER.sub("#", other)
    for a, b in zip(_NUMBER.findall(one), _NUMBER.findall(other), strict=True):
        assert float(a) == pytest.approx(float(b), rel=2e-3, abs=1e-9)


def main() -> None:
    made = batch()
    for name in ENDINGS:
        golden(name).write_text(report(name, made), encoding="utf-8", newline="")


if __name__ == "__main__":
    os.makedirs(HERE / "golden", exist_ok=True)
    main()
