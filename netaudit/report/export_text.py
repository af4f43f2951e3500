"""The summary of a schematic export for people."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.circuit.export_summary import ExportSummary
from netaudit.failure import printable

_SHOWN = 12


def export_lines(summary: ExportSummary, most: int = _SHOWN) -> Iterable[str]:
    """One sentence a line: counts, kinds by rule, then what was not understood, by name."""
    by_rule: dict[str, list[str]] = {}
    unknown: dict[str, list[str]] = {}
    left_out = set(summary.not_fitted)
    for kind, why, names in summary.kinds:
        if kind != "unmodelled" or why in _BY:
            by_rule.setdefault(why, []).append(f"{len(names)} {kind}")
        if kind == "unmodelled":
            unknown.setdefault(why, []).extend(n for n in names if n not in left_out)
    yield (
        f"Export {printable(summary.file)}: {_count(summary.instances, 'instance')}, {_count(summary.parts, 'part')}, "
        f"{_count(summary.nets, 'net')}."
    )
    for why, kinds in by_rule.items():
        yield f"  by {_BY[why]}: {', '.join(kinds)}"
    for why, lacking in unknown.items():
        if lacking:
            yield f"  not modelled, {_WHY.get(why, 'as its row says')}: {_names(lacking, most)}"
    if summary.not_fitted:
        yield f"  not fitted: {_names(summary.not_fitted, most)}"
    if summary.unconnected:
        yield f"  on no net: {_names(summary.unconnected, most)}"
    if summary.unread:
        said = [f"{name} ({why})" for name, why in summary.unread]
        yield f"  values that were not read: {_names(said, most)}"
    if summary.units:
        yield f"  drawn in several units: {_names([f'{name} ({n})' for name, n in summary.units], most)}"
    if summary.symbols:
        yield f"  drawing symbols, no parts: {_names(summary.symbols, most)}"
    if summary.ratings:
        said = [f"{symbol} of {len(parts)} from {name}" for symbol, name, parts in summary.ratings]
        yield f"  ratings found in the export: {_names(said, most)}"


_BY = {"designator letter": "designator letters", "mapping rule": "mapping rules", "part table": "the part table"}
_WHY = {"nothing known": "nothing known", "value not read": "value not read", "no pin map": "pins not known"}


def _count(number: int, what: str) -> str:
    return f"{number} {what}{'' if number == 1 else 's'}"


def _names(names: Sequence[str], most: int) -> str:
    more = f" and {len(names) - most} more" if len(names) > most else ""
    return printable(", ".join(names[:most]) + more)
