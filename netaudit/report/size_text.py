"""A sizing, and what mends failing checks, as text and as JSON."""

from __future__ import annotations

from typing import Any

from netaudit.audit.mend import Change, Mend, Mends
from netaudit.audit.size import Sizing
from netaudit.failure import printable
from netaudit.quantities.write import engineering
from netaudit.report.json_text import finding_record


def size_record(found: Sizing) -> dict[str, Any]:
    return {
        "schema": "netaudit/size/1",
        "device": found.device,
        "unit": found.unit,
        "looked": list(found.looked),
        "passes": [list(p) for p in found.passes],
        "limited_by": [list(r) for r in found.limited_by],
        "preferred": {name: list(values) for name, values in found.preferred.items()},
    }


def size_text(found: Sizing) -> str:
    low, high = (engineering(v, found.unit, 4) for v in found.looked)
    if not found.passes:
        return f"{found.device}: no value between {low} and {high} lets every check of the board pass\n"
    lines = [f"{found.device}: every check of the board passes at its worst case for"]
    for (a, b), (below, above) in zip(found.passes, found.limited_by, strict=True):
        lines.append(f"  {engineering(a, found.unit, 4)} to {engineering(b, found.unit, 4)}")
        lines.append(f"    below: {below or 'not looked at'}; above: {above or 'not looked at'}")
    for name, values in found.preferred.items():
        shown = ", ".join(engineering(v, found.unit) for v in values[:24]) or "none"
        lines.append(f"  {name}: {shown}{' ...' if len(values) > 24 else ''}")
    return "\n".join(lines) + "\n"


def mends_record(found: Mends, version: str) -> dict[str, Any]:
    return {
        "schema": "netaudit/size-set/1",
        "netlist": found.board,
        "version": version,
        "policy": found.policy,
        "partial": found.partial,
        "checks": [
            {"finding": finding_record(m.finding), "changes": [_change_record(c) for c in m.changes]}
            for m in found.mends
        ],
    }


def _change_record(change: Change) -> dict[str, Any]:
    return {
        "device": change.device,
        "name": change.name,
        "unit": change.unit,
        "from": change.old,
        "to": change.new,
    }


def mends_text(found: Mends) -> str:
    """Every failing check with what mends it, one line each."""
    name = printable(found.board)
    if not found.mends:
        said = "the audit was interrupted before anything was found" if found.partial else "no check fails"
        return f"{name}: {said}\n"
    count = len(found.mends)
    lines = [f"{name}: {count} {'check fails' if count == 1 else 'checks fail'}; each with the smallest single change"]
    for mend in found.mends:
        f = mend.finding
        where = " ".join(x for x in (f.device, f.net, f.pin) if x)
        mode = f", mode {f.mode}" if f.mode else ""
        lines.append(printable(f"  {f.rule} {where}{mode}: {_changes(mend, found.partial)}"))
    if found.partial:
        lines.append("Partial: the search was interrupted.")
    return "\n".join(lines) + "\n"


def _changes(mend: Mend, partial: bool) -> str:
    if not mend.changes:
        return "none found before the interruption" if partial else "no single change mends it without a new finding"
    return ", or ".join(_change(c) for c in mend.changes)


def _change(change: Change) -> str:
    old, new = engineering(change.old, change.unit), engineering(change.new, change.unit)
    return f"{change.device}{'' if change.name == 'value' else ' ' + change.name} {old} -> {new}"
