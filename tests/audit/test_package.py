"""Packages of several devices: opened into their block, judged by what they draw together."""

from __future__ import annotations

from pathlib import Path

import pytest

import netaudit

TABLE = """
[DUAL-OUT]
block = "dual_out"
pins = { "1" = "OA", "2" = "OB", "3" = "VDD", "4" = "VSS" }
[DUAL-OUT.ratings]
I_max = "50mA"
"""
BOARD = """netlist 1
parts "parts.toml"
ground GND
ambient 25degC
PS1 supply 5V 4.5V..5.5V +:V5 -:GND
block dual_out OA OB VDD VSS
A driver high R_high=20ohm R_low=20ohm I_max=40mA OUT:OA V:VDD G:VSS
B driver high R_high=20ohm R_low=20ohm I_max=40mA OUT:OB V:VDD G:VSS
end
U1 unmodelled part=DUAL-OUT 1:X 2:Y 3:V5 4:GND
R1 resistor {ohms} P_tot=1W 1:X 2:GND
R2 resistor {ohms} P_tot=1W 1:Y 2:GND
"""


@pytest.mark.parametrize(("ohms", "over"), [(150, True), (220, False)])
def test_the_sum_over_a_rail_counts(tmp_path: Path, ohms: int, over: bool) -> None:
    (tmp_path / "parts.toml").write_text(TABLE)
    (tmp_path / "b.netlist").write_text(BOARD.format(ohms=f"{ohms}R"))
    audit = netaudit.load(str(tmp_path / "b.netlist")).audit()
    stress = next(s for s in audit.stresses if s.quantity == "package-current" and s.pin == "V5")
    assert stress.device == "U1"
    assert stress.worst == pytest.approx(2 * 5.5 / (ohms + 20), rel=1e-6)
    found = [f for f in audit.findings if f.rule == "stress/package-current"]
    assert bool(found) is over
    assert all((f.device, f.line) == ("U1", 10) for f in found)
    assert not [f for f in audit.findings if f.rule == "stress/current"]
