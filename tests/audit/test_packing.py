"""Rows that do not disturb each other: nothing wanted is lost, and values moved together are told apart."""

from __future__ import annotations

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

import netaudit
from netaudit.audit.packing import Wanted, pack, together


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 2**32 - 1), st.integers(1, 30), st.integers(1, 12))
def test_every_wanted_row_stands_in_a_packed_one(seed: int, count: int, width: int) -> None:
    rng = np.random.default_rng(seed)
    wanted = [Wanted(rng.integers(0, 2, width).astype(float), rng.random(width) < 0.3) for _ in range(count)]
    rows, where = pack(wanted)
    assert len(rows) <= count
    for one, at in zip(wanted, where, strict=True):
        assert (rows[at][one.matters] == one.values[one.matters]).all()


@settings(max_examples=60, deadline=None)
@given(st.integers(0, 2**32 - 1), st.integers(1, 20), st.integers(1, 15))
def test_no_quantity_depends_on_two_values_of_a_group(seed: int, quantities: int, width: int) -> None:
    pattern = np.random.default_rng(seed).random((quantities, width)) < 0.2
    groups = together(pattern)
    assert (groups.sum(axis=0) == 1).all()
    for group in groups:
        assert (pattern[:, group].sum(axis=1) <= 1).all()


def channels(count: int) -> str:
    """Independent indicator channels on one rail; each has its own closed form."""
    lines = ["netlist 1", "ground GND", "PS1 supply 12V 10V..14V +:V -:GND"]
    for k in range(count):
        lines += [
            f"R{k}A resistor {100 + k}R 5% P_tot=250mW 1:V 2:M{k}",
            f"R{k}B resistor {200 + k}R 10% P_tot=250mW 1:M{k} 2:GND",
        ]
    return "\n".join(lines) + "\n"


def test_a_board_of_many_channels_has_the_worst_case_of_each_channel_alone() -> None:
    audit = netaudit.loads(channels(60)).audit()
    found = {s.device: s for s in audit.stresses if s.quantity == "power"}
    for k in range(60):
        (low, high), (small, large) = ((100 + k) * 0.95, (100 + k) * 1.05), ((200 + k) * 0.9, (200 + k) * 1.1)
        # power in the larger one rises as its partner falls; its own value is searched at both ends and at the match
        upper = max(14.0**2 * a / (a + small) ** 2 for a in (low, high))
        lower = max(14.0**2 * b / (b + low) ** 2 for b in (small, large, min(max(low, small), large)))
        assert abs(found[f"R{k}A"].worst / upper - 1) < 1e-9
        assert abs(found[f"R{k}B"].worst / lower - 1) < 1e-9
        assert set(found[f"R{k}A"].corner) == {"PS1", f"R{k}A", f"R{k}B"}


def indicators(count: int) -> str:
    """LEDs that heat, each behind its resistor on one rail: two unknowns a channel and one more for the rail."""
    led = "led I_S=1e-18 n=2 R_S=2ohm I_F=20mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=400K/W"
    lines = ["netlist 1", "ground GND", "ambient 25degC 0degC..50degC", "PS1 supply 12V 10V..14V R=1mohm +:V -:GND"]
    for k in range(count):
        lines += [f"R{k} resistor 1k 5% P_tot=250mW 1:V 2:A{k}", f"D{k} {led} A:A{k} K:B{k}", f"X{k} link 1:B{k} 2:GND"]
    return "\n".join(lines) + "\n"


def test_a_board_beyond_the_dense_solver_heats_like_one_channel() -> None:
    def junction(count: int) -> float:
        audit = netaudit.loads(indicators(count)).audit(nominal=True)
        return next(s.worst for s in audit.stresses if (s.device, s.quantity) == ("D0", "junction-temperature"))

    # the rail's milliohm couples the channels a little: 70 of them take 0.8 A
    assert np.isclose(junction(70), junction(1), rtol=1e-4)


def test_corners_with_heat_are_the_same_by_chords_and_by_full_steps() -> None:
    found = {s.quantity: s.worst for s in netaudit.loads(indicators(21)).audit().stresses if s.device == "D0"}
    alone = {s.quantity: s.worst for s in netaudit.loads(indicators(1)).audit().stresses if s.device == "D0"}
    assert found.keys() == alone.keys()
    assert all(np.isclose(found[q], alone[q], rtol=1e-4, atol=1e-12) for q in found)
