"""Saved JSON reports (``netaudit/audit/1`` and sets of them) read back, as far as comparisons need them."""

from __future__ import annotations

import json
from collections.abc import Mapping
from typing import Any

from netaudit.audit.batch import BoardResult
from netaudit.audit.records import Audit, Coverage, PartRow, Stress
from netaudit.circuit.circuit import Board
from netaudit.failure import InputError
from netaudit.finding import Finding, Level, Waived
from netaudit.syntax.reader import decode, read_bytes


def read_saved(path: str, fail_on: Level) -> tuple[BoardResult, ...]:
    """The boards of a report.  Raises InputError when it is none, or one of another version's making."""
    text = decode(read_bytes(path, path, None), path)
    try:
        whole = json.loads(text)
    except (ValueError, RecursionError) as error:
        raise InputError(f"{path} is no JSON: {error}", mend="name a report of: netaudit audit --format json") from None
    schema = whole.get("schema") if isinstance(whole, dict) else None
    if schema not in ("netaudit/audit/1", "netaudit/audit-set/1"):
        raise _other(path, schema)
    try:
        boards = whole["boards"] if schema == "netaudit/audit-set/1" else [whole]
        return tuple(_board(path, record, fail_on) for record in boards)
    except (KeyError, TypeError, AttributeError, ValueError) as error:
        said = f"the field {error}" if isinstance(error, KeyError) else str(error)
        raise InputError(f"{path} is no whole report: {said}", mend="make it anew") from None


def _other(path: str, schema: object) -> InputError:
    name, _, version = str(schema).rpartition("/")
    if name in ("netaudit/audit", "netaudit/audit-set") and version.isdigit() and int(version) > 1:
        return InputError(
            f"{path} is a report of a newer netaudit (schema {schema})", mend="update netaudit, or make the report anew"
        )
    said = f"its schema is {schema}" if schema is not None else "it states no schema"
    return InputError(f"{path} is no audit report: {said}"[:300], mend="name a report of: netaudit audit --format json")


def _board(path: str, record: Mapping[str, Any], fail_on: Level) -> BoardResult:
    name = str(record["netlist"])
    if "error" in record:
        return BoardResult(name, None, True, str(record["error"]), fail_on=fail_on)
    if record["schema"] != "netaudit/audit/1":
        raise _other(path, record["schema"])
    audit = Audit(
        Board(name, "", (), (), True, files=dict(record.get("files", {}))),
        str(record["policy"]),
        (),
        tuple(_finding(f) for f in record["findings"]),
        tuple(_stress(s) for s in record["stress"]),
        Coverage(0, 0, 0, (), 0, 0, 0),
        bool(record["complete"]),
        bool(record.get("nominal", False)),
        parts=tuple(_part(p) for p in record.get("parts", ())),
    )
    return BoardResult(name, audit, audit.fails(fail_on), fail_on=fail_on)


def _finding(f: Mapping[str, Any]) -> Finding:
    waived = f.get("waived")
    if f["level"] not in ("note", "warning", "error"):
        raise ValueError(f"a finding of level {f['level']}")
    return Finding(
        f["rule"], f["level"], f["message"], f["device"], f["net"], f["pin"], f["quantity"], f["value"], f["limit"],
        f["rating"], f["unit"], f["mode"], dict(f["corner"]), f["file"], f["line"], f.get("ratio"), f.get("variant"),
        Waived(waived["reason"], waived["reference"], waived["until"]) if waived else None,
    )  # fmt: skip


def _stress(s: Mapping[str, Any]) -> Stress:
    return Stress(
        s["device"], s["quantity"], s.get("unit", "1"), s["nominal"], s["worst"], s["rating"], s["limit"], s["ratio"],
        s["mode"], dict(s["corner"]), s["proof"], s.get("bound"), s["lower_bound"], s.get("variant"), pin=s.get("pin"),
    )  # fmt: skip


def _part(p: Mapping[str, Any]) -> PartRow:
    return PartRow(p["device"], p["kind"], p["part"] or "", dict(p["items"]), dict(p["pins"]), p["file"], p["line"])
