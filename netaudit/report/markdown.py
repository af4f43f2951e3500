"""A comment for a merge, in Markdown: the verdict, the worst first in a table that fits, the rest folded.

Names from a netlist are data: nothing in them becomes markup, a link or a mention.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence

from netaudit.audit.batch import Batch
from netaudit.audit.compared import STATES, Change, Comparison
from netaudit.failure import printable
from netaudit.finding import Finding, rank
from netaudit.report.compare_text import counted, part_text, ratio
from netaudit.report.provenance import CAUTION, policies

_ROWS = 15
_FOLDED = 200
#: comments are cut by hosts at 65,536 characters
_MOST = 60_000
_SENTENCE = 180
_SPECIAL = re.compile(r"([\\`*_\[\]|~])")
#: what a host turns into a mention, a reference to an issue, a link
_CALLS = ((re.compile(r"([@#])(?=\w)"), "\\1\u200d"), (re.compile(r"(://|\bwww\.)"), "\\1\u200d"))

Row = tuple[str, Finding]


def render(batch: Batch) -> str:
    """The comment, below the length that hosts take."""
    if batch.comparison is not None:
        return _compared(batch, batch.comparison)
    rows = [(board.name, f) for board, audit in batch.audited for f in audit.findings]
    rows += [(f.file or "", f) for f in batch.findings]
    rows.sort(key=lambda row: (row[1].waived is not None, -rank(row[1].level), -(row[1].ratio or 0.0)))
    loud = [row for row in rows if row[1].level != "note" and row[1].waived is None]
    text = "\n".join([*_headline(batch, rows), "", *table(loud[:_ROWS], len(batch.boards) > 1), *_broken(batch)])
    rest = [row for row in rows if row not in loud[:_ROWS]]
    return _closed(text, [_folded(f"{len(rest)} more: notes, waived and smaller ones", rest, batch)], batch)


def _closed(text: str, folded: Sequence[Iterable[str]], batch: Batch) -> str:
    """The comment with what is folded, as far as it fits, and by what it was made."""
    for lines in (*folded, _made_from(batch)):
        joined = "\n".join(["", *lines])
        if len(text) + len(joined) < _MOST:
            text += joined
    return f"{text}\n\n{CAUTION}\n\nnetaudit {batch.version}, policy {plain(policies(batch))}\n"


def _compared(batch: Batch, comparison: Comparison) -> str:
    """What a change made of the findings: what counts in a table, the rest folded."""
    loud = [c for c in (*comparison.of("new"), *comparison.of("worse")) if c.blocks or c.finding.level != "note"]
    rest = [c for state in STATES for c in comparison.of(state) if not any(c is other for other in loud[:_ROWS])]
    lines = [f"### netaudit: {'FAIL' if batch.failed else 'PASS'}: {counted(comparison)}", ""]
    lines.append(f"From {plain(comparison.base)} to {plain(comparison.head)}; only what is new or worse counts.")
    lines += ["", *(_changes(loud[:_ROWS]) if loud else ["Nothing is new or worse at warning or above."])]
    own = [f"- {plain(f.message)}" for f in (*comparison.own, *batch.findings)]
    lines += [*(["", *own] if own else []), *_broken(batch)]
    parts = [plain(part_text(p)) for p in comparison.difference.parts]
    folded = [
        fold(f"{len(rest)} more findings", _changes(rest[:_FOLDED])) if rest else [],
        fold(f"{len(parts)} parts changed", [f"- {p}" for p in parts[:_FOLDED]]) if parts else [],
    ]
    return _closed("\n".join(lines), folded, batch)


def _changes(changes: Sequence[Change]) -> list[str]:
    lines = ["| | level | part | rule | ratio | what |", "| --- | --- | --- | --- | --- | --- |"]
    for c in changes:
        where = f"{plain(c.board)}: {plain(c.finding.device or c.finding.net or '')}"
        cells = (c.state, c.finding.level, where, plain(c.finding.rule), plain(ratio(c)), sentence(c.finding))
        lines.append(f"| {' | '.join(cells)} |")
    return lines


def _headline(batch: Batch, rows: Sequence[Row]) -> list[str]:
    failing = sum(1 for b in batch.boards if b.failed)
    many = len(batch.boards)
    boards = f"{failing} of {many} boards fail" if many > 1 else plain(batch.boards[0].name) if many else "no board"
    counted = [(level, sum(1 for _, f in rows if f.level == level and f.waived is None)) for level in _LEVELS]
    said = [f"{n} {level}{'' if n == 1 else 's'}" for level, n in counted]
    waived = sum(1 for _, f in rows if f.waived is not None)
    gaps = [plain(b.name) for b, audit in batch.audited if not audit.complete]
    lines = [
        f"### netaudit: {'FAIL' if batch.failed else 'PASS'}: {boards}",
        "",
        ", ".join(said) + f", {waived} waived.",
    ]
    if gaps:
        lines.append(f"Not complete: {', '.join(gaps[:10])}{f' and {len(gaps) - 10} more' if len(gaps) > 10 else ''}.")
    return lines


_LEVELS = ("error", "warning", "note")


def table(rows: Sequence[Row], several: bool) -> list[str]:
    """Findings as a table; with the board where there are several."""
    if not rows:
        return ["Nothing at warning or above."]
    lines = ["| level | part | rule | what |", "| --- | --- | --- | --- |"]
    for board, f in rows:
        name = f.device or f.net or ""
        where = f"{plain(board)}: {plain(name)}" if several else plain(name)
        lines.append(f"| {f.level} | {where} | {plain(f.rule)} | {sentence(f)} |")
    return lines


def sentence(f: Finding) -> str:
    """What a finding says, cut to a cell, with its mode and waiver."""
    text = f.message if len(f.message) <= _SENTENCE else f"{f.message[:_SENTENCE].rstrip()} …"
    mode = f"[{f.mode}] " if f.mode and f.mode != "normal" else ""
    waived = f" (waived: {f.waived.reason})" if f.waived is not None else ""
    return plain(f"{mode}{text}{waived}")


def _broken(batch: Batch) -> list[str]:
    return [f"\n**{plain(b.name)} could not be read:** {plain(b.error)}" for b in batch.boards if b.audit is None]


def _folded(title: str, rows: Sequence[Row], batch: Batch) -> Iterable[str]:
    if not rows:
        return []
    more = [f"\nand {len(rows) - _FOLDED} more."] if len(rows) > _FOLDED else []
    return fold(title, [*table(rows[:_FOLDED], len(batch.boards) > 1), *more])


def _made_from(batch: Batch) -> Iterable[str]:
    files = [f"| {plain(name)} | {digest} |" for name, digest in batch.files.items()]
    if len(files) > _FOLDED:
        files = [*files[:_FOLDED], f"| and {len(files) - _FOLDED} more | |"]
    return fold(f"{len(batch.files)} files were read", ["| file | SHA-256 |", "| --- | --- |", *files])


def fold(title: str, lines: Sequence[str]) -> list[str]:
    """A part that is folded until somebody opens it."""
    return ["", f"<details><summary>{title}</summary>", "", *lines, "", "</details>"]


def plain(text: str) -> str:
    """Text that stays text: markup is escaped, and a zero-width joiner keeps names from being called or linked."""
    safe = _SPECIAL.sub(r"\\\1", printable(text).replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;"))
    for pattern, instead in _CALLS:
        safe = pattern.sub(instead, safe)
    return safe
