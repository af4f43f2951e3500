"""Reports for people: verdict and coverage, findings worst first, a table of stresses, cautions."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from typing import TYPE_CHECKING

from netaudit.circuit.circuit import Board
from netaudit.failure import printable
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.report.export_text import export_lines
from netaudit.report.json_text import CAUTIONS
from netaudit.report.style import Style, flow, table, wrapped

if TYPE_CHECKING:
    from netaudit.audit.records import Audit, Stress
    from netaudit.solve.point import ModeResult, Point

_SHOWN_STRESSES = 25
_SHOWN_NAMES = 12
_SHOWN_CORNER = 5


def findings_text(findings: Sequence[Finding], style: Style, notes: bool) -> Iterable[str]:
    """One sentence a finding, the same thing in several modes once; notes of one rule folded unless asked for."""
    loud = [f for f in findings if (f.level != "note" or notes) and f.waived is None]
    for group in _grouped(loud, _thing):
        f = group[0]
        where = f"{f.file}:{f.line}" if f.file and f.line else (f.file or "")
        modes = list(dict.fromkeys(g.mode for g in group if g.mode))
        shown = [f"[{printable(', '.join(modes))}]"] if modes and modes != ["normal"] else []
        yield from flow([f"{style.level(f.level)} {f.rule}", *shown, style.faint(printable(where))], style.width)
        yield from wrapped(f.message, style.width, "    ")
    quiet = [f for f in findings if f.level == "note" and not notes and f.waived is None]
    for group in _grouped(quiet, lambda f: (f.rule,)):
        names = list(dict.fromkeys(f.device or f.net for f in group if f.device or f.net))
        yield f"{style.level('note')} {group[0].rule}"
        if names:
            more = f" and {len(names) - _SHOWN_NAMES} more" if len(names) > _SHOWN_NAMES else ""
            yield from wrapped(", ".join(str(n) for n in names[:_SHOWN_NAMES]) + more, style.width, "    ")
        else:
            yield from wrapped(group[0].message, style.width, "    ")
    if quiet:
        yield style.faint("    --notes shows every note in full")
    yield from _waived(findings, style)


def _waived(findings: Sequence[Finding], style: Style) -> Iterable[str]:
    """Findings that a reviewed waiver covers: what, why, and how long."""
    for group in _grouped([f for f in findings if f.waived is not None], _thing):
        f, waived = group[0], group[0].waived
        assert waived is not None
        reference = f" ({waived.reference})" if waived.reference else ""
        until = f", until {waived.until}" if waived.until else ""
        yield f"waived  {f.level} {f.rule} {printable(f.device or f.net or '')}".rstrip()
        yield from wrapped(f"{f.message} Waived{until}: {waived.reason}{reference}", style.width, "    ")


def _thing(f: Finding) -> tuple[object, ...]:
    """What a finding is about, whatever the mode."""
    return (f.rule, f.level, f.device, f.net, f.pin, f.quantity, f.variant, f.file, f.line)


def _grouped(findings: Iterable[Finding], key: Callable[[Finding], tuple[object, ...]]) -> list[list[Finding]]:
    """Findings of one key together, in the order in which each key comes first."""
    groups: dict[tuple[object, ...], list[Finding]] = {}
    for f in findings:
        groups.setdefault(key(f), []).append(f)
    return list(groups.values())


def lint_text(board: Board, findings: Sequence[Finding], failed: bool, style: Style, notes: bool) -> str:
    """The report of ``lint``."""
    lines = [*_headline(board, failed, style, "lint"), *_exports(board, style), ""]
    lines += findings_text(findings, style, notes)
    said = "Structure only: nothing was solved, no rating was looked at."
    lines += [_counted(findings), ""]
    lines += [line for caution in board.cautions for line in wrapped(caution, style.width, "")]
    lines += wrapped(said, style.width, "")
    return "\n".join(lines) + "\n"


def audit_text(audit: Audit, failed: bool, style: Style, notes: bool, version: str) -> str:
    """The report of ``audit``: verdict, coverage, findings worst first, stresses, how sure it is, cautions."""
    lines = [*_headline(audit.board, failed, style, "audit", audit.complete)]
    lines += [*_exports(audit.board, style), *_coverage(audit, style)]
    if audit.partial:
        lines += wrapped(f"Partial, and so no pass: {audit.partial}.", style.width, "")
    lines.append("")
    lines += findings_text(audit.findings, style, notes)
    lines += ["", *_stresses(audit, style), ""]
    if audit.plan is not None:
        lines += [*_samples(audit, style), ""]
    lines += [c for text in _remarks(audit) for c in wrapped(text, style.width, "")]
    lines += ["", *(c for caution in CAUTIONS for c in wrapped(caution, style.width, ""))]
    lines.append(style.faint(f"netaudit {version}, policy {audit.policy}"))
    return "\n".join(lines) + "\n"


def _exports(board: Board, style: Style) -> list[str]:
    """What was understood of the schematic exports."""
    return [part for s in board.exports for line in export_lines(s) for part in _indented(line, style)]


def _indented(line: str, style: Style) -> Iterable[str]:
    inner = line.lstrip()
    return wrapped(inner, style.width, " " * (len(line) - len(inner)))


def _samples(audit: Audit, style: Style) -> list[str]:
    """Statistics over drawn boards, the largest share beyond a limit first."""
    plan = audit.plan
    if plan is None or not audit.samples:
        return ["No samples: nothing that is rated varies."]
    said = f"{plan.count} boards drawn ({plan.method}, {plan.distribution}, seed {plan.seed}):"
    rows = [["part", "stress", "median", "95 %", "99 %", "beyond limit", "95 % interval", "driven by"]]
    order = sorted(audit.samples, key=lambda s: (-s.statistics.beyond, -s.statistics.quantiles[3]))
    for s in order[:_SHOWN_STRESSES]:
        q, (low, high) = s.statistics.quantiles, s.statistics.interval
        drivers = ", ".join(f"{key} {share * 100:.0f} %" for key, share in s.statistics.drivers[:3])
        mode = f" [{s.mode}]" if len(audit.results) > 1 else ""
        rows.append(
            [
                s.device,
                s.quantity.replace("-", " ") + mode,
                f"{q[1] * 100:.0f} %",
                f"{q[2] * 100:.0f} %",
                f"{q[3] * 100:.0f} %",
                f"{s.statistics.beyond * 100:.2g} %",
                f"{low * 100:.2g}..{high * 100:.2g} %",
                drivers,
            ]
        )
    return [*wrapped(said, style.width, ""), *table(rows, style)]


def _remarks(audit: Audit) -> Iterable[str]:
    """What the result rests on."""
    for result in audit.results:
        yield _uniqueness(result)
    if not audit.board.ambient_stated:
        yield "The ambient is not stated: 25 degC is assumed."
    if audit.without_row:
        yield f"The policy {audit.policy} does not speak of {', '.join(audit.without_row)}: the full rating counts there."
    if audit.generic:
        yield f"Generic classes, not the parts' own data: {', '.join(audit.generic)}."
    yield from audit.board.cautions


def _headline(board: Board, failed: bool, style: Style, what: str, complete: bool = True) -> list[str]:
    gaps = [] if complete else ["(not complete)"]
    title = [printable(board.title)] if board.title else []
    return flow([style.verdict(failed), printable(f"{what} of {board.name}"), *gaps, *title], style.width)


def _counted(findings: Sequence[Finding]) -> str:
    counts = {
        level: sum(1 for f in findings if f.level == level and f.waived is None)
        for level in ("error", "warning", "note")
    }
    waived = sum(1 for f in findings if f.waived is not None)
    said = ", ".join(f"{n} {level}{'s' if n != 1 else ''}" for level, n in counts.items())
    return f"{said}, {waived} waived" if waived else said


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


def _stresses(audit: Audit, style: Style) -> list[str]:
    """The table of stresses against limits, each in its worst mode."""
    rated = _worst_modes(audit.stresses)
    if not rated:
        return ["No stress could be compared with a rating."]
    many = len(audit.results) > 1
    rows = [["part", "stress", "nominal", "worst", "limit", "ratio", "proof", "at"]]
    rows += [_stress_row(s, audit, many) for s in rated[:_SHOWN_STRESSES]]
    lines = table(rows, style)
    if len(rated) > _SHOWN_STRESSES:
        lines.append(style.faint(f"and {len(rated) - _SHOWN_STRESSES} smaller ones (--format json lists all)"))
    return lines


def _worst_modes(stresses: Sequence[Stress]) -> list[Stress]:
    """Of each part and quantity the worst mode and variant; what has a limit of 0 and is not stressed is left out."""
    first: dict[tuple[object, ...], Stress] = {}
    for s in stresses:
        if s.limit is not None and (s.ratio is not None or s.worst > 0):
            first.setdefault((s.device, s.quantity, s.pin), s)
    return list(first.values())


def _stress_row(s: Stress, audit: Audit, many: bool) -> list[str]:
    assert s.limit is not None
    ratio = "-" if s.ratio is None else f"{'≥' if s.lower_bound else ''}{s.ratio * 100:z.0f} %"
    proof = s.proof if s.bound is None else f"{s.proof} {engineering(s.bound, s.unit)}"
    at = (f"{s.mode}: " if many else "") + corner(s.corner, audit.units) + (f" ({s.variant})" if s.variant else "")
    numbers = [engineering(x, s.unit) for x in (s.nominal, s.worst, s.limit)]
    return [s.device, s.quantity.replace("-", " ") + (f" {s.pin}" if s.pin else ""), *numbers, ratio, proof, at]


def corner(values: Mapping[str, float], units: Mapping[str, str]) -> str:
    """``PS1=13.2V R1=95ohm``."""
    shown = [
        f"{key}={engineering(v, units[key], 4).replace(' ', '') if key in units else f'{v:.4g}'}"
        for key, v in list(values.items())[:_SHOWN_CORNER]
    ]
    return " ".join(shown) + (" …" if len(values) > _SHOWN_CORNER else "") if shown else "nominal"


def _uniqueness(result: ModeResult) -> str:
    count = len(result.points)
    points = "no operating point" if not count else "one operating point" if count == 1 else f"{count} operating points"
    return f"Mode {result.mode}: {points}, {result.uniqueness}: {result.because}."


def solve_text(
    board: Board, results: Sequence[ModeResult], findings: Sequence[Finding], style: Style, version: str
) -> str:
    title = [printable(board.title)] if board.title else []
    lines = flow([printable(f"operating points of {board.name}"), *title], style.width)
    for finding in findings:
        said = f"error: {finding.message}. Until then these voltages hold up to a constant only."
        lines += wrapped(said, style.width, "")
    for result in results:
        lines += ["", *wrapped(_uniqueness(result), style.width, "")]
        if result.failure:
            lines += wrapped(f"error: {result.failure}", style.width, "")
        if result.runaway:
            said = (
                f"error: {', '.join(result.runaway)} runs away thermally: followed from cold, no equilibrium is reached"
            )
            lines += wrapped(f"{said}, and the temperatures below are those where it folds", style.width, "")
        for number, point in enumerate(result.points, start=1):
            lines += _point(result, point, number, style)
    lines += ["", *(c for caution in CAUTIONS for c in wrapped(caution, style.width, "")), f"netaudit {version}"]
    return "\n".join(lines) + "\n"


def _point(result: ModeResult, point: Point, number: int, style: Style) -> list[str]:
    stable = {True: "stable", False: "unstable", None: "stability undecided"}[point.stable]
    head = f"point {number}" if len(result.points) > 1 else "point"
    said = (
        f"{head}: {stable}; {point.method}, {point.iterations} steps; largest unbalanced current "
        f"{engineering(point.residual_current, 'A')}"
    )
    lines = ["", *wrapped(said, style.width, "")]
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
