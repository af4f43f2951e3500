"""The head against the base: what is new, worse, better, mended; only what the change made worse counts."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

from netaudit.audit.batch import BoardResult
from netaudit.audit.compared import BoardNets, Change, Comparison, Difference, PartChange, Risen, State
from netaudit.audit.lint import ordered
from netaudit.audit.records import Audit, PartRow, Stress
from netaudit.finding import Finding, rank
from netaudit.gate.match import paired_boards, paired_findings, paired_parts
from netaudit.project.project import Steps

#: ratios that differ by less are the same: a worst case is found to about six digits
_NOISE = 1e-3


@dataclass(frozen=True)
class Sides:
    """The two revisions by their names, each with its boards."""

    base_name: str
    base: Sequence[BoardResult]
    head_name: str
    head: Sequence[BoardResult]
    remarks: tuple[str, ...] = ()


def compare(sides: Sides, steps: Steps, require_complete: bool = False) -> Comparison:
    """What became of findings, stresses, parts and nets.  A board that cannot be read in the base counts as new.

    ``require_complete``: a board that could be audited completely, or was not there, must be complete now.
    """
    base = {b.name: b.audit for b in sides.base if b.audit is not None}
    head = {b.name: b.audit for b in sides.head if b.audit is not None}
    fail_on = {b.name: b for b in sides.head}
    pairs = paired_boards(base, head)
    before = {new: old for old, new in pairs}
    differences = [
        board_difference(name, base[before[name]] if name in before else None, audit, fail_on[name], steps)
        for name, audit in head.items()
    ]
    gone = [name for name in base if name not in {old for old, _ in pairs} and name not in fail_on]
    differences += [_removed(name, base[name]) for name in gone]
    broken = [b.name for b in sides.base if b.audit is None]
    remarks = (
        *sides.remarks,
        *(f"{n} could not be read in {sides.base_name}: all of it counts as new" for n in broken),
    )
    whole = _joined(differences)
    gaps = tuple(
        name
        for name, audit in head.items()
        if require_complete and not audit.complete and (name not in before or base[before[name]].complete)
    )
    own = (*_risen(whole, steps), *map(_gap, gaps))
    return Comparison(
        sides.base_name, sides.head_name, steps.step, whole,
        added=tuple(n for n in head if n not in before), removed=tuple(gone),
        renamed=tuple((old, new) for old, new in pairs if old != new),
        findings=ordered([*map(_worse, filter(lambda c: c.blocks, whole.changes)), *own]), own=own, gaps=gaps,
        remarks=remarks,
    )  # fmt: skip


def board_difference(name: str, base: Audit | None, head: Audit, result: BoardResult, steps: Steps) -> Difference:
    """What became of one board; ``base`` None where the board is new."""
    if base is None:
        changes = tuple(_change("new", name, f, None, result) for f in head.findings)
        return Difference(
            changes, (), tuple(PartChange(name, None, p) for p in head.parts), _nets(name, (), head.parts)
        )
    parts = paired_parts(base.parts, head.parts)
    names = {new.name: old.name for old, new in parts}
    same, mended, fresh = paired_findings(base.findings, head.findings, names)
    every = [
        *(_change("new", name, f, None, result) for f in fresh),
        *(_change(state_of(old, now, steps.step), name, now, old, result) for old, now in same),
        *(_change("mended", name, f, None, result) for f in mended),
    ]
    return Difference(
        _in_order(every, head.findings),
        tuple(_stresses(name, base, head, names, steps)),
        tuple(_parts(name, base, head, parts)),
        _nets(name, base.parts, head.parts),
    )


def state_of(before: Finding, now: Finding, step: float) -> State:
    """Worse: its level rose, its waiver no longer holds, or its ratio rose by more than the step of itself."""
    if rank(now.level) != rank(before.level):
        return "worse" if rank(now.level) > rank(before.level) else "better"
    if before.waived is not None and now.waived is None:
        return "worse"
    if (before.ratio is None) != (now.ratio is None):
        # without a ratio the limit is 0: anything is beyond it
        return "worse" if now.ratio is None else "better"
    old, new = _size(before), _size(now)
    if old is None or new is None:
        return "unchanged"
    if new > old * (1.0 + step) + 1e-12:
        return "worse"
    return "better" if new < old * (1.0 - _NOISE) else "unchanged"


def _size(finding: Finding) -> float | None:
    """How bad a finding is: its ratio; without one how far its value stands from its limit, against the limit."""
    if finding.ratio is not None:
        return finding.ratio
    if finding.value is None or finding.limit is None:
        return None
    return 1.0 + abs(finding.value - finding.limit) / abs(finding.limit) if finding.limit else abs(finding.value)


def _change(state: State, board: str, finding: Finding, before: Finding | None, result: BoardResult) -> Change:
    return Change(state, board, finding, before, state in ("new", "worse") and result.counts(finding))


def _in_order(changes: Sequence[Change], findings: Sequence[Finding]) -> tuple[Change, ...]:
    """In the order of the head's findings, what is mended last."""
    order = {id(f): k for k, f in enumerate(findings)}
    return tuple(sorted(changes, key=lambda c: order.get(id(c.finding), len(order))))


def _stresses(board: str, base: Audit, head: Audit, names: Mapping[str, str], steps: Steps) -> Iterator[Risen]:
    """Stresses inside their limits that rose by more than a step; beyond them they are findings."""

    def key(s: Stress, name: str) -> tuple[str | None, ...]:
        return (name, s.quantity, s.pin, s.mode, s.variant, "low" if s.direction < 0 else "")

    old = {key(s, s.device): s for s in base.stresses}
    blocking = steps.stress_step
    listed = steps.step if blocking is None else min(steps.step, blocking)
    for s in head.stresses:
        before = old.get(key(s, names.get(s.device, s.device)))
        if before is None or before.ratio is None or s.ratio is None or s.ratio > 1.0:
            continue
        if s.ratio > before.ratio * (1.0 + listed) and s.ratio > _NOISE:
            yield Risen(board, s, before, blocking is not None and s.ratio > before.ratio * (1.0 + blocking))


def _parts(board: str, base: Audit, head: Audit, pairs: Sequence[tuple[PartRow, PartRow]]) -> Iterator[PartChange]:
    before = {id(new): old for old, new in pairs}
    for part in head.parts:
        old = before.get(id(part))
        if old is None:
            yield PartChange(board, None, part)
        elif items := _items(old, part):
            yield PartChange(board, old, part, items)
    kept = {id(old) for old, _ in pairs}
    for part in base.parts:
        if id(part) not in kept:
            yield PartChange(board, part, None)


def _items(old: PartRow, new: PartRow) -> tuple[tuple[str, str | None, str | None], ...]:
    """What differs between a part before and after."""
    pairs: list[tuple[str, str | None, str | None]] = [
        ("designator", old.name, new.name),
        ("kind", old.kind, new.kind),
        ("part", old.part or None, new.part or None),
    ]
    pairs += [(item, old.items.get(item), new.items.get(item)) for item in dict.fromkeys([*old.items, *new.items])]
    pairs += [(f"pin {pin}", _net(old, pin), _net(new, pin)) for pin in dict.fromkeys([*old.pins, *new.pins])]
    return tuple((item, a, b) for item, a, b in pairs if a != b)


def _net(part: PartRow, pin: str) -> str | None:
    """The net of a pin, ``nc`` where it is left open, None where there is no such pin."""
    return (part.pins[pin] or "nc") if pin in part.pins else None


def _nets(board: str, base: Sequence[PartRow], head: Sequence[PartRow]) -> tuple[BoardNets, ...]:
    def nets(parts: Sequence[PartRow]) -> dict[str, None]:
        return dict.fromkeys(net for p in parts for net in p.pins.values() if net is not None)

    old, new = nets(base), nets(head)
    added, removed = tuple(n for n in new if n not in old), tuple(n for n in old if n not in new)
    return (BoardNets(board, added, removed),) if added or removed else ()


def _removed(name: str, base: Audit) -> Difference:
    changes = tuple(Change("mended", name, f, None) for f in base.findings)
    return Difference(changes, (), tuple(PartChange(name, p, None) for p in base.parts), _nets(name, base.parts, ()))


def _joined(differences: Sequence[Difference]) -> Difference:
    return Difference(
        tuple(c for d in differences for c in d.changes),
        tuple(r for d in differences for r in d.risen),
        tuple(p for d in differences for p in d.parts),
        tuple(n for d in differences for n in d.nets),
    )


def _worse(change: Change) -> Finding:
    """The gate's own finding for one that counts."""
    before = change.before
    if before is None:
        said = "was not there"
    elif before.ratio is not None and change.finding.ratio is not None:
        said = f"{change.finding.ratio * 100:.4g} % of its limit, {before.ratio * 100:.4g} % in the base"
    else:
        said = f"{change.finding.level} now, {before.level} in the base"
    return replace(
        change.finding,
        rule="gate/worse",
        level="error",
        message=f"{change.finding.rule} ({said}): {change.finding.message}",
    )


def _gap(board: str) -> Finding:
    return Finding(
        "gate/worse", "error", f"{board} can no longer be audited completely: see what its report says is not audited"
    )


def _risen(difference: Difference, steps: Steps) -> Iterator[Finding]:
    for risen in difference.risen:
        s, before = risen.stress, risen.before.ratio
        if not risen.blocks or s.ratio is None or before is None:
            continue
        yield Finding(
            "gate/worse", "error",
            f"{s.device}: {s.quantity.replace('-', ' ')} rose to {s.ratio * 100:.3g} % of its limit from "
            f"{before * 100:.3g} %, by more than the {(steps.stress_step or 0.0) * 100:.3g} % that the project "
            "lets pass: mend it, or raise stress-step",
            device=s.device, pin=s.pin, quantity=s.quantity, value=s.worst, limit=s.limit, rating=s.rating, unit=s.unit,
            mode=s.mode, corner=s.corner, ratio=s.ratio, variant=s.variant,
        )  # fmt: skip
