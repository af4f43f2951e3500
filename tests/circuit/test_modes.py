"""Statements to circuits: modes and what they change, what is covered, heat paths, expectations, references."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.circuit.circuit import Board, Circuit
from netaudit.devices.base import Device
from netaudit.failure import InputError

HEAD = (
    "netlist 1\nground GND\nPS1 supply 12V 10V..14V +:V -:GND\nR1 resistor 1k 5% 1:V 2:A\nS1 switch closed 1:A 2:GND\n"
)


def board(text: str) -> Board:
    return netaudit.loads(HEAD + text).board


def modes(text: str) -> dict[str, Circuit]:
    return {c.mode: c for c in board(text).circuits}


def device(circuit: Circuit, name: str) -> Device:
    return next(d for d in circuit.devices if d.name == name)


def test_normal_is_there_unless_only_modes_are_wanted() -> None:
    text = 'mode "open"\n set S1 open\nend\n'
    assert list(modes(text)) == ["normal", "open"]
    assert list(modes("only modes\n" + text)) == ["open"]
    assert list(modes("")) == ["normal"]


def test_normal_may_be_written_itself() -> None:
    found = modes('mode "normal"\n set S1 open\nend\n')
    assert list(found) == ["normal"]
    assert device(found["normal"], "S1").words["state"] == "open"


def test_a_new_value_drops_the_range_and_an_absolute_tolerance_and_keeps_a_percentage() -> None:
    low = modes('R2 resistor 1k ±100ohm 1:V 2:GND\nmode "low"\n set PS1 5V\n set R1 2k\n set R2 2k\nend\n')["low"]
    assert (device(low, "PS1").values["value"].low, device(low, "PS1").values["value"].high) == (5.0, 5.0)
    assert device(low, "R1").values["value"].low == pytest.approx(1900.0)
    assert not device(low, "R2").values["value"].varies


def test_top_level_changes_hold_in_every_mode_and_a_mode_may_turn_them_back() -> None:
    found = modes('omit R1\nset S1 open\nmode "a"\n place R1\n set S1 closed\nend\n')
    assert [d.name for d in found["normal"].devices] == ["PS1", "S1"]
    assert [d.name for d in found["a"].devices] == ["PS1", "R1", "S1"]
    assert [device(c, "S1").words["state"] for c in found.values()] == ["open", "closed"]


def test_ambient_of_a_mode() -> None:
    found = modes('ambient 25degC -20degC..60degC\nmode "hot"\n ambient 70degC\nend\n')
    assert [c.ambient.nominal for c in found.values()] == [25.0, 70.0]
    assert (found["normal"].ambient.low, found["normal"].ambient.high) == (-20.0, 60.0)


def test_a_covered_part_draws_what_is_stated() -> None:
    result = netaudit.loads(
        HEAD + 'U1 unmodelled VCC:V GND:GND X:nc\ncovered U1 "bench" draws VCC:GND=80mA,60mA..120mA\n'
    ).solve()[0]
    assert result.points[0].view("PS1").i("+") == pytest.approx(-0.092)
    audit = netaudit.loads(HEAD + 'U1 unmodelled VCC:V GND:GND\ncovered U1 "bench" no-current\n').audit()
    assert audit.coverage.covered == 1
    assert audit.coverage.unmodelled == ()


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("set R9 1k\n", "no device R9; check the designator"),
        ("omit R9\n", "no device R9"),
        ("place R9\n", "no device R9"),
        ('mode "a"\n set R1 A\nend\n', "neither a value nor a state"),
        ('mode "a"\n set S1 shut\nend\n', "shut"),
        ('mode "a"\n set R1 1:V\nend\n', ":"),
        ('mode "a"\nend\nmode "a"\nend\n', "defined twice"),
        ("only modes\n", "no mode is defined"),
        ('covered R9 "x" no-current\n', "no device R9"),
        ('covered R1 "x" no-current\ncovered R1 "y" no-current\n', "covered twice"),
        ("same-heat R1 R9 R_th=10K/W\n", "no device R9"),
        ("same-heat R1 S1 R_th=10K/W\nsame-heat R1 S1 R_th=10K/W\n", "two heat paths"),
        ("expect voltage W 1V..2V\n", "no net W"),
        ('expect voltage A 1V..2V mode "b"\n', "no mode 'b'"),
        ("expect volts A 1V..2V\n", "did you mean voltage?"),
        ("expect voltage A 1A..2A\n", "is a current where a voltage is expected"),
        ("expect voltage A 2V..1V\n", "is reversed"),
        ("ambient 25\n", "needs one, as in 25degC"),
        ("ambient -300degC\n", "below absolute zero"),
    ],
)
def test_what_is_refused_says_so_at_its_place(text: str, said: str) -> None:
    with pytest.raises(InputError) as found:
        board(text)
    assert said in str(found.value)
    assert found.value.place is not None
    assert found.value.place.line >= 6


def test_a_circuit_without_reference_is_not_passed_over_by_solve(
    capsys: pytest.CaptureFixture[str], tmp_path: object
) -> None:
    from pathlib import Path

    from netaudit.cli.main import main

    path = Path(str(tmp_path)) / "floating.netlist"
    path.write_text("netlist 1\nPS1 supply 12V +:V -:W\nR1 resistor 1k 1:V 2:W\n", encoding="utf-8")
    assert main(["solve", str(path)]) == 1
    assert "error: no net is a reference" in capsys.readouterr().out
