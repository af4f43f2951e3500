"""Reports as strict JSON (RFC 8259): no NaN, no Infinity; SI units, temperatures in degC."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

from netaudit.circuit.circuit import Board
from netaudit.finding import Finding, Waived

if TYPE_CHECKING:
    from netaudit.audit.records import Audit, PartRow, Stress
    from netaudit.solve.point import ModeResult, Point


def dumps(value: Any) -> str:
    """Strict JSON text in ASCII, so that no terminal's encoding matters; numbers that are not finite become null."""
    return json.dumps(_clean(value), allow_nan=False, indent=1)


def _clean(value: Any) -> Any:
    if isinstance(value, float):
        return value if math.isfinite(value) else None
    if isinstance(value, Mapping):
        return {str(k): _clean(v) for k, v in value.items()}
    if isinstance(value, (list, tuple)):
        return [_clean(v) for v in value]
    return value


def finding_record(f: Finding) -> dict[str, Any]:
    """A finding's fields, every one there."""
    return {
        "rule": f.rule,
        "level": f.level,
        "device": f.device,
        "net": f.net,
        "pin": f.pin,
        "quantity": f.quantity,
        "value": f.value,
        "limit": f.limit,
        "rating": f.rating,
        "unit": f.unit,
        "ratio": f.ratio,
        "mode": f.mode,
        "variant": f.variant,
        "corner": dict(f.corner),
        "file": f.file,
        "line": f.line,
        "message": f.message,
        "waived": waived_record(f.waived),
    }


def waived_record(waived: Waived | None) -> dict[str, str] | None:
    """Why a reviewed waiver covers a finding."""
    return None if waived is None else {"reason": waived.reason, "reference": waived.reference, "until": waived.until}


def part_record(part: PartRow) -> dict[str, Any]:
    return {
        "device": part.name,
        "kind": part.kind,
        "part": part.part or None,
        "items": dict(part.items),
        "pins": dict(part.pins),
        "file": part.file,
        "line": part.line,
    }


def stress_record(s: Stress) -> dict[str, Any]:
    return {
        "device": s.device,
        "pin": s.pin,
        "quantity": s.quantity,
        "unit": s.unit,
        "nominal": s.nominal,
        "worst": s.worst,
        "rating": s.rating,
        "limit": s.limit,
        "ratio": s.ratio,
        "mode": s.mode,
        "variant": s.variant,
        "corner": dict(s.corner),
        "proof": s.proof,
        "bound": s.bound,
        "lower_bound": s.lower_bound,
    }


def samples_record(audit: Audit) -> dict[str, Any] | None:
    """Statistics over drawn boards; None when none were drawn."""
    if audit.plan is None:
        return None
    from netaudit.audit.statistics import QUANTILES

    rows = [
        {
            "device": s.device,
            "quantity": s.quantity,
            "mode": s.mode,
            "quantiles": dict(zip((str(q) for q in QUANTILES), s.statistics.quantiles, strict=True)),
            "beyond": s.statistics.beyond,
            "interval": list(s.statistics.interval),
            "drivers": dict(s.statistics.drivers),
            "unsolved": s.statistics.unsolved,
        }
        for s in audit.samples
    ]
    plan = audit.plan
    return {
        "count": plan.count,
        "seed": plan.seed,
        "sequence": plan.method,
        "distribution": plan.distribution,
        "together": [list(group) for group in plan.together],
        "stress": rows,
    }


def lint_record(board: Board, findings: Sequence[Finding], failed: bool, version: str) -> dict[str, Any]:
    return {
        "schema": "netaudit/lint/1",
        "netlist": board.name,
        "version": version,
        "verdict": "fail" if failed else "pass",
        "findings": [finding_record(f) for f in findings],
        "files": dict(board.files),
    }


def audit_record(audit: Audit, failed: bool, version: str) -> dict[str, Any]:
    c = audit.coverage
    return {
        "schema": "netaudit/audit/1",
        "netlist": audit.board.name,
        "version": version,
        "policy": audit.policy,
        "verdict": "fail" if failed else "pass",
        "complete": audit.complete,
        "partial": audit.partial or None,
        "nominal": audit.nominal,
        "coverage": {
            "parts": c.parts,
            "audited": c.audited,
            "covered": c.covered,
            "unmodelled": list(c.unmodelled),
            "not_audited": dict(c.not_audited),
            "checks": c.checks,
            "checks_missing_rating": c.checks_missing_rating,
            "values_without_spread": c.values_without_spread,
        },
        "findings": [finding_record(f) for f in audit.findings],
        "stress": [stress_record(s) for s in audit.stresses],
        "samples": samples_record(audit),
        "modes": [
            {"mode": r.mode, "uniqueness": r.uniqueness, "because": r.because, "points": len(r.points)}
            for r in audit.results
        ],
        "parts": [part_record(part) for part in audit.parts],
        "generic": list(audit.generic),
        "without_policy_row": list(audit.without_row),
        "files": dict(audit.board.files),
        "cautions": list(CAUTIONS),
    }


def solve_record(
    board: Board, results: Sequence[ModeResult], findings: Sequence[Finding], version: str
) -> dict[str, Any]:
    """``findings``: what makes the voltages meaningless."""
    return {
        "schema": "netaudit/solve/1",
        "netlist": board.name,
        "version": version,
        "modes": [_mode_record(r) for r in results],
        "findings": [finding_record(f) for f in findings],
        "files": dict(board.files),
    }


def _mode_record(result: ModeResult) -> dict[str, Any]:
    return {
        "mode": result.mode,
        "uniqueness": result.uniqueness,
        "because": result.because,
        "failure": result.failure or None,
        "thermal_runaway": list(result.runaway),
        "points": [_point_record(result, p) for p in result.points],
    }


def _point_record(result: ModeResult, point: Point) -> dict[str, Any]:
    devices: dict[str, Any] = {}
    for device in result.circuit.devices:
        if device.missing:
            continue
        view = point.view(device.name)
        devices[device.name] = {
            "kind": device.kind,
            "power": float(view.power),
            "junction_temperature": point.temperatures[device.name],
            "pins": {
                pin: {
                    "net": None if pin in device.open_pins else net,
                    "voltage": float(view.v(pin)),
                    "current": float(view.i(pin)),
                }
                for pin, net in device.pins.items()
            },
        }
    return {
        "stable": point.stable,
        "stable_because": point.stable_because,
        "method": point.method,
        "iterations": point.iterations,
        "residual_current": point.residual_current,
        "power_imbalance": point.power_imbalance,
        "nets": dict(point.nets),
        "devices": devices,
    }


CAUTIONS = (
    "The result rests on the models and ratings that were given; it replaces no qualified review and no bench "
    "measurement.",
    "DC operating points only: no pulse, surge, switching or AC stress is looked at.",
    "Mains and hazardous energy fall under local codes and licensed practice.",
)
