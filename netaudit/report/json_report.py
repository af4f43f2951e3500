"""``--report json=FILE``: what ``--format json`` prints; its JSON Schema ships beside it in ``schemas``."""

from __future__ import annotations

from typing import Any

from netaudit.audit.batch import Batch, BoardResult
from netaudit.report.json_text import audit_record, dumps


def render(batch: Batch) -> str:
    """One board's record, or the set of several."""
    return dumps(whole(batch)) + "\n"


def whole(batch: Batch) -> dict[str, Any]:
    records = [_record(board, batch.version) for board in batch.boards]
    return records[0] if len(records) == 1 else {"schema": "netaudit/audit-set/1", "boards": records}


def _record(board: BoardResult, version: str) -> dict[str, Any]:
    if board.audit is None:
        return {"netlist": board.name, "error": board.error}
    return audit_record(board.audit, board.failed, version)
