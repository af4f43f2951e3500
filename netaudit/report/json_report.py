"""``--report json=FILE``: what ``--format json`` prints; its JSON Schema ships beside it in ``schemas``."""

from __future__ import annotations

from typing import Any

from netaudit.audit.batch import Batch, BoardResult
from netaudit.report.compare_json import compare_record
from netaudit.report.json_text import audit_record, dumps, finding_record


def render(batch: Batch) -> str:
    """One board's record, the set of several, or a comparison's."""
    return dumps(whole(batch)) + "\n"


def whole(batch: Batch) -> dict[str, Any]:
    if batch.comparison is not None:
        return compare_record(batch)
    records = [_record(board, batch.version) for board in batch.boards]
    if len(records) == 1 and not batch.findings:
        return records[0]
    findings = [finding_record(f) for f in batch.findings]
    return {"schema": "netaudit/audit-set/1", "boards": records, **({"findings": findings} if findings else {})}


def _record(board: BoardResult, version: str) -> dict[str, Any]:
    if board.audit is None:
        return {"netlist": board.name, "error": board.error}
    return audit_record(board.audit, board.failed, version)
