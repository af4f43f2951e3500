"""What mends failing checks, against hand calculation."""

from __future__ import annotations

import json

import pytest

import netaudit
from netaudit.audit.audit import audit
from netaudit.audit.mend import key, mends, near
from netaudit.cli.main import main
from netaudit.workers import Unwatched, Workers

HEAD = "netlist 1\nground GND\nambient 25degC\n"
#: 12 V over 330 ohm - 5 %: 0.459 W on 125 mW; at least 12^2 / 0.125 / 0.95 = 1213 ohm, so 1.3 kohm of E24, or 0.5 W
HOT = HEAD + "PS1 supply 12V +:A -:GND\nR1 resistor 330R 5% P_tot=125mW 1:A 2:GND\n"


def changes(text: str) -> dict[str, list[tuple[str, str, float]]]:
    found = mends(netaudit.loads(text).board)
    return {m.finding.rule: [(c.device, c.name, c.new) for c in m.changes] for m in found.mends}


def test_the_next_value_and_the_next_size() -> None:
    """ln(1300/330) = 1.371 is less than ln(4) = 1.386."""
    assert changes(HOT) == {"stress/power": [("R1", "value", 1300.0), ("R1", "P_tot", 0.5)]}


def test_a_change_that_makes_a_new_finding_is_none() -> None:
    """5 mA at least through R1 at the high end: at most 12 / 5 mA / 1.05 = 2286 ohm; 20 mA: at most 571 ohm."""
    assert changes(HOT + "expect current R1 5mA..\n")["stress/power"][0] == ("R1", "value", 1300.0)
    assert changes(HOT + "expect current R1 20mA..\n") == {"stress/power": [("R1", "P_tot", 0.5)]}


def test_a_requirement_is_met_by_another_value() -> None:
    """A divider of 12 V to 4.9..5.1 V without spread: 6 V; R2 = 7.2 kohm (40.8 %..42.5 % of 12 V: 6.9..7.4 kohm) is not in
    E24, and neither 10 kohm above 13.5..14.5 kohm: none; with 4.5..5.1 V 6.8 kohm (4.86 V) mends it."""
    text = HEAD + "PS1 supply 12V +:A -:GND\nR1 resistor 10k P_tot=1W 1:A 2:B\nR2 resistor 10k P_tot=1W 1:B 2:GND\n"
    assert changes(text + "expect voltage B 4.5V..5.1V\n") == {"expect/missed": [("R2", "value", 6800.0)]}
    assert changes(text + "expect voltage B 4.99V..5.01V\n") == {"expect/missed": []}


def test_classes_of_voltages_and_currents() -> None:
    """C1 sees 12 V on 10 V: 16 V; the fuse's value is no class; D1 sees 12 V on 5 V: 12.5 V of R10."""
    text = HEAD + "PS1 supply 12V +:A -:GND\nC1 capacitor 10u V_R=10V +:A -:GND\nR1 resistor 10k P_tot=1W 1:A 2:GND\n"
    assert changes(text)["stress/voltage"] == [("C1", "V_R", 16.0)]
    text = (
        HEAD
        + "PS1 supply 12V +:A -:GND\nD1 diode I_S=1nA I_F=1A V_R=5V K:A A:GND\nR1 resistor 10k P_tot=1W 1:A 2:GND\n"
    )
    assert changes(text)["stress/reverse-voltage"] == [("D1", "V_R", 12.5)]


@pytest.mark.parametrize("name", ["valve_board_faulty", "power_entry", "relay_driver"])
def test_what_is_said_to_mend_does(name: str) -> None:
    board = netaudit.load(f"sample_netlists/{name}.netlist").board
    before = {key(f): f.level for f in audit(board).findings}
    for mend in mends(board).mends:
        for change in mend.changes:
            after = {key(f): f.level for f in audit(change.apply(board)).findings}
            assert after.get(key(mend.finding)) != "error"
            assert {k for k, level in after.items() if level != "note"} <= set(before)


def test_resistors_across_a_busy_net_are_not_near() -> None:
    loads = "".join(f"R{k} resistor 1k P_tot=1W 1:A 2:GND\n" for k in range(2, 30))
    board = netaudit.loads(HOT + loads)
    (finding,) = [f for f in board.audit().findings if f.level == "error"]
    assert near(board.board, finding) == ["R1"]


def test_an_interruption_is_told() -> None:
    class Stopped(Unwatched):
        left = 3

        def step(self, number: int) -> None:
            self.left -= 1

        @property
        def stopping(self) -> bool:  # type: ignore[override]
            return self.left <= 0

    assert mends(netaudit.loads(HOT).board, workers=Workers(watch=Stopped())).partial


def test_the_command(tmp_path: object, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(str(tmp_path))
    with open("hot.netlist", "w", encoding="utf-8") as file:
        file.write(HOT)
    assert main(["size", "hot.netlist", "--all-failing"]) == 0
    assert capsys.readouterr().out.splitlines()[1] == (
        "  stress/power R1, mode normal: R1 330 ohm -> 1.3 kohm, or R1 P_tot 125 mW -> 500 mW"
    )
    assert main(["size", "hot.netlist", "--all-failing", "--format", "json"]) == 0
    told = json.loads(capsys.readouterr().out)
    assert told["schema"] == "netaudit/size-set/1"
    assert told["checks"][0]["finding"]["device"] == "R1"
    assert told["checks"][0]["changes"][1] == {"device": "R1", "name": "P_tot", "unit": "W", "from": 0.125, "to": 0.5}
    assert main(["size", "hot.netlist"]) == 2
    assert main(["size", "hot.netlist", "R1", "--all-failing"]) == 2
