"""The same part and the same finding in two revisions.

Parts: by designator and seat (kind and nets), then by seat and content, then by seat alone, then by designator: a part that
was given another designator is found by its nets, one that was wired anew by its name.  Findings: by rule and by what they
are about, in the same mode if they can.
"""

from __future__ import annotations

from collections.abc import Callable, Hashable, Mapping, Sequence
from typing import TypeVar

from netaudit.audit.identity import about, seat
from netaudit.audit.records import Audit, PartRow
from netaudit.finding import Finding

Thing = TypeVar("Thing")


def _together(
    base: list[Thing], head: list[Thing], of_base: Callable[[Thing], Hashable], of_head: Callable[[Thing], Hashable]
) -> list[tuple[Thing, Thing]]:
    """Pairs with equal keys, in order; what is paired leaves the lists.  A key of None pairs with nothing."""
    waiting: dict[Hashable, list[Thing]] = {}
    for thing in base:
        waiting.setdefault(of_base(thing), []).append(thing)
    pairs = []
    for thing in list(head):
        key = of_head(thing)
        if key is not None and waiting.get(key):
            pairs.append((waiting[key].pop(0), thing))
    # by identity: records that are equal are still several
    gone = {id(t) for pair in pairs for t in pair}
    base[:] = [t for t in base if id(t) not in gone]
    head[:] = [t for t in head if id(t) not in gone]
    return pairs


def paired_parts(base: Sequence[PartRow], head: Sequence[PartRow]) -> list[tuple[PartRow, PartRow]]:
    """The parts that both revisions have, as the base and as the head have them."""
    old, new = list(base), list(head)
    keys: tuple[Callable[[PartRow], Hashable], ...] = (
        lambda p: (p.name, seat(p)),
        lambda p: (seat(p), p.part, tuple(sorted(p.items.items()))),
        seat,
        lambda p: p.name,
    )
    return [pair for key in keys for pair in _together(old, new, key, key)]


def paired_findings(
    base: Sequence[Finding], head: Sequence[Finding], names: Mapping[str, str]
) -> tuple[list[tuple[Finding, Finding]], list[Finding], list[Finding]]:
    """Findings that both have, those that only the base has, those that only the head has.

    ``names``: designators of the head to those of the base.
    """

    def worst(f: Finding) -> tuple[int, float]:
        return (f.ratio is not None, -(f.ratio or 0.0))

    old, new = sorted(base, key=worst), sorted(head, key=worst)

    def device(f: Finding) -> str | None:
        return names.get(f.device, f.device) if f.device is not None else None

    same = [
        *_together(old, new, lambda f: (about(f), f.device, f.mode), lambda f: (about(f), device(f), f.mode)),
        *_together(old, new, lambda f: (about(f), f.device), lambda f: (about(f), device(f))),
        # a net with another name does not make a part's finding another one
        *_together(old, new, lambda f: _part(f, f.device), lambda f: _part(f, device(f))),
    ]
    return same, old, new


def _part(finding: Finding, device: str | None) -> Hashable:
    rule, _, *rest = about(finding)
    return None if device is None else (rule, *rest, device)


def paired_boards(base: Mapping[str, Audit], head: Mapping[str, Audit]) -> list[tuple[str, str]]:
    """Boards that both have: of the same name, then those whose parts are mostly in the same seats."""
    pairs = [(name, name) for name in head if name in base]
    old = {name: _seats(audit) for name, audit in base.items() if name not in head}
    for name, audit in head.items():
        if name in base:
            continue
        seats = _seats(audit)
        likeness = {other: _alike(seats, theirs) for other, theirs in old.items()}
        best = max(likeness, key=lambda other: likeness[other], default=None)
        if best is not None and likeness[best] >= 0.5:
            pairs.append((best, name))
            del old[best]
    return pairs


def _seats(audit: Audit) -> frozenset[Hashable]:
    return frozenset(seat(p) for p in audit.parts)


def _alike(one: frozenset[Hashable], other: frozenset[Hashable]) -> float:
    """The share of seats that both have of all that either has (Jaccard)."""
    return len(one & other) / len(one | other) if one and other else 0.0
