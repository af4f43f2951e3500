"""Proofs of worst corners against all vertices, points inside and closed forms."""

from __future__ import annotations

import numpy as np
import pytest

import netaudit
from netaudit.audit.records import Stress
from netaudit.solve.box import Boxes
from netaudit.solve.operate import Operation
from netaudit.solve.sensitivity import assign, variables
from netaudit.solve.settle import Job
from tests.audit.proof_boards import HEAD, KINDS, broken, network, reference


def stresses(text: str, head: str = HEAD) -> dict[tuple[str, str], Stress]:
    return {(s.device, s.quantity): s for s in netaudit.loads(head + text).audit().stresses}


@pytest.mark.parametrize("seed", range(15))
def test_nothing_solved_contradicts_a_proof(seed: int) -> None:
    """All 2^k vertices and points inside: none above what is proven or bounded by more than 1e-9."""
    text = KINDS[seed % len(KINDS)](np.random.default_rng(seed), (3, 6, 21)[seed % 3])
    counts, wrong = broken(text, seed, inside=60)
    assert not wrong
    assert sum(counts.values()) > 0


def test_a_divider_is_proven_with_its_closed_form() -> None:
    """P of R2 in a divider from V: V^2 R2 / (R1 + R2)^2, largest at the least R1; R2 alone is below R1, so at its most."""
    found = stresses(
        "PS1 supply 10V 9V..11V +:A -:GND\nR1 resistor 1k 5% P_tot=1W 1:A 2:B\nR2 resistor 500R 10% P_tot=1W 1:B 2:GND\n"
    )
    one = found[("R2", "power")]
    assert (one.proof, one.bound) == ("proven", None)
    assert one.worst == pytest.approx(11**2 * 550 / (950 + 550) ** 2, rel=1e-9)
    assert found[("R1", "power")].worst == pytest.approx(11**2 * 950 / (950 + 450) ** 2, rel=1e-9)
    assert {s.proof for s in found.values()} == {"proven"}


def test_a_power_that_peaks_inside_is_bounded_not_proven() -> None:
    """Maximum power transfer at R2 = R1 inside the range of R2: V^2 / (4 R1)."""
    found = stresses(
        "PS1 supply 10V 9V..10V +:A -:GND\nR1 resistor 100ohm 1% P_tot=5W 1:A 2:B\n"
        "R2 resistor 100ohm 20% P_tot=5W 1:B 2:GND\n"
    )
    one = found[("R2", "power")]
    assert one.proof == "bounded"
    assert one.bound is not None
    assert one.worst <= one.bound <= 1.1 * one.worst


def test_a_bound_is_a_stress_in_its_own_unit() -> None:
    """By ratio to a limit that falls with the ambient: the bound is the value at the worst ambient."""
    head = "netlist 1\nground GND\nambient 25degC -20degC..112.5degC\n"
    found = stresses("PS1 supply 10V 9V..11V +:A -:GND\nR1 resistor 1k 5% P_tot=125mW 1:A 2:GND\n", head)
    one = found[("R1", "power")]
    assert one.proof == "proven"
    assert one.corner["ambient"] == 112.5
    assert one.limit == pytest.approx(0.0625)
    assert one.worst == pytest.approx(121 / 950)


def test_a_heated_junction_is_not_claimed() -> None:
    found = stresses(
        "PS1 supply 12V 10.8V..13.2V +:A -:GND\nR1 resistor 1k 5% P_tot=1W 1:A 2:B\n"
        "D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=450K/W A:B K:GND\n"
    )
    assert {s.proof for s in found.values()} == {"checked"}


def test_the_temperature_of_a_plain_resistor_is_proven() -> None:
    """T = T_ambient + R_th V^2 / R."""
    head = "netlist 1\nground GND\nambient 25degC 0degC..60degC\n"
    found = stresses(
        "PS1 supply 10V 9V..11V +:A -:GND\nR1 resistor 1k 5% P_tot=1W T_j=155degC R_th_ja=200K/W 1:A 2:GND\n", head
    )
    powers = found[("R1", "power")]
    assert powers.proof == "proven"


def test_nothing_varies_and_all_is_proven() -> None:
    assert {s.proof for s in stresses("PS1 supply 10V +:A -:GND\nR1 resistor 1k P_tot=1W 1:A 2:GND\n").values()} == {
        "proven"
    }


def test_only_sources_vary() -> None:
    found = stresses("PS1 supply 10V 9V..11V +:A -:GND\nR1 resistor 1k P_tot=1W 1:A 2:GND\n")
    assert {s.proof for s in found.values()} == {"proven"}


@pytest.mark.parametrize("seed", range(6))
def test_enclosures_hold_what_is_solved_inside(seed: int) -> None:
    """Outputs and their derivatives at points of the box lie in what was enclosed over it."""
    rng = np.random.default_rng(seed)
    text = (network, reference)[seed % 2](rng, 5.0)
    operation = Operation(netaudit.loads(text).board.circuits[0])
    operation.result()
    spans = variables(operation.solver)
    boxes = Boxes(operation.solver, operation.boards[0], spans)
    low, high = (np.array([getattr(v.quantity, side) for v in spans]) for side in ("low", "high"))
    system = operation.system
    pins = np.arange(len(system.pins))[None]
    found = boxes.enclose(low[None], high[None], pins)
    assert found.good[0]
    rows = low + (high - low) * rng.random((40, len(spans)))
    overrides, _ = assign(spans, rows, 25.0)
    start = operation.solver.job({}, None, len(rows))
    job = Job(overrides, 25.0, len(rows), np.repeat(operation.boards[0].u, len(rows), axis=0), start.t0)
    solved = operation.solver.settle(job).solved
    count = len(system.pins)
    current, volts = solved.handle_sums[:, :count], solved.pin_voltages
    room = 1e-9 * (1 + np.abs(volts)), 1e-9 * np.abs(current) + 1e-12
    assert (volts >= found.value.low[:, 2 * count :] - room[0]).all()
    assert (volts <= found.value.high[:, 2 * count :] + room[0]).all()
    assert (current >= found.value.low[:, count : 2 * count] - room[1]).all()
    assert (current <= found.value.high[:, count : 2 * count] + room[1]).all()
