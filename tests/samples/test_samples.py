"""Every sample netlist: its golden reports, Kirchhoff and Tellegen from its pins, and what it is there to show."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

import netaudit
from tests.samples.golden import HERE, ROOT, SAMPLES, reports


def head(text: str) -> str:
    """Verdict, coverage and findings: everything above the table, whose smallest entries are rounding."""
    return text.split("\npart ")[0]


def same(a: object, b: object, path: str = "") -> None:
    """Equal records; numbers to four digits, stresses far below their limits to a thousandth of it."""
    if isinstance(a, dict) and isinstance(b, dict):
        assert set(a) == set(b), path
        small = isinstance(a.get("ratio"), float) and a["ratio"] < 0.01
        for key in a:
            if not (small and key in ("corner", "worst", "nominal", "ratio")):
                same(a[key], b[key], f"{path}.{key}")
    elif isinstance(a, list) and isinstance(b, list):
        assert len(a) == len(b), path
        for k, (x, y) in enumerate(zip(a, b, strict=True)):
            same(x, y, f"{path}[{k}]")
    elif isinstance(a, float) and isinstance(b, float):
        assert a == pytest.approx(b, rel=1e-4, abs=1e-9), path
    else:
        assert a == b, path


def by_stress(record: dict[str, Any]) -> dict[str, Any]:
    """The record with its stresses in the order of their names, which rounding does not change."""
    record["stress"].sort(key=lambda s: (s["mode"], s["variant"] or "", s["device"], s["quantity"]))
    return record


@pytest.mark.parametrize("path", SAMPLES, ids=lambda p: p.stem)
def test_reports_are_the_golden_ones(path: Path) -> None:
    text, record = reports(path)
    assert head(text) == head((HERE / "golden" / f"{path.stem}.txt").read_text(encoding="utf-8"))
    golden = json.loads((HERE / "golden" / f"{path.stem}.json").read_text(encoding="utf-8"))
    same(by_stress(json.loads(record)), by_stress(golden))


@pytest.mark.parametrize("path", SAMPLES, ids=lambda p: p.stem)
def test_currents_balance_on_every_net_and_powers_over_the_board(path: Path) -> None:
    for result in netaudit.load(str(path), str(ROOT / "sample_netlists")).solve():
        assert result.points, result.failure
        for point in result.points:
            nets: dict[str, float] = {}
            total, turned = 0.0, 0.0
            for device in result.circuit.devices:
                view = point.view(device.name)
                for pin, net in device.pins.items():
                    current = float(view.i(pin))
                    nets[net] = nets.get(net, 0.0) + current
                    total += float(view.v(pin)) * current
                    turned += abs(float(view.v(pin)) * current)
            separate = [n for n in nets if n not in result.circuit.grounds]
            assert max(abs(nets[n]) for n in separate) < 1e-9
            assert abs(sum(nets[n] for n in result.circuit.grounds)) < 1e-9
            assert abs(total) <= 1e-9 * turned + 1e-15


def rules(name: str) -> set[tuple[str, str | None]]:
    audit = netaudit.load(str(ROOT / "sample_netlists" / name), str(ROOT / "sample_netlists")).audit()
    return {(f.rule, f.device) for f in audit.findings if f.level != "note"}


def test_the_board_with_six_defects_shows_all_six() -> None:
    assert {
        ("stress/power", "R1"),
        ("stress/reverse-voltage", "D2"),
        ("point/zener-starved", "D3"),
        ("point/back-feed", "PS2"),
        ("stress/reverse-polarity", "C1"),
        ("graph/single-pin-net", "R7"),
    } <= rules("valve_board_faulty.netlist")


def test_its_corrected_twin_is_clean() -> None:
    assert rules("valve_board.netlist") == set()


@pytest.mark.parametrize(
    ("sample", "change", "rule"),
    [
        ("power_entry.netlist", "PS1=19V", "stress/stand-off-voltage"),
        ("zener_reference.netlist", "R1=8k2", "point/zener-starved"),
        ("led_panel.netlist", "R1=150R", "stress/forward-current"),
        ("flyback.netlist", "L1=I_max=30mA", "stress/current"),
        ("sensor_bridge.netlist", "PS1=24V", "stress/power"),
        ("relay_driver.netlist", "R1=8k2", "point/weak-drive"),
        ("load_switch.netlist", "R1=100k", "point/weak-drive"),
        ("led_output.netlist", "R1=22R", "stress/current"),
        ("opto_input.netlist", "R1=330R", "stress/forward-current"),
        ("regulator.netlist", "PS1=6V", "point/drop-out"),
        ("batteries.netlist", "PS2=24V", "expect/missed"),
        ("shunt_reference.netlist", "R1=3k9", "point/zener-starved"),
    ],
)
def test_a_broken_twin_is_found(sample: str, change: str, rule: str) -> None:
    from netaudit.interface import LoadedBoard

    path = str(ROOT / "sample_netlists" / sample)
    name, value = change.split("=", 1)
    board = LoadedBoard.from_file(path, str(ROOT / "sample_netlists"), [f"{name}={value}"])
    assert rule in {f.rule for f in board.audit().findings if f.level != "note"}
