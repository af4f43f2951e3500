"""``netaudit/compare/1``: what a change made of findings and parts, as strict JSON."""

from __future__ import annotations

from typing import Any

from netaudit.audit.batch import Batch
from netaudit.audit.compared import STATES, Change, PartChange, Risen
from netaudit.report.json_text import CAUTIONS, finding_record, part_record, stress_record


def compare_record(batch: Batch) -> dict[str, Any]:
    """The record of a batch that is the head of a comparison."""
    comparison = batch.comparison
    assert comparison is not None
    parts = comparison.difference.parts
    return {
        "schema": "netaudit/compare/1",
        "version": batch.version,
        "base": comparison.base,
        "head": comparison.head,
        "policy": ", ".join(batch.policies) or None,
        "step": comparison.step,
        "verdict": "fail" if batch.failed else "pass",
        **{state: [_change(c) for c in comparison.of(state)] for state in STATES},
        "parts": {
            "added": [_part(p) for p in parts if p.before is None],
            "removed": [_part(p) for p in parts if p.after is None],
            "changed": [_part(p) for p in parts if p.before is not None and p.after is not None],
        },
        "nets": {
            "added": [{"board": n.board, "net": net} for n in comparison.difference.nets for net in n.added],
            "removed": [{"board": n.board, "net": net} for n in comparison.difference.nets for net in n.removed],
        },
        "stress": {"risen": [_risen(r) for r in comparison.difference.risen]},
        "boards": {
            "added": list(comparison.added),
            "removed": list(comparison.removed),
            "renamed": [{"from": old, "to": new} for old, new in comparison.renamed],
            "broken": [{"netlist": b.name, "error": b.error} for b in batch.boards if b.audit is None],
        },
        "findings": [finding_record(f) for f in (*comparison.findings, *batch.findings)],
        "remarks": list(comparison.remarks),
        "files": batch.files,
        "cautions": list(CAUTIONS),
    }


def _change(change: Change) -> dict[str, Any]:
    before = change.before
    was = {key: value for key, value in finding_record(before).items() if key in _WAS} if before is not None else None
    return {**finding_record(change.finding), "board": change.board, "blocks": change.blocks, "before": was}


_WAS = ("level", "device", "value", "limit", "rating", "ratio", "mode", "file", "line")


def _risen(risen: Risen) -> dict[str, Any]:
    before = {"worst": risen.before.worst, "limit": risen.before.limit, "ratio": risen.before.ratio}
    return {**stress_record(risen.stress), "board": risen.board, "blocks": risen.blocks, "before": before}


def _part(change: PartChange) -> dict[str, Any]:
    part = change.after or change.before
    assert part is not None
    record = {**part_record(part), "board": change.board}
    if change.before is None or change.after is None:
        return record
    return {**record, "changes": {item: {"from": old, "to": new} for item, old, new in change.items}}
