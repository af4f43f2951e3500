"""A comparison for people: what counts against the change first, then what else it did."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.audit.batch import Batch
from netaudit.audit.compared import STATES, Change, Comparison, PartChange
from netaudit.failure import printable
from netaudit.report.json_text import CAUTIONS
from netaudit.report.provenance import policies
from netaudit.report.style import Style, flow, table, wrapped

_SHOWN = 25


def compare_text(batch: Batch, style: Style, notes: bool) -> str:
    """The report of ``compare``; notes that count for nothing are left to ``--notes``."""
    comparison = batch.comparison
    assert comparison is not None
    head = [style.verdict(batch.failed), printable(f"{comparison.base} -> {comparison.head}"), counted(comparison)]
    lines = [*flow(head, style.width), ""]
    for board in (b for b in batch.boards if b.audit is None):
        lines += [
            f"{style.level('error')} {printable(board.name)} could not be read",
            *wrapped(board.error, style.width, "    "),
        ]
    for state in STATES[:-1]:
        lines += _changes(comparison.of(state), style, notes)
    lines += [*_parts(comparison, style), *_risen(comparison, style)]
    for finding in batch.findings:
        lines += [f"{style.level(finding.level)} {finding.rule}", *wrapped(finding.message, style.width, "    ")]
    lines += [line for text in _remarks(comparison) for line in wrapped(text, style.width, "")]
    lines += ["", *(line for caution in CAUTIONS for line in wrapped(caution, style.width, ""))]
    lines.append(style.faint(f"netaudit {batch.version}, policy {policies(batch)}"))
    return "\n".join(lines) + "\n"


def counted(comparison: Comparison) -> str:
    """``1 new, 0 worse, ...``: findings by what became of them."""
    return ", ".join(f"{len(comparison.of(state))} {state}" for state in STATES)


def ratio(change: Change) -> str:
    """``131.2 % of its limit, 112 % before``; empty where there is no ratio."""
    now, before = change.finding.ratio, change.before.ratio if change.before is not None else None
    if now is None:
        return ""
    was = f", {before * 100:.4g} % before" if before is not None else ""
    return f"{now * 100:.4g} % of its limit{was}"


def _changes(changes: Sequence[Change], style: Style, notes: bool) -> Iterable[str]:
    shown = [c for c in changes if notes or c.blocks or c.finding.level != "note"]
    for change in shown:
        f = change.finding
        mode = [f"[{printable(f.mode)}]"] if f.mode and f.mode != "normal" else []
        waived = [f"waived: {printable(f.waived.reason)}"] if f.waived is not None else []
        about = [p for p in (ratio(change),) if p]
        where = f"{f.file}:{f.line}" if f.file and f.line else change.board
        pieces = [f"{change.state:<9} {style.level(f.level)} {f.rule}", *mode, *about, *waived, printable(where)]
        yield from flow(pieces, style.width)
        yield from wrapped(f.message, style.width, "    ")
    quiet = len(changes) - len(shown)
    if quiet:
        yield f"{changes[0].state:<9} {quiet} note{'s' if quiet > 1 else ''} (--notes shows them)"


def _parts(comparison: Comparison, style: Style) -> Iterable[str]:
    changes = comparison.difference.parts
    for change in changes[:_SHOWN]:
        yield from wrapped(part_text(change), style.width, "")
    if len(changes) > _SHOWN:
        yield f"and {len(changes) - _SHOWN} more parts (--format json lists all)"


def part_text(change: PartChange) -> str:
    """One sentence on a part that came, went or changed."""
    part = change.after or change.before
    assert part is not None
    name = f"{change.board}: {part.name} {part.kind}{f' {part.part}' if part.part else ''}"
    if change.before is None:
        return f"part added    {name}"
    if change.after is None:
        return f"part removed  {name}"
    said = [
        f"{item} {old if old is not None else 'none'} -> {new if new is not None else 'none'}"
        for item, old, new in change.items
    ]
    return f"part changed  {name}: {'; '.join(said)}"


def _risen(comparison: Comparison, style: Style) -> Iterable[str]:
    risen = comparison.difference.risen
    if not risen:
        return
    rows = [["risen inside its limit", "stress", "before", "now", "mode"]]
    for r in risen[:_SHOWN]:
        s = r.stress
        numbers = [f"{(x or 0.0) * 100:.3g} %" for x in (r.before.ratio, s.ratio)]
        rows.append([f"{r.board}: {s.device}", s.quantity.replace("-", " "), *numbers, s.mode])
    yield from table(rows, style)
    if len(risen) > _SHOWN:
        yield f"and {len(risen) - _SHOWN} more (--format json lists all)"


def _remarks(comparison: Comparison) -> Iterable[str]:
    for old, new in comparison.renamed:
        yield f"{old} is called {new} now."
    if comparison.added:
        yield f"New boards: {', '.join(comparison.added)}."
    if comparison.removed:
        yield f"Boards that are gone: {', '.join(comparison.removed)}."
    yield from (f"{remark[:1].upper()}{remark[1:]}." for remark in comparison.remarks)
