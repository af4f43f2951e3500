"""Structural rules over all modes, without solving."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace

from netaudit.audit.rule import Rule, Site
from netaudit.audit.rules import RULES
from netaudit.circuit.circuit import Board
from netaudit.circuit.graph import Graph
from netaudit.finding import Finding, Level, rank

#: what a structural rule says about checks and values: ``audit`` says it by what it really checked
_NOTES = frozenset({"part/no-rating", "part/no-spread"})


def lint(board: Board) -> tuple[Finding, ...]:
    """Findings of the reading and of every ``graph/…`` and ``part/…`` rule, worst first, then by file and line.

    The same thing found in several modes is one finding at its worst level; its ``mode`` is None when it stands so in
    every mode in which the device is fitted, else the first mode in which it does.
    """
    return _found(board, [rule for rule in RULES.values() if rule.find is not None])


def structural(board: Board) -> tuple[Finding, ...]:
    """The same without the notes on ratings and spreads, which an audit makes from its checks."""
    return _found(board, [rule for rule in RULES.values() if rule.find is not None and rule.name not in _NOTES])


@dataclass
class _Seen:
    """A finding and the modes in which it was made, by level."""

    first: Finding
    modes: dict[Level, dict[str, None]] = field(default_factory=dict)


def _found(board: Board, rules: Sequence[Rule]) -> tuple[Finding, ...]:
    graphs = tuple(Graph(circuit) for circuit in board.circuits)
    sites = [Site(board, graph, graphs) for graph in graphs]
    once = [*board.findings, *(f for rule in rules if rule.whole and rule.find for f in rule.find(sites[0]))]
    seen: dict[tuple[object, ...], _Seen] = {}
    for site in sites:
        mode = site.graph.circuit.mode
        for rule in rules:
            for finding in rule.find(site) if rule.find and not rule.whole else ():
                entry = seen.setdefault(_identity(finding), _Seen(finding))
                if rank(finding.level) > rank(entry.first.level):
                    entry.first = finding
                entry.modes.setdefault(finding.level, {})[mode] = None
    fitted = _fitted(board)
    return ordered([*once, *(_with_mode(entry, fitted, board) for entry in seen.values())])


def _with_mode(seen: _Seen, fitted: dict[str, int], board: Board) -> Finding:
    """The finding with the mode it needs, if it does not stand in all of them."""
    modes = list(seen.modes[seen.first.level])
    most = fitted.get(seen.first.device or "", len(board.circuits))
    if len(modes) >= most:
        return seen.first
    others = f" (and in {len(modes) - 1} more of {len(board.circuits)} modes)" if len(modes) > 1 else ""
    return replace(seen.first, mode=modes[0], message=f"{seen.first.message}{others}")


def _fitted(board: Board) -> dict[str, int]:
    """In how many modes each device is fitted."""
    counts: dict[str, int] = {}
    for circuit in board.circuits:
        for device in circuit.devices:
            counts[device.name] = counts.get(device.name, 0) + 1
    return counts


def _identity(finding: Finding) -> tuple[object, ...]:
    """The same thing found in several modes is one finding."""
    return (finding.rule, finding.device, finding.net, finding.pin, finding.file, finding.line)


def ordered(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """Worst first: by level, then ratio (a limit of 0 first), then file and line."""

    def key(f: Finding) -> tuple[float, ...] | tuple[object, ...]:
        no_limit = f.limit == 0.0
        return (-rank(f.level), not no_limit, -(f.ratio or 0.0), f.file or "", f.line or 0, f.rule, f.device or "")

    return tuple(sorted(findings, key=key))
