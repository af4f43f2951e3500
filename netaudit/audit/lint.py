"""Structural rules over all modes, without solving."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace

from netaudit.audit.rule import Site
from netaudit.audit.rules import RULES
from netaudit.circuit.circuit import Board
from netaudit.circuit.graph import Graph
from netaudit.finding import Finding, rank


def lint(board: Board) -> tuple[Finding, ...]:
    """Findings of the reading and of every ``graph/…`` and ``part/…`` rule, worst first, then by file and line."""
    found: dict[tuple[object, ...], Finding] = {}
    for finding in board.findings:
        found.setdefault(_identity(finding), finding)
    for circuit in board.circuits:
        site = Site(board, Graph(circuit))
        for rule in RULES.values():
            for finding in rule.find(site) if rule.find is not None else ():
                known = found.get(_identity(finding))
                if known is None:
                    found[_identity(finding)] = finding
                elif rank(finding.level) > rank(known.level):
                    found[_identity(finding)] = replace(finding, mode=finding.mode or known.mode)
    return ordered(found.values())


def _identity(finding: Finding) -> tuple[object, ...]:
    """The same thing found in several modes is one finding."""
    return (finding.rule, finding.device, finding.net, finding.pin, finding.file, finding.line)


def ordered(findings: Iterable[Finding]) -> tuple[Finding, ...]:
    """Worst first: by level, then ratio (a limit of 0 first), then file and line."""

    def key(f: Finding) -> tuple[float, ...] | tuple[object, ...]:
        no_limit = f.limit == 0.0
        return (-rank(f.level), not no_limit, -(f.ratio or 0.0), f.file or "", f.line or 0, f.rule, f.device or "")

    return tuple(sorted(findings, key=key))
