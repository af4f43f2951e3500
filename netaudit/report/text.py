"""Reports for people: verdict and coverage, findings worst first, a table of stresses, cautions."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

from netaudit.audit.records import Audit, Stress
from netaudit.circuit.circuit import Board
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.report.json_text import CAUTIONS
from netaudit.report.style import Style, table, wrapped
from netaudit.solve.point import ModeResult, Point

_SHOWN_STRESSES = 25


def findings_text(findings: Sequence[Finding], style: Style, notes: bool) -> Iterable[str]:
    """One sentence a finding; notes of one rule folded together unless asked for."""
    loud = [f for f in findings if f.level != "note" or notes]
    for f in loud:
        where = f"{f.file}:{f.line}" if f.file and f.line else (f.file or "")
        mode = f" [{f.mode}]" if f.mode and f.mode != "normal" else ""
        head = f"{style.level(f.level)} {f.rule}{mode}  {style.faint(where)}"
        yield head
        yield from wrapped(f.message, style.width, "    ")
    quiet = [f for f in findings if f.level == "note" and not notes]
    if quiet:
        by_rule: dict[str, list[Finding]] = {}
        for f in quiet:
            by_rule.setdefault(f.rule, []).append(f)
        for rule, group in by_rule.items():
            names = [f.device or f.net for f in group if f.device or f.net]
            said = f": {', '.join(str(n) for n in names[:8])}{' …' if len(names) > 8 else ''}" if names else ""
            if not names:
                yield f"{style.level('note')} {rule}"
                yield from wrapped(group[0].message, style.width, "    ")
            else:
                yield f"{style.level('note')} {rule}  {len(group)} parts{said}"
        yield style.faint("    --notes shows every note in full")


def lint_text(board: Board, findings: Sequence[Finding], failed: bool, style: Style, notes: bool) -> str:
    lines = [_headline(board, failed, style, "lint"), ""]
    lines += findings_text(findings, style, notes)
    lines.append(_counted(findings))
    return "\n".join(lines) + "\n"


def audit_text(audit: Audit, failed: bool, style: Style, notes: bool, version: str) -> str:
    board = audit.board
    lines = [_headline(board, failed, style, "audit"), *_coverage(audit, style), ""]
    lines += findings_text(audit.findings, style, notes)
    lines += ["", *_stresses(audit.stresses, style), ""]
    for result in audit.results:
        lines += wrapped(_uniqueness(result), style.width, "")
    if not board.ambient_stated:
        lines += wrapped("The ambient is not stated: 25 degC is assumed.", style.width, "")
    if audit.generic:
        lines += wrapped(f"Generic classes, not the parts' own data: {', '.join(audit.generic)}.", style.width, "")
    lines += [c for caution in board.cautions for c in wrapped(caution, style.width, "")]
    lines += ["", *(c for caution in CAUTIONS for c in wrapped(caution, style.width, ""))]
    lines.append(style.faint(f"netaudit {version}, policy {audit.policy}"))
    return "\n".join(lines) + "\n"


def _headline(board: Board, failed: bool, style: Style, what: str) -> str:
    title = f"  {board.title}" if board.title else ""
    return f"{style.verdict(failed)}  {what} of {board.name}{title}"


def _counted(findings: Sequence[Finding]) -> str:
    counts = {level: sum(1 for f in findings if f.level == level) for level in ("error", "warning", "note")}
    return ", ".join(f"{n} {level}{'s' if n != 1 else ''}" for level, n in counts.items())


def _coverage(audit: Audit, style: Style) -> list[str]:
    c = audit.coverage
    said = [
        f"{c.audited} of {c.parts} parts audited, {c.checks} checks made, {c.checks_missing_rating} lack a rating, "
        f"{c.values_without_spread} values held at nominal; {_counted(audit.findings)}."
    ]
    if c.not_audited:
        named = "; ".join(f"{name} ({why})" for name, why in list(c.not_audited.items())[:8])
        more = f" and {len(c.not_audited) - 8} more" if len(c.not_audited) > 8 else ""
        said.append(f"NOT AUDITED: {named}{more}.")
    if audit.nominal:
        said.append("Nominal values only: no range or tolerance was looked at.")
    return [line for text in said for line in wrapped(text, style.width, "")]


def _stresses(stresses: Sequence[Stress], style: Style) -> list[str]:
    rated = [s for s in stresses if s.limit is not None]
    if not rated:
        return ["No stress could be compared with a rating."]
    rows = [["part", "stress", "nominal", "worst", "limit", "ratio", "proof", "at"]]
    for s in rated[:_SHOWN_STRESSES]:
        assert s.limit is not None
        ratio = "-" if s.ratio is None else f"{'≥' if s.lower_bound else ''}{s.ratio * 100:.0f} %"
        mode = f"{s.mode}: " if s.mode != "normal" else ""
        rows.append(
            [
                s.device,
                s.quantity.replace("-", " "),
                engineering(s.nominal, s.unit),
                engineering(s.worst, s.unit),
                engineering(s.limit, s.unit),
                ratio,
                s.proof,
                mode + corner(s.corner) + (f" ({s.variant})" if s.variant else ""),
            ]
        )
    lines = table(rows, style)
    if len(rated) > _SHOWN_STRESSES:
        lines.append(style.faint(f"and {len(rated) - _SHOWN_STRESSES} smaller ones (--format json lists all)"))
    return lines


def corner(values: Mapping[str, float]) -> str:
    """``PS1=13.2 R1=95``."""
    shown = [f"{k}={v:.4g}" for k, v in list(values.items())[:5]]
    return " ".join(shown) + (" …" if len(values) > 5 else "") if shown else "nominal"


def _uniqueness(result: ModeResult) -> str:
    count = len(result.points)
    points = "no operating point" if not count else "one operating point" if count == 1 else f"{count} operating points"
    return f"Mode {result.mode}: {points}, {result.uniqueness}: {result.because}."


def solve_text(board: Board, results: Sequence[ModeResult], style: Style, version: str) -> str:
    lines = [f"operating points of {board.name}{'  ' + board.title if board.title else ''}"]
    for result in results:
        lines += ["", *wrapped(_uniqueness(result), style.width, "")]
        if result.failure:
            lines += wrapped(f"{style.level('error')} {result.failure}", style.width, "")
        for number, point in enumerate(result.points, start=1):
            lines += _point(result, point, number, style)
    lines += ["", *(c for caution in CAUTIONS for c in wrapped(caution, style.width, "")), f"netaudit {version}"]
    return "\n".join(lines) + "\n"


def _point(result: ModeResult, point: Point, number: int, style: Style) -> list[str]:
    stable = {True: "stable", False: "unstable", None: "stability undecided"}[point.stable]
    head = f"point {number}" if len(result.points) > 1 else "point"
    lines = [
        "",
        f"{head}: {stable}; {point.method}, {point.iterations} steps; largest unbalanced current "
        f"{engineering(point.residual_current, 'A')}",
    ]
    lines += table([["net", "voltage"], *([net, engineering(v, "V", 4)] for net, v in point.nets.items())], style)
    rows = [["part", "kind", "current into pins", "power", "temperature"]]
    for device in result.circuit.devices:
        if device.missing or device.kind in ("connector", "testpoint"):
            continue
        view = point.view(device.name)
        pins = "  ".join(f"{pin} {engineering(float(view.i(pin)), 'A')}" for pin in device.pins)
        rows.append(
            [
                device.name,
                device.kind,
                pins,
                engineering(float(view.power), "W"),
                engineering(point.temperatures[device.name], "degC"),
            ]
        )
    return [*lines, "", *table(rows, style)]
