"""The summary of a schematic export for people."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from netaudit.circuit.export_summary import ExportSummary
from netaudit.failure import printable

_SHOWN = 12


def export_lines(summary: ExportSummary, most: int = _SHOWN) -> Iterable[str]:
    """One sentence a line: counts, kinds by rule, then what was not understood, by name."""
    by_kind: dict[str, list[str]] = {}
    for kind, why, names in summary.kinds:
        by_kind.setdefault(why, []).append(f"{len(names)} {kind}")
    yield (
        f"Export {printable(summary.file)}: {summary.instances} instances, {summary.parts} parts, {summary.nets} nets."
    )
    for why, kinds in by_kind.items():
        yield (
            f"  by {_WHY.get(why, why)}: {', '.join(kinds)}"
            if why not in _NOT
            else f"  {_NOT[why]}: {', '.join(kinds)}"
        )
    if summary.unmodelled:
        yield f"  not modelled: {_names(summary.unmodelled, most)}"
    if summary.not_fitted:
        yield f"  not fitted: {_names(summary.not_fitted, most)}"
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


_WHY = {"designator letter": "designator letters", "mapping rule": "mapping rules", "part table": "the part table"}
_NOT = {"nothing known": "nothing known of", "value not read": "value not read", "no pin map": "no pin map"}


def _names(names: Sequence[str], most: int) -> str:
    more = f" and {len(names) - most} more" if len(names) > most else ""
    return printable(", ".join(names[:most]) + more)
