"""A skeleton of part rows, as TOML with comments: nothing in it is a value, every line is to be filled in."""

from __future__ import annotations

from collections.abc import Sequence

from netaudit.audit.missing import MissingRow
from netaudit.failure import printable
from netaudit.parts.names import RATINGS


def missing_text(board: str, rows: Sequence[MissingRow]) -> str:
    if not rows:
        return f"# {printable(board)}: every part has what its checks need\n"
    lines = [f"# {printable(board)}: {len(rows)} rows are missing or incomplete, most used first", ""]
    for row in rows:
        lines += [*_row(row), ""]
    return "\n".join(lines)


def _row(row: MissingRow) -> list[str]:
    users = ", ".join(row.devices[:8]) + (" ..." if len(row.devices) > 8 else "")
    lines = [f"# {len(row.devices)} of them: {printable(users)}"]
    if row.known:
        more = f" and {len(row.known) - 4} more" if len(row.known) > 4 else ""
        lines.append(f"# the export says: {printable('; '.join(row.known[:4]) + more)}")
    if row.checks:
        lines.append(f"# opens: {', '.join(row.checks)}")
    if row.kind == "unmodelled":
        lines.append(f'# or in the netlist: covered {row.devices[0]} "why" draws PIN:PIN=current')
    lines.append(f"# [{_key(row.name)}]")
    lines.append(f'# kind = "{row.kind if row.kind != "unmodelled" else "?"}"')
    if row.needs_model:
        lines.append('# forward = ["?V @ ?A"]          # or the kind\'s own parameters: netaudit explain KIND')
    if row.pins:
        pins = ", ".join(f'{_quoted(p)} = "?"' for p in row.pins)
        lines.append(f"# pins = {{ {pins} }}")
    if row.ratings:
        lines.append(f"# [{_key(row.name)}.ratings]")
        for symbol in row.ratings:
            known = RATINGS.get(symbol)
            lines.append(f'# {symbol} = "?{known.unit if known else ""}"   # {known.text if known else ""}')
    return lines


def _key(name: str) -> str:
    return name if all(c.isalnum() or c in "-_" for c in name) else _quoted(name)


def _quoted(text: str) -> str:
    return '"' + printable(text).replace('"', "'") + '"'
