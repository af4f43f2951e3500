"""SARIF 2.1.0 (OASIS, with errata 01): findings with their rules, places, fingerprints and suppressions.

One run for the whole batch.  A host that takes at most 25,000 results of a run and keeps 5,000 gets the worst first.
"""

from __future__ import annotations

import inspect
from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from netaudit.audit.batch import Batch, BoardResult
from netaudit.audit.compared import Change, State
from netaudit.audit.identity import fingerprints
from netaudit.audit.records import Audit
from netaudit.audit.rules import PAGES, RULES
from netaudit.finding import Finding, rank
from netaudit.report.json_text import CAUTIONS, dumps
from netaudit.report.provenance import policies, uri

_SCHEMA = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json"
#: what one large host takes of a run; what is beyond it is counted in a notification
MOST_RESULTS = 25_000
_ROOT = "%SRCROOT%"
_BASELINE: Mapping[State, str] = {
    "new": "new", "worse": "updated", "better": "updated", "unchanged": "unchanged", "mended": "absent",
}  # fmt: skip

Result = dict[str, Any]


def render(batch: Batch) -> str:
    """The log as text."""
    return dumps(log(batch)) + "\n"


def log(batch: Batch) -> dict[str, Any]:
    """The log as plain values."""
    found = [(f, r) for board, audit in batch.audited for f, r in _results(board, audit)]
    found += [*_project(batch), *_mended(batch)]
    # the order of the sort key keeps the order of boards among equals
    found.sort(key=lambda pair: (pair[0].waived is not None, -rank(pair[0].level)))
    kept = found[:MOST_RESULTS]
    states = {id(c.finding): _BASELINE[c.state] for c in _changes(batch)}
    for finding, result in kept if batch.comparison is not None else ():
        result["baselineState"] = states.get(id(finding), "new")
    rules = sorted({f.rule for f, _ in kept})
    index = {name: k for k, name in enumerate(rules)}
    for finding, result in kept:
        result["ruleIndex"] = index[finding.rule]
    run = {
        "tool": {"driver": {"name": "netaudit", "version": batch.version, "rules": [_rule(name) for name in rules]}},
        "columnKind": "unicodeCodePoints",
        "originalUriBaseIds": {_ROOT: {"description": {"text": "the folder in which netaudit ran"}}},
        "invocations": [_invocation(batch, len(found) - len(kept))],
        "artifacts": [
            {"location": _location(name), "hashes": {"sha-256": digest}} for name, digest in batch.files.items()
        ],
        "results": [result for _, result in kept],
        "properties": {"policy": policies(batch), "cautions": list(CAUTIONS)},
    }
    return {"$schema": _SCHEMA, "version": "2.1.0", "runs": [run]}


def _rule(name: str) -> dict[str, Any]:
    rule = RULES.get(name)
    if rule is None:
        return {"id": name}
    page = inspect.cleandoc(PAGES[name])
    return {
        "id": name,
        "shortDescription": {"text": f"{rule.summary[:1].upper()}{rule.summary[1:]}."},
        "fullDescription": {"text": page.split("\n\n")[0].replace("\n", " ")},
        "help": {"text": page},
        "defaultConfiguration": {"level": rule.level},
        "properties": {"tags": [name.partition("/")[0]]},
    }


def _invocation(batch: Batch, left_out: int) -> dict[str, Any]:
    broken = [b for b in batch.boards if b.audit is None]
    notes = [_notification(board) for board in broken]
    if left_out:
        text = f"{left_out} more findings are left out: a run of this format holds {MOST_RESULTS} at most"
        notes.append({"level": "warning", "message": {"text": text}})
    return {"executionSuccessful": not broken, "toolExecutionNotifications": notes}


def _notification(board: BoardResult) -> dict[str, Any]:
    file, line = (board.place.file, board.place.line) if board.place is not None else (board.name, 1)
    return {
        "level": "error",
        "message": {"text": board.error},
        "locations": [{"physicalLocation": _physical(file, line)}],
    }


def _results(board: BoardResult, audit: Audit) -> Iterable[tuple[Finding, Result]]:
    for finding, mark in zip(audit.findings, fingerprints(audit.findings, audit.parts), strict=True):
        yield finding, _result(board.name, finding, mark)


def _project(batch: Batch) -> Iterable[tuple[Finding, Result]]:
    """Findings that belong to no board, and those of the gate that no other finding stands behind."""
    findings = (*batch.findings, *(batch.comparison.own if batch.comparison is not None else ()))
    for finding, mark in zip(findings, fingerprints(findings, ()), strict=True):
        yield finding, _result("", finding, mark)


def _changes(batch: Batch) -> Iterable[Change]:
    return batch.comparison.difference.changes if batch.comparison is not None else ()


def _mended(batch: Batch) -> Iterable[tuple[Finding, Result]]:
    """Findings of the base that are gone."""
    gone = [change for change in _changes(batch) if change.state == "mended"]
    marks = fingerprints([change.finding for change in gone], ())
    for change, mark in zip(gone, marks, strict=True):
        yield change.finding, _result(change.board, change.finding, mark)


def _result(board: str, finding: Finding, mark: str) -> Result:
    location: dict[str, Any] = {"physicalLocation": _physical(finding.file or board, finding.line or 1)}
    logical = _logical(board, finding)
    if logical:
        location["logicalLocations"] = logical
    return {
        "ruleId": finding.rule,
        "level": finding.level,
        "message": {"text": finding.message},
        "locations": [location],
        "partialFingerprints": {"finding/v1": mark},
        "suppressions": _suppressions(finding),
        "properties": _properties(board, finding),
    }


def _physical(file: str, line: int) -> dict[str, Any]:
    return {"artifactLocation": _location(file), "region": {"startLine": max(line, 1), "startColumn": 1}}


def _location(file: str) -> dict[str, Any]:
    name = uri(file)
    return {"uri": name} if name.startswith("file:") else {"uri": name, "uriBaseId": _ROOT}


def _logical(board: str, finding: Finding) -> list[dict[str, Any]]:
    named: Sequence[tuple[str, str | None]] = (("part", finding.device), ("net", finding.net))
    out = [{"name": n, "fullyQualifiedName": f"{board}/{n}", "kind": kind} for kind, n in named if n is not None]
    if finding.device is not None and finding.pin is not None:
        pin = f"{finding.device}:{finding.pin}"
        out.append({"name": finding.pin, "fullyQualifiedName": f"{board}/{pin}", "kind": "pin"})
    return out


def _suppressions(finding: Finding) -> list[dict[str, Any]]:
    """An empty list says that it is known not to be suppressed."""
    if finding.waived is None:
        return []
    waived = finding.waived
    said = [waived.reason, waived.reference, f"until {waived.until}" if waived.until else ""]
    return [{"kind": "external", "status": "accepted", "justification": "; ".join(s for s in said if s)}]


def _properties(board: str, finding: Finding) -> Mapping[str, Any]:
    every = {
        "board": board or None,
        "mode": finding.mode,
        "variant": finding.variant,
        "quantity": finding.quantity,
        "value": finding.value,
        "limit": finding.limit,
        "rating": finding.rating,
        "unit": finding.unit,
        "ratio": finding.ratio,
        "corner": dict(finding.corner) or None,
    }
    return {key: value for key, value in every.items() if value is not None}
