"""Parts with a whole measured curve: the points, the origin, both directions, specimens."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import netaudit
from netaudit.failure import InputError
from netaudit.interface import LoadedBoard

LED = '["1.75V @ 1mA", "1.95V @ 10mA", "2.10V @ 20mA"]'
ZENER = '["4.9V @ 1mA", "5.1V @ 5mA", "5.3V @ 20mA"]'


def board(folder: Path, kind: str, points: str, netlist: str, more: str = "") -> LoadedBoard:
    row = f'[X]\nkind = "{kind}"\npoints = {points}\n{more}\n'
    (folder / "parts.toml").write_text(row, encoding="utf-8")
    path = folder / "board.netlist"
    path.write_text(f'netlist 1\nparts "parts.toml"\nground GND\nambient 25degC\n{netlist}', encoding="utf-8")
    return netaudit.load(str(path))


def driven(folder: Path, kind: str, points: str, amperes: str, pins: str) -> float:
    text = f"I1 current-source {amperes} +:A -:GND\nD1 {kind} part=X {pins}\n"
    return board(folder, kind, points, text).solve()[0].points[0].nets["A"]


def held(folder: Path, kind: str, points: str, volts: float, pins: str, pin: str) -> float:
    text = f"PS1 supply {volts!r}V sinks=yes +:A -:GND\nD1 {kind} part=X {pins}\n"
    return float(board(folder, kind, points, text).solve()[0].points[0].view("D1").i(pin))


@pytest.mark.parametrize(("amperes", "volts"), [("1mA", 1.75), ("10mA", 1.95), ("20mA", 2.10)])
def test_curve_of_a_led_passes_through_its_points(tmp_path: Path, amperes: str, volts: float) -> None:
    assert driven(tmp_path, "led", LED, amperes, "A:A K:GND") == pytest.approx(volts, rel=1e-9)


@settings(max_examples=12, deadline=None, derandomize=True)
@given(volts=st.floats(-30, 1.749))
def test_below_its_first_point_a_led_neither_delivers_nor_conducts_backwards(
    tmp_path_factory: pytest.TempPathFactory, volts: float
) -> None:
    current = held(tmp_path_factory.mktemp("led"), "led", LED, volts, "A:A K:GND", "A")
    assert current * volts >= 0.0
    assert current <= 1e-3
    if volts < 0.0:
        assert current == pytest.approx(volts * 1e-19, rel=1e-6)


def test_curve_of_a_zener_runs_from_cathode_to_anode(tmp_path: Path) -> None:
    assert driven(tmp_path, "zener", ZENER, "5mA", "K:A A:GND") == pytest.approx(5.1, rel=1e-6)
    # its forward direction was not measured: a plain junction stands there
    assert 0.6 < driven(tmp_path, "zener", ZENER, "5mA", "A:A K:GND") < 0.8


def test_zener_measured_in_both_directions_needs_no_other_junction(tmp_path: Path) -> None:
    both = '["-0.9V @ -20mA", "-0.8V @ -5mA", "0V @ 0A", "4.9V @ 1mA", "5.1V @ 5mA"]'
    assert driven(tmp_path, "zener", both, "5mA", "A:A K:GND") == pytest.approx(0.8, rel=1e-9)
    assert driven(tmp_path, "zener", both, "5mA", "K:A A:GND") == pytest.approx(5.1, rel=1e-9)


@pytest.mark.parametrize("forward", ['"0.8V @ 5mA"', ""])
def test_zener_measured_from_anode_to_cathode_breaks_down_the_same_way(tmp_path: Path, forward: str) -> None:
    turned = f'["-5.1V @ -5mA", "-4.9V @ -1mA", "0V @ 0A", {forward}]'
    assert driven(tmp_path, "zener", turned, "5mA", "K:A A:GND") == pytest.approx(5.1, rel=1e-6)
    assert 0.6 < driven(tmp_path, "zener", turned, "5mA", "A:A K:GND") < 0.81


def test_zener_measured_in_forward_direction_only_is_not_audited(tmp_path: Path) -> None:
    text = "PS1 supply 12V +:B -:GND\nR1 resistor 1k 1:B 2:A\nD1 zener part=X K:A A:GND\n"
    found = board(tmp_path, "zener", '["0V @ 0A", "0.6V @ 1mA", "0.7V @ 10mA"]', text).audit().findings
    assert [f.device for f in found if f.rule == "part/no-model"] == ["D1"]


@pytest.mark.parametrize("pins", ["1:A 2:GND", "2:A 1:GND"])
def test_two_way_suppressor_measured_one_way_is_the_same_both_ways(tmp_path: Path, pins: str) -> None:
    assert driven(tmp_path, "suppressor", ZENER, "5mA", pins) == pytest.approx(5.1, rel=1e-9)


def test_curve_beside_parameters_is_two_models(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="a measured curve and I_S are two models"):
        board(tmp_path, "led", LED, "D1 led part=X I_S=1nA A:A K:GND\n").solve()


def test_spread_moves_a_measured_curve_and_the_worst_case_sees_it(tmp_path: Path) -> None:
    text = "I1 current-source 20mA +:A -:GND\nD1 led part=X P_tot=100mW A:A K:GND\n"
    audit = board(tmp_path, "led", LED, text, 'spread = { V_F = "0.15V" }').audit()
    power = next(s for s in audit.stresses if (s.device, s.quantity) == ("D1", "power"))
    assert power.worst == pytest.approx(0.02 * 2.25, rel=1e-9)


def test_bridge_of_measured_diodes_rectifies(tmp_path: Path) -> None:
    rows = '["0V @ 0A", "0.6V @ 1mA", "0.9V @ 1A"]'
    for sign in (1, -1):
        text = (
            f"I1 current-source {sign * 0.5}A +:A -:B\nD1 bridge part=X AC1:A AC2:B +:P -:GND\n"
            "R1 resistor 10ohm 1:P 2:GND\nR2 resistor 1M 1:B 2:GND\n"
        )
        point = board(tmp_path, "bridge", rows, text).solve()[0].points[0]
        assert point.nets["P"] == pytest.approx(5.0, rel=1e-4)


def test_curve_keeps_its_data_as_it_is(tmp_path: Path) -> None:
    """A source such as a photovoltaic cell may deliver: straight on with the end slopes, no origin added."""
    assert held(tmp_path, "curve", '["1V @ -1A", "2V @ 0A"]', 0.5, "+:A -:GND", "+") == pytest.approx(-1.5)
    with pytest.raises(InputError, match="two points at least"):
        held(tmp_path, "curve", '["1V @ 1A"]', 0.5, "+:A -:GND", "+")
