"""JSON reports: the fields of the contract, strictness, order."""

from __future__ import annotations

import json
import math
from typing import Any

import pytest

import netaudit
from netaudit.report.json_text import audit_record, dumps, finding_record, lint_record, solve_record

BOARD = """netlist 1
ground GND
ambient 25degC 0degC..60degC
PS1 supply 12V 10V..14V +:V -:GND
R1 resistor 1k 5% P_tot=100mW 1:V 2:A
D1 led I_S=1e-18A n=2 I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=450K/W A:A K:GND
R2 resistor 10k 1:V 2:nc
C1 capacitor 1u V_R=25V +:V -:GND
U1 unmodelled VCC:V GND:GND
"""
FINDING = {
    "rule", "level", "device", "net", "pin", "quantity", "value", "limit", "rating", "unit", "mode", "corner", "file",
    "line", "message",
}  # fmt: skip
STRESS = {
    "device", "quantity", "nominal", "worst", "rating", "limit", "ratio", "mode", "corner", "proof", "lower_bound",
}  # fmt: skip


@pytest.fixture(scope="module")
def board() -> netaudit.interface.LoadedBoard:
    return netaudit.loads(BOARD, name="indicator.netlist")


def back(record: dict[str, Any]) -> dict[str, Any]:
    def refuse(name: str) -> None:
        raise AssertionError(f"{name} is no JSON number")

    read: dict[str, Any] = json.loads(dumps(record), parse_constant=refuse)
    return read


def test_audit_has_every_field_of_the_contract(board: netaudit.interface.LoadedBoard) -> None:
    record = back(audit_record(board.audit(), failed=True, version="1.2.3"))
    assert (record["schema"], record["netlist"], record["version"]) == (
        "netaudit/audit/1",
        "indicator.netlist",
        "1.2.3",
    )
    assert (record["policy"], record["verdict"], record["complete"]) == ("none", "fail", False)
    assert record["coverage"]["unmodelled"] == ["U1"]
    assert {"parts", "audited", "covered", "checks", "checks_missing_rating", "values_without_spread"} <= set(
        record["coverage"]
    )
    assert all(set(f) >= FINDING for f in record["findings"])
    assert all(set(s) >= STRESS for s in record["stress"])
    assert {s["proof"] for s in record["stress"]} <= {"proven", "bounded", "checked"}
    unrated = next(s for s in record["stress"] if s["device"] == "R2")
    assert (unrated["rating"], unrated["limit"], unrated["ratio"]) == (None, None, None)


def test_stresses_stand_worst_first(board: netaudit.interface.LoadedBoard) -> None:
    rows = back(audit_record(board.audit(), failed=False, version="1"))["stress"]
    zero = [s["limit"] == 0 for s in rows]
    rated = [s["ratio"] is not None for s in rows]
    assert zero == sorted(zero, reverse=True)
    ratios = [s["ratio"] for s in rows if s["ratio"] is not None]
    assert ratios == sorted(ratios, reverse=True)
    assert rated.index(True) == sum(zero)
    # R1 at 14 V and 950 ohm: the worst of the board
    assert rows[sum(zero)]["device"] == "R1"
    assert rows[sum(zero)]["corner"]["PS1"] == 14.0


def test_solve_has_every_field_of_the_contract(board: netaudit.interface.LoadedBoard) -> None:
    record = back(solve_record(board.board, board.solve(), (), "1"))
    assert record["schema"] == "netaudit/solve/1"
    (mode,) = record["modes"]
    assert mode["mode"] == "normal"
    assert mode["uniqueness"] == "proven"
    assert mode["because"]
    (point,) = mode["points"]
    assert {"stable", "stable_because", "method", "iterations", "residual_current", "power_imbalance"} <= set(point)
    assert point["nets"]["GND"] == 0.0
    led = point["devices"]["D1"]
    assert led["kind"] == "led"
    assert led["pins"]["A"]["net"] == "A"
    assert led["pins"]["A"]["current"] == pytest.approx(-led["pins"]["K"]["current"])
    assert led["power"] == pytest.approx(led["pins"]["A"]["voltage"] * led["pins"]["A"]["current"])
    assert led["junction_temperature"] == pytest.approx(25 + 450 * led["power"])
    assert point["devices"]["R2"]["pins"]["2"]["net"] is None


def test_lint_has_the_same_finding_fields(board: netaudit.interface.LoadedBoard) -> None:
    record = back(lint_record(board.board, board.lint(), failed=False, version="1"))
    assert (record["schema"], record["verdict"]) == ("netaudit/lint/1", "pass")
    spoken = {f["rule"] for f in record["findings"] if f["level"] != "note"}
    assert spoken == {"part/no-model", "part/no-current"}
    assert all(set(f) >= FINDING for f in record["findings"])


def test_numbers_that_are_not_finite_become_null() -> None:
    read = back({"a": math.nan, "b": [math.inf, 1.0], "c": {"d": -math.inf}})
    assert read == {"a": None, "b": [None, 1.0], "c": {"d": None}}


def test_finding_keeps_its_text_as_it_is() -> None:
    from netaudit.finding import Finding

    record = back(finding_record(Finding("part/unknown", "error", 'Ω "quoted" \n', device="R1")))
    assert record["message"] == 'Ω "quoted" \n'
    assert (record["device"], record["net"], record["corner"]) == ("R1", None, {})
