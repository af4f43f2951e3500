"""Waivers applied to findings: what they cover stays visible and does not count; what is stale becomes a finding."""

from __future__ import annotations

import datetime
import math
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import replace

from netaudit.audit.lint import ordered
from netaudit.audit.records import Audit
from netaudit.finding import Finding, Waived
from netaudit.gate.waivers import Waiver, Waivers

#: a ratio is written with three digits
_ROUNDING = 1.005


def waive(findings: Iterable[Finding], waivers: Sequence[Waiver], today: datetime.date) -> tuple[Finding, ...]:
    """The findings of one board with those marked that its waivers cover."""
    current = [w for w in waivers if not _expired(w, today)]
    return tuple(_covered(f, [w for w in current if _fits(w, f)]) for f in findings)


def waived_audit(audit: Audit, waivers: Waivers, board: str, today: datetime.date, whole: bool) -> Audit:
    """The audit of a board (named as waivers name it) with its waivers applied, and findings for the stale ones.

    ``whole``: every mode was audited, so that a waiver without a finding is known to be stale.
    """
    own = [w for w in waivers.every if w.board == board]
    findings = waive(audit.findings, own, today)
    stale = [f for w in own for f in _stale(w, audit.findings, today, whole)]
    files = {**audit.board.files, **(waivers.files or {})}
    return replace(audit, findings=ordered([*findings, *stale]), board=replace(audit.board, files=files))


def homeless(waivers: Waivers, boards: Iterable[str]) -> tuple[Finding, ...]:
    """Findings for waivers that name none of a project's boards."""
    known = set(boards)
    lost = (w for w in waivers.every if w.board not in known)
    return tuple(
        _finding(w, f"the waiver of {w.rule} names {w.board}, which is no board of this project") for w in lost
    )


def _expired(waiver: Waiver, today: datetime.date) -> bool:
    return waiver.until is not None and waiver.until < today


def _fits(waiver: Waiver, finding: Finding) -> bool:
    """Whether a waiver speaks of a finding: the same rule and mode, its part and its net by their exact names."""
    if waiver.rule != finding.rule or waiver.mode not in (None, finding.mode):
        return False
    if not waiver.parts and not waiver.nets:
        return finding.device is None and finding.net is None
    return (not waiver.parts or finding.device in waiver.parts) and (not waiver.nets or finding.net in waiver.nets)


def _covered(finding: Finding, waivers: Sequence[Waiver]) -> Finding:
    """The finding, waived if one of the waivers that speak of it reaches as far as it goes."""
    for waiver in waivers:
        if _short(waiver, finding) is None:
            until = waiver.until.isoformat() if waiver.until is not None else ""
            return replace(finding, waived=Waived(waiver.reason, waiver.reference, until))
    if not waivers:
        return finding
    return replace(finding, message=f"{finding.message} ({_short(waivers[0], finding)})")


def _short(waiver: Waiver, finding: Finding) -> str | None:
    """What a waiver lacks to cover the finding; None when it covers it."""
    if finding.ratio is not None:
        name, now, agreed = "ratio", finding.ratio, waiver.ratio
    elif finding.value is not None and finding.limit is not None:
        name, now, agreed = "value", finding.value, waiver.value
    else:
        return None
    if agreed is None:
        return f"its waiver at {waiver.place.file}:{waiver.place.line} says not how far: add {name} = {_up(now)}"
    base = 0.0 if name == "ratio" or finding.limit is None else finding.limit
    same_side = (now - base) * (agreed - base) > 0 or now == base
    if same_side and abs(now - base) <= abs(agreed - base) * _ROUNDING:
        return None
    return f"it has grown beyond its waiver at {waiver.place.file}:{waiver.place.line}: {name} {_up(now)}, waived {agreed:g}"


def _up(value: float) -> str:
    """Three digits, away from zero."""
    if value == 0.0:
        return "0"
    size = 10.0 ** (math.floor(math.log10(abs(value))) - 2)
    return f"{math.copysign(math.ceil(abs(value) / size - 1e-9) * size, value):.3g}"


def _stale(waiver: Waiver, findings: Sequence[Finding], today: datetime.date, whole: bool) -> Iterator[Finding]:
    if _expired(waiver, today):
        assert waiver.until is not None
        yield _finding(waiver, f"the waiver of {_said(waiver)} has expired on {waiver.until.isoformat()}")
        return
    if not whole:
        return
    fitting = [f for f in findings if _fits(waiver, f)]
    missing = sorted(waiver.parts - {f.device for f in fitting if f.device}) + sorted(
        waiver.nets - {f.net for f in fitting if f.net}
    )
    if not fitting:
        yield _finding(waiver, f"the waiver of {_said(waiver)} matches nothing")
    elif missing:
        yield _finding(waiver, f"the waiver of {_said(waiver)} matches nothing at {', '.join(missing)}")


def _said(waiver: Waiver) -> str:
    names = ", ".join([*sorted(waiver.parts), *sorted(waiver.nets)])
    mode = f" in mode {waiver.mode}" if waiver.mode is not None else ""
    return f"{waiver.rule}{f' at {names}' if names else ''}{mode}"


def _finding(waiver: Waiver, text: str) -> Finding:
    return Finding(
        "gate/stale-waiver",
        "warning",
        f"{text}: remove it, or review it",
        mode=waiver.mode,
        file=waiver.place.file,
        line=waiver.place.line,
    )
