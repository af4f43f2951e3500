"""The stresses as CSV (RFC 4180): the table that a reviewer signs.

Numbers are in SI units (temperatures in degC), the unit stands beside the quantity.  A cell that a spreadsheet would take
for a formula is defused.  The last rows say by what and from what the table was made.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable

from netaudit.audit.batch import Batch
from netaudit.audit.records import Audit, Stress
from netaudit.failure import printable
from netaudit.quantities.write import engineering
from netaudit.report.provenance import CAUTION, policies

COLUMNS = (
    "designator", "part number", "quantity", "nominal", "worst", "rating", "policy share", "policy document",
    "policy row", "ratio", "corner", "temperature", "mode", "proof",
)  # fmt: skip
#: what a spreadsheet may take for the start of a formula
_LIVE = ("=", "+", "-", "@")


def render(batch: Batch) -> str:
    """The table, with designators as ``BOARD:R1`` where there are several boards."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(COLUMNS)
    several = len(batch.boards) > 1
    for board, audit in batch.audited:
        parts = {row.name: row.part for row in audit.parts}
        ambients = {r.mode: r.circuit.ambient.nominal for r in audit.results}
        for stress in audit.stresses:
            prefix = f"{board.name}:" if several else ""
            writer.writerow(_row(prefix, stress, audit, parts.get(stress.device, ""), ambients))
    writer.writerows(_about(batch))
    return out.getvalue()


def _row(prefix: str, s: Stress, audit: Audit, part: str, ambients: dict[str, float]) -> Iterable[str]:
    share = s.limit / s.rating if s.limit is not None and s.rating else None
    document = s.document if s.row else ""
    pin = f" {s.pin}" if s.pin else ""
    return (
        _safe(f"{prefix}{s.device}"),
        _safe(part),
        _safe(f"{s.quantity.replace('-', ' ')}{pin} ({s.unit})"),
        _number(s.nominal),
        _number(s.worst),
        _number(s.rating),
        "" if share is None else f"{share * 100:.4g} %",
        _safe(document),
        _safe(s.row),
        _number(s.ratio),
        _safe("; ".join(_corner(key, v, audit) for key, v in s.corner.items())),
        _number(s.corner.get("ambient", ambients.get(s.mode))),
        _safe(f"{s.mode}{f' ({s.variant})' if s.variant else ''}"),
        _proof(s),
    )


def _proof(s: Stress) -> str:
    """How sure the worst value is; fed by parts that draw an unknown current it may be more."""
    bound = f" {engineering(s.bound, s.unit, 6)}" if s.bound is not None else ""
    return f"{s.proof}{bound}{', at least' if s.lower_bound else ''}"


def _corner(key: str, value: float, audit: Audit) -> str:
    unit = audit.units.get(key)
    return f"{key}={engineering(value, unit, 6) if unit is not None else f'{value:.6g}'}"


def _number(value: float | None) -> str:
    """Six digits; a blank before a minus sign, which else might begin a formula."""
    text = "" if value is None else f"{value:.6g}"
    return f" {text}" if text.startswith("-") else text


def _safe(text: str) -> str:
    """The text on one line, with an apostrophe before what a spreadsheet would calculate."""
    shown = printable(text)
    return f"'{shown}" if shown.startswith(_LIVE) else shown


def _about(batch: Batch) -> Iterable[tuple[str, ...]]:
    rows = [("(netaudit)", batch.version, ""), ("(policy)", policies(batch), "")]
    rows += [("(file)", name, f"SHA-256 {digest}") for name, digest in batch.files.items()]
    rows += [("(not audited)", board.name, board.error) for board in batch.boards if board.audit is None]
    rows.append(("(caution)", "", CAUTION))
    for what, name, said in rows:
        cells = [what, _safe(name), *[""] * (len(COLUMNS) - 2)]
        cells[COLUMNS.index("corner")] = _safe(said)
        yield tuple(cells)
