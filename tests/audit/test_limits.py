"""Ratings at the actual temperature and the policy's share of them."""

from __future__ import annotations

from pathlib import Path

import pytest

import netaudit
from tests.audit.helper import HEAD, audited, loud, one, stress

HEATED = "netlist 1\nground GND\nambient 25degC 0degC..85degC\n"


def test_resistor_power_falls_from_70_to_155_degrees() -> None:
    # linear derating of film resistors from 70 degC to the limiting temperature of the element (common practice)
    audit = netaudit.loads(HEATED + "PS1 supply 10V +:V -:GND\nR1 resistor 100R P_tot=1W 1:V 2:GND\n").audit()
    found = stress(audit, "R1", "power")
    assert found.rating == pytest.approx((155 - 85) / (155 - 70))
    assert found.corner == {"ambient": 85.0}
    assert loud(audit) == {("stress/power", "R1", "error")}


def test_semiconductor_power_falls_from_25_degrees_to_its_junction_limit() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=2W 1:V 2:A\n"
        "D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=450K/W A:A K:GND\n"
    )
    hot = netaudit.loads(HEATED + text).audit()
    assert stress(hot, "D1", "power").rating == pytest.approx(0.075 * (100 - 85) / (100 - 25))


def test_rating_by_pairs_is_straight_between_them() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=2W 1:V 2:A\n"
        'D1 led I_S=1e-18A n=2 I_F="25mA @ 25degC;0mA @ 100degC" V_R=5V A:A K:GND\n'
    )
    hot = netaudit.loads(HEATED + text).audit()
    assert stress(hot, "D1", "forward-current").rating == pytest.approx(0.025 * 15 / 75)


def test_limit_of_zero_has_no_ratio_and_comes_first() -> None:
    text = (
        "netlist 1\nground GND\nambient 160degC\nPS1 supply 10V +:V -:GND\nR1 resistor 100R P_tot=5W 1:V 2:GND\n"
        "C1 capacitor 1u V_R=5V 1:V 2:GND\n"
    )
    audit = netaudit.loads(text).audit()
    first = audit.stresses[0]
    assert (first.device, first.limit, first.ratio) == ("R1", 0.0, None)
    assert loud(audit) == {("stress/power", "R1", "error"), ("stress/voltage", "C1", "error")}


def test_case_referred_power_needs_a_heat_path() -> None:
    text = (
        "PS1 supply 5V +:V -:GND\nR1 resistor 1k P_tot=2W 1:V 2:B\n"
        "Q1 npn I_S=1e-14A beta_F=100 beta_R=1 I_C=1A V_CEO=40V P_tot=20W T_j=150degC R_th_jc=5K/W B:B C:B E:GND\n"
    )
    alone = audited(text)
    assert stress(alone, "Q1", "power").rating is None
    assert not alone.complete
    assert "heat path" in " ".join(f.message for f in alone.findings if f.rule == "part/no-rating")
    sink = audited(text + "same-heat Q1 R_th=10K/W\n")
    found = stress(sink, "Q1", "power")
    # the case stands 10 K/W above the ambient: P_tot (T_j - T_c) / (T_j - 25)
    assert found.rating == pytest.approx(20 * (150 - 25 - 10 * found.worst) / 125, rel=1e-6)
    assert sink.complete


def test_lower_of_two_reverse_voltages_counts() -> None:
    text = (
        "PS1 supply 60V +:V -:GND\nR1 resistor 1k P_tot=5W 1:V 2:A\n"
        "D1 diode I_S=1nA n=1.8 I_F=1A V_R=50V V_RRM=100V K:A A:GND\n"
    )
    assert stress(audited(text), "D1", "reverse-voltage").rating == 50.0


def test_policy_warns_above_its_share_and_the_rating_stays() -> None:
    text = "PS1 supply 10V +:V -:GND\nR1 resistor 100R P_tot=1.5W 1:V 2:GND\n"
    assert loud(audited(text)) == set()
    audit = audited(text, policy="cautious")
    # 1 W of 1.5 W is 67 %, above the 60 % of that policy
    found = one(audit, "stress/power")
    assert (found.level, found.rating, found.limit) == ("warning", 1.5, pytest.approx(0.9))
    assert found.ratio == pytest.approx(1 / 0.9)
    assert not audit.fails()
    assert audit.fails("warning")


def test_policy_without_a_row_is_said(tmp_path: Path) -> None:
    rows = tmp_path / "ours.toml"
    rows.write_text('[resistor]\nP_tot = "50%"\n[capacitor]\nV_R = "100%"\n', encoding="utf-8")
    text = "PS1 supply 10V +:V -:GND\nR1 resistor 100R P_tot=1.5W 1:V 2:W\nF1 fuse 1A 1:W 2:GND\n"
    audit = audited(text, policy=str(rows))
    assert one(audit, "stress/power").limit == pytest.approx(0.75)
    assert audit.without_row == ("fuse current",)
    assert audited(text).without_row == ()


def test_pin_limits_of_an_unmodelled_part(tmp_path: Path) -> None:
    (tmp_path / "parts.toml").write_text(
        '[LOGIC]\nkind = "unmodelled"\n[LOGIC.ratings.pins]\nIO = "-0.3V..3.6V"\nLOW = "-0.3V..3.6V"\n',
        encoding="utf-8",
    )
    board = tmp_path / "board.netlist"
    board.write_text(
        HEAD
        + 'parts "parts.toml"\nPS1 supply 5V +:V -:GND\nPS2 supply -1V sinks=yes +:N -:GND\n'
        + "R1 resistor 1k P_tot=1W 1:V 2:N\nU1 unmodelled part=LOGIC IO:V LOW:N GND:GND\n"
        + 'covered U1 "bench" no-current\n',
        encoding="utf-8",
    )
    audit = netaudit.load(str(board)).audit()
    found = {f.pin: (f.value, f.limit, f.ratio) for f in audit.findings if f.rule == "stress/pin-voltage"}
    assert found["IO"] == (5.0, 3.6, pytest.approx(5 / 3.6))
    assert found["LOW"] == (-1.0, -0.3, pytest.approx(1 / 0.3))
    assert audit.coverage.covered == 1


def test_a_regulator_whose_input_is_left_open_is_out_of_headroom() -> None:
    text = "PS1 supply 12V +:V -:GND\n{}\nU1 regulator 5V V_drop=1V V_I=20V I_O=1A IN:{} OUT:O GND:GND\nR1 resistor 1k 1:O 2:GND\n"
    found = one(audited(text.format("R2 resistor 1k 1:V 2:GND", "nc")), "point/drop-out")
    assert (found.level, found.device, found.limit) == ("error", "U1", 6.0)
    unpowered = text.replace("12V", "0V").format("R2 resistor 1k 1:V 2:GND", "V")
    assert not [f for f in audited(unpowered).findings if f.rule == "point/drop-out"]
