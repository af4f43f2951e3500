"""Worst cases, modes, variants, coverage and verdict of an audit."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.failure import InputError
from netaudit.solve.operate import Operation
from netaudit.solve.point import ModeResult
from tests.audit.helper import DIODE, HEAD, LED, ZENER, audited, loud, one, stress


def test_worst_corner_is_that_of_the_largest_ratio() -> None:
    audit = audited("PS1 supply 12V 9V..15V +:V -:GND\nR1 resistor 100R 10% P_tot=2W 1:V 2:GND\n")
    found = one(audit, "stress/power")
    # 15 V on 90 ohm
    assert found.value == pytest.approx(2.5, rel=1e-9)
    assert dict(found.corner) == pytest.approx({"PS1": 15.0, "R1": 90.0})
    assert found.rating == found.limit == 2.0
    assert "PS1 = 15 V, R1 = 90 ohm" in found.message
    assert stress(audit, "R1", "power").nominal == pytest.approx(1.44)


def test_nominal_looks_at_no_range() -> None:
    text = "PS1 supply 12V 9V..15V +:V -:GND\nR1 resistor 100R 10% P_tot=2W 1:V 2:GND\n"
    assert loud(audited(text, nominal=True)) == set()


def test_each_mode_has_its_finding_and_can_be_chosen() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nR1 resistor 100R P_tot=1W 1:V 2:M\nR2 resistor 220R P_tot=2W 1:M 2:GND\n"
        'S1 switch open I_max=1A 1:M 2:GND\nmode "short"\n  set S1 closed\nend\n'
    )
    assert one(audited(text), "stress/power").mode == "short"
    board = netaudit.loads(HEAD + text)
    assert [r.mode for r in board.audit(modes=["normal"]).results] == ["normal"]
    assert not board.audit(modes=["normal"]).fails()


def test_led_lit_in_one_mode_only_is_fine_and_a_part_audit_does_not_judge_it() -> None:
    text = (
        f"PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:A\nD1 {LED} A:A K:S\n"
        'S1 switch open I_max=1A 1:S 2:GND\nR2 resistor 10M P_tot=250mW 1:S 2:GND\nmode "lit"\n  set S1 closed\nend\n'
    )
    board = netaudit.loads(HEAD + text)
    assert loud(board.audit()) == set()
    assert loud(board.audit(modes=["normal"])) == set()


def test_led_that_is_lit_at_a_corner_only_counts_as_lit() -> None:
    text = f"PS1 supply 1V 0V..5V +:V -:GND\nR1 resistor 1k P_tot=500mW 1:V 2:A\nD1 {LED} A:A K:GND\n"
    assert loud(audited(text)) == set()
    assert loud(audited(text, nominal=True)) == {("point/never-conducts", "D1", "warning")}


@pytest.mark.parametrize(
    "parts",
    [
        # a connector, a capacitor: what hangs there may feed the net
        "J1 connector 1:W 2:GND\n",
        "C1 capacitor 1u V_R=25V 1:W 2:GND\n",
    ],
)
def test_blocking_diode_with_another_reason_is_not_reported(parts: str) -> None:
    text = f"PS1 supply 12V +:V -:GND\nD1 {DIODE} K:V A:W\nR1 resistor 1k P_tot=500mW 1:W 2:GND\n{parts}"
    assert loud(audited(text)) == set()


def test_back_feed_names_the_path_and_solves_the_mode_once_more() -> None:
    text = (
        f"PS1 supply 12V +:V -:GND\nPS2 supply 5V +:W -:GND\nR1 resistor 100R P_tot=2W 1:V 2:A\nD1 {DIODE} A:A K:W\n"
        "R2 resistor 1k P_tot=50mW 1:W 2:GND\n"
    )
    audit = audited(text)
    fed = one(audit, "point/back-feed")
    assert fed.device == "PS2"
    assert fed.net == "W"
    assert "by way of PS1, R1, D1" in fed.message
    # with PS2 open the rail rises: about (12 - 0.7) 1000 / 1100 = 10.3 V on 1k is 0.1 W, beyond 50 mW; at 5 V it is 25 mW
    over = one(audit, "stress/power")
    assert (over.device, over.variant) == ("R2", "PS2 open")
    assert over.value == pytest.approx(0.1, rel=0.1)
    assert stress(audit, "R2", "power").worst == pytest.approx(0.025)
    assert stress(audit, "R2", "power", variant="PS2 open").worst == over.value


@pytest.mark.parametrize(
    ("sinks", "fed"), [("sinks=70mA", False), ("sinks=20mA", True), ("sinks=no", True), ("", True)]
)
def test_back_feed_beyond_what_a_supply_absorbs(sinks: str, fed: bool) -> None:
    text = f"PS1 supply 12V +:V -:GND\nPS2 supply 5V {sinks} +:W -:GND\nR1 resistor 100R P_tot=2W 1:V 2:W\n"
    # (12 - 5) / 100 ohm = 70 mA, exactly at 70 mA passes
    assert (("point/back-feed", "PS2", "error") in loud(audited(text))) is fed


def test_limiting_supply_can_be_meant() -> None:
    text = "PS1 supply 12V limit=100mA limiting=ok +:V -:GND\nR1 resistor 10R P_tot=5W 1:V 2:GND\n"
    assert loud(audited(text)) == set()


def test_coverage_counts_every_part_once() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nR1 resistor 100R 1:V 2:W\nR2 resistor 100R 1% P_tot=1W 1:W 2:GND\n"
        'U1 unmodelled VCC:V GND:GND\nU2 unmodelled VCC:V GND:GND\ncovered U2 "bench" draws VCC:GND=10mA\n'
    )
    audit = audited(text)
    c = audit.coverage
    assert (c.parts, c.audited, c.covered, c.unmodelled) == (5, 2, 1, ("U1",))
    assert c.parts == c.audited + c.covered + len(c.not_audited)
    assert set(c.not_audited) == {"R1", "U1"}
    assert c.values_without_spread == 1
    assert not audit.complete
    assert not audit.fails()
    assert audit.fails(require_complete=True)
    assert loud(audit) == {("part/no-model", "U1", "warning"), ("part/no-current", "U1", "warning")}


def test_stresses_on_the_way_to_an_unknown_current_are_lower_bounds() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nF1 fuse 1A 1:V 2:W\nR1 resistor 100R P_tot=3W 1:W 2:GND\n"
        "R2 resistor 1k P_tot=1W 1:V 2:GND\nU1 unmodelled VCC:W GND:GND\n"
    )
    audit = audited(text)
    assert stress(audit, "F1", "current").lower_bound
    assert not stress(audit, "R2", "power").lower_bound


def test_thermal_runaway_is_an_error_and_a_large_loop_gain_a_warning() -> None:
    # the loop gain of a thermistor is R_th P B / T^2, less what its own falling voltage takes away; a fold on the way from
    # cold is near V^2 / R_25 = T^2 / (e R_th B), here 18.7 V, moved up a little by the 100 ohm in series
    text = "PS1 supply 20V +:V -:GND\nR1 resistor 100R P_tot=5W 1:V 2:T\n"
    text += "R2 thermistor 10k B=3950K P_tot=1W R_th_ja=250K/W 1:T 2:GND\n"
    assert ("point/thermal-runaway", "R2", "error") in loud(audited(text))
    assert loud(audited(text.replace("20V", "12V"))) == set()
    found = one(audited(text.replace("20V", "18V")), "point/thermal-runaway")
    assert found.level == "warning"
    assert found.value is not None
    assert 0.5 < found.value < 1.0


def test_mode_without_a_point_fails_closed(monkeypatch: pytest.MonkeyPatch) -> None:
    def stuck(self: Operation) -> ModeResult:
        return ModeResult(self.circuit, (), "searched", "", "no operating point was found; tried newton", "V")

    monkeypatch.setattr(Operation, "result", stuck)
    audit = audited("PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=1W 1:V 2:GND\n")
    assert loud(audit) == {("point/none-found", "V", "error")}
    assert "tried newton" in one(audit, "point/none-found").message
    assert not audit.complete
    assert audit.fails()


@pytest.mark.parametrize(
    ("line", "value", "limit"),
    [
        ("expect voltage M 5V..5.9V", 6.0, 5.9),
        ("expect voltage M 6.1V..", 6.0, 6.1),
        ("expect voltage V M ..5V", 6.0, 5.0),
        ("expect current R1 ..5mA", 0.006, 0.005),
        ("expect current R1:2 0mA..", -0.006, 0.0),
        ("expect current PS1 ..5mA", 0.006, 0.005),
        ("expect power R2 ..30mW", 0.036, 0.030),
        ("expect temperature R1 ..20degC", 25.0, 20.0),
    ],
)
def test_expectations_of_every_kind(line: str, value: float, limit: float) -> None:
    audit = audited(
        "PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=250mW 1:V 2:M\nR2 resistor 1k P_tot=250mW 1:M 2:GND\n"
        + line
        + "\n"
    )
    found = one(audit, "expect/missed")
    assert found.value == pytest.approx(value)
    assert found.limit == pytest.approx(limit)
    assert found.line == 7


def test_expectation_of_one_mode_only() -> None:
    text = (
        "PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=1W 1:V 2:M\nR2 resistor 1k P_tot=1W 1:M 2:GND\n"
        'mode "low"\n  set PS1 6V\nend\nexpect voltage M 5.5V..6.5V mode "normal"\n'
    )
    assert loud(audited(text)) == set()
    assert one(audited(text.replace(' mode "normal"', "")), "expect/missed").mode == "low"


def test_two_stable_points_are_both_audited() -> None:
    # the current through the load resistor of a bistable pair differs by side; both sides are looked at
    half = "R{k}1 resistor 1k P_tot={p} 1:V 2:C{k}\nR{k}2 resistor 10k P_tot=250mW 1:C{k} 2:B{o}\n"
    half += "Q{k} npn I_S=1e-14A beta_F=100 beta_R=1 I_C=200mA V_CEO=40V V_EBO=6V P_tot=1W B:B{k} C:C{k} E:GND\n"
    text = "PS1 supply 5V +:V -:GND\n" + half.format(k=1, o=2, p="250mW") + half.format(k=2, o=1, p="20mW")
    audit = audited(text)
    assert ("point/several", None, "warning") in loud(audit)
    # (5 - 0.07)^2 / 1k = 24 mW on 20 mW, on that side only
    assert ("stress/power", "R21", "error") in loud(audit)
    assert stress(audit, "R21", "power").worst == pytest.approx(0.0243, rel=0.01)


def test_unknown_policy_is_wrong_input() -> None:
    with pytest.raises(InputError, match="no policy"):
        audited("PS1 supply 12V +:V -:GND\nR1 resistor 1k 1:V 2:GND\n", policy="reckless")


def test_starved_zener_reports_the_corner() -> None:
    text = f"PS1 supply 12V 5.5V..15V +:V -:GND\nR1 resistor 1k P_tot=250mW 1:V 2:Z\nZ1 {ZENER} K:Z A:GND\n"
    found = one(audited(text), "point/zener-starved")
    # (5.5 - 4.9) / 1k is below the knee of 1 mA
    assert found.corner == {"PS1": 5.5}
    assert found.limit == 1e-3
