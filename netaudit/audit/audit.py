"""The audit of a board: every mode solved, every check at its worst corner, every rule."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from contextlib import suppress
from dataclasses import dataclass, field, replace
from typing import TypeVar

from netaudit.audit.conduction import never_conducts
from netaudit.audit.context import CONDUCTS, Context, context
from netaudit.audit.coverage import coverage, fitted, rating_notes, spread_note
from netaudit.audit.expectation import expectation_tasks
from netaudit.audit.feeding import upstream
from netaudit.audit.lint import ordered, structural
from netaudit.audit.package import package_devices, package_tasks
from netaudit.audit.part_rows import part_rows
from netaudit.audit.points import point_tasks
from netaudit.audit.proof import prove
from netaudit.audit.records import Audit, SampledStress, Stress
from netaudit.audit.several import several
from netaudit.audit.statistics import Plan, sample
from netaudit.audit.stress import Watched, beyond, corner_text, findings_of, stress_of, watched
from netaudit.audit.tasks import Task
from netaudit.audit.thermal import thermal_findings
from netaudit.audit.worst import Explorer
from netaudit.circuit.circuit import Board, Circuit
from netaudit.finding import Finding, rank
from netaudit.parts.policy import Policy, load_policy
from netaudit.solve.operate import Operation
from netaudit.solve.point import ModeResult
from netaudit.solve.solved import Solved
from netaudit.workers import IN_PROCESS, Interrupted, Workers

Kept = TypeVar("Kept")


@dataclass(frozen=True)
class Options:
    """How to audit: the policy, nominal values only, and whether some modes are left out."""

    policy: Policy
    nominal: bool = False
    partial: bool = False
    plan: Plan | None = None


@dataclass
class ModeAudit:
    """What one mode gave; ``units`` of the keys that stand in its corners; ``cut``: it was interrupted."""

    result: ModeResult
    stresses: list[Stress]
    findings: list[Finding]
    units: dict[str, str]
    samples: list[SampledStress] = field(default_factory=list)
    cut: bool = False


@dataclass(frozen=True)
class _Mode:
    """A solved mode to be audited."""

    board: Board
    operation: Operation
    result: ModeResult
    options: Options
    known: Context


def audit(
    board: Board,
    policy: str | Policy = "none",
    nominal: bool = False,
    modes: Sequence[str] = (),
    plan: Plan | None = None,
    workers: Workers = IN_PROCESS,
) -> Audit:
    """The audit of a board.

    ``policy`` by name, file or as loaded; ``nominal`` looks at nominal values only; ``modes``: only these; ``plan``:
    samples to draw besides; ``workers``: where modes, corners and samples are solved.  Where the workers are told to
    stop, what is done so far comes back as a partial audit, which never passes.
    Raises InputError for a policy that cannot be read.
    """
    loaded = load_policy(policy) if isinstance(policy, str) else policy
    chosen = tuple(c for c in board.circuits if not modes or c.mode in modes)
    options = Options(loaded, nominal, len(chosen) < len(board.circuits), plan)
    board = replace(board, circuits=chosen)
    operations = _kept(workers.each(_operated, chosen, "operating points"))
    known = context(board, [result for _, result in operations])
    items = [item for op, _ in operations for item in watched(op.solver, loaded)]
    pieces = [_Mode(board, op, result, options, known) for op, result in operations]
    audits = _kept(workers.each(_audit_mode, pieces, "worst cases"))
    return _joined(board, audits, items, options)


def _operated(circuit: Circuit, workers: Workers) -> tuple[Operation, ModeResult]:
    operation = Operation(circuit)
    return operation, operation.result()


def _kept(results: Iterator[Kept]) -> list[Kept]:
    """The results up to an interruption."""
    kept: list[Kept] = []
    with suppress(Interrupted):
        kept.extend(results)
    return kept


def _joined(board: Board, audits: Sequence[ModeAudit], items: Sequence[Watched], options: Options) -> Audit:
    partial = _partial(board, audits)
    distinct: dict[object, Watched] = {}
    for item in items:
        distinct.setdefault(item.key, item)
    every = list(distinct.values())
    stresses = [s for one in audits for s in one.stresses]
    found = [*structural(board), *(f for one in audits for f in one.findings)]
    if not options.partial and not partial:
        lit = {s.device for s in stresses if s.quantity == "forward-current" and s.worst > CONDUCTS}
        found += never_conducts([one.result for one in audits], lit)
    found += [*rating_notes(every), *spread_note(board, options.nominal)]
    covered = coverage(board, every)
    unsolved = any(f.rule == "point/none-found" for f in found)
    if any(f.rule == "part/no-current" for f in found):
        fed = {c.mode: upstream(c) for c in board.circuits}
        stresses = [replace(s, lower_bound=s.device in fed[s.mode]) for s in stresses]
    return Audit(
        board,
        options.policy.name,
        tuple(one.result for one in audits),
        ordered(_distinct(found)),
        tuple(sorted(stresses, key=_worst_first)),
        covered,
        not covered.not_audited and not unsolved and not partial,
        options.nominal,
        tuple(sorted({d.part.name for d in fitted(board).values() if d.part is not None and d.part.generic})),
        _without_row(every, options.policy),
        {key: unit for one in audits for key, unit in one.units.items()},
        options.plan,
        tuple(s for one in audits for s in one.samples),
        part_rows(board),
        partial,
    )


def _partial(board: Board, audits: Sequence[ModeAudit]) -> str:
    """What an interruption left undone, in a sentence; empty where everything was done."""
    done = {one.result.mode for one in audits if not one.cut}
    begun = [one.result.mode for one in audits if one.cut]
    missing = [c.mode for c in board.circuits if c.mode not in done and c.mode not in begun]
    said = []
    if begun:
        said.append(f"the search for worst corners was cut short in mode {', '.join(begun)}")
    if missing:
        said.append(f"mode {', '.join(missing)} was not audited")
    return f"interrupted: {'; '.join(said)}" if said else ""


def _without_row(items: Sequence[Watched], policy: Policy) -> tuple[str, ...]:
    """``led junction-temperature``: checks that were made with the factor 1 because the policy has no row for them."""
    if policy.name == "none":
        return ()
    silent = (i for i in items if not i.limit.missing and i.limit.row is None)
    return tuple(sorted({f"{i.device.kind} {i.check.quantity}" for i in silent}))


def _distinct(found: Iterable[Finding]) -> Iterable[Finding]:
    """Each finding once; of the same thing in one mode the worst."""
    best: dict[tuple[object, ...], Finding] = {}
    for f in found:
        key = (f.rule, f.device, f.net, f.pin, f.mode, f.quantity, f.variant, f.line, f.file)
        old = best.get(key)
        if old is None or (rank(f.level), f.ratio or 0.0) > (rank(old.level), old.ratio or 0.0):
            best[key] = f
    return best.values()


def _worst_first(s: Stress) -> tuple[int, float]:
    """Where the limit is 0 comes first, then by ratio, then what has no rating; what differs by rounding alone stays in
    the order of the netlist."""
    if s.ratio is not None:
        return (1, -float(f"{s.ratio:.9g}"))
    return (0, -s.worst) if s.limit is not None else (2, 0.0)


def _audit_mode(mode: _Mode, workers: Workers) -> ModeAudit:
    board, operation, result, options = mode.board, mode.operation, mode.result, mode.options
    items = watched(operation.solver, options.policy)
    out = ModeAudit(result, [], [], {})
    if not result.points:
        out.findings.append(_none_found(result))
        return out
    out.findings += several(operation, result)
    tasks = [
        *point_tasks(operation.circuit, mode.known),
        *expectation_tasks(board, operation.circuit, frozenset(operation.system.index_of)),
        *package_tasks(operation.circuit, options.policy, out.stresses.append),
    ]
    for nominal, point in zip(operation.boards, result.points, strict=True):
        if point.stable is False:
            continue
        explorer = Explorer(operation.solver, nominal, options.nominal, workers)
        _explore(explorer, items, tasks, out, None)
        out.findings += thermal_findings(operation, explorer, result, point)
        if options.plan is not None and explorer.spans:
            out.samples += _sampled(explorer, items, options.plan, out)
    _variants(operation.circuit, out, options, workers)
    out.stresses = _worst_of(out.stresses)
    devices = {d.name: d for d in operation.circuit.devices} | package_devices(operation.circuit)
    for stress in _told_once(out.stresses):
        out.findings += findings_of(stress, devices[stress.device], out.units)
    return out


def _sampled(explorer: Explorer, items: Sequence[Watched], plan: Plan, out: ModeAudit) -> Iterable[SampledStress]:
    """Statistics of every rated stress over drawn boards; none where they were interrupted."""
    rated = [
        (i, o) for i in items if not i.limit.missing and i.check.quantity != "reverse-polarity" for o in i.objectives()
    ]
    ratios = [o for _, o in rated]
    try:
        found = sample(explorer.solver, explorer.boards[0], explorer.spans, ratios, plan, explorer.workers)
    except Interrupted:
        out.cut = True
        return
    for (item, _), statistics in zip(rated, found, strict=True):
        yield SampledStress(item.device.name, item.check.quantity, out.result.mode, statistics)


def _told_once(stresses: Sequence[Stress]) -> Iterable[Stress]:
    """Stresses worth a finding: one of a second solution only where it is worse than the first one's."""
    first = {(s.device, s.quantity, s.pin): _badness(s) for s in stresses if s.variant is None}
    for s in stresses:
        known = first.get((s.device, s.quantity, s.pin))
        if s.variant is None or known is None or _badness(s) > (known[0], known[1] * (1 + 1e-6), known[2]):
            yield s


def _explore(
    explorer: Explorer, items: Sequence[Watched], tasks: Sequence[Task], out: ModeAudit, variant: str | None
) -> None:
    """All checks and tasks of a mode in one exploration."""
    out.units |= {v.key: v.quantity.unit for v in explorer.spans}
    objectives = [item.objectives() for item in items]
    sized = [o for some in objectives for o in some]
    extremes = explorer.extremes([*sized, *(task.objective for task in tasks)], len(sized))
    out.cut |= explorer.cut
    nominal: Solved = explorer.boards[0].pick(0)
    left = iter(extremes)
    found = [[next(left) for _ in some] for some in objectives]
    for item, own in zip(items, prove(explorer, items, found), strict=True):
        out.stresses.append(stress_of(item, own, nominal, out.result.mode, variant))
    for task in tasks:
        out.findings += task.verdict(next(left), nominal)
    for corner in explorer.failures[:1]:
        out.findings.append(_none_at(out, corner, variant))


def _none_at(out: ModeAudit, corner: Mapping[str, float], variant: str | None) -> Finding:
    place = out.result.circuit.devices[0].place
    return Finding(
        "point/none-found",
        "error",
        f"mode {out.result.mode}: no operating point was found at the corner {corner_text(corner, out.units)}; every "
        "remedy was tried: look there with those values set",
        mode=out.result.mode,
        corner=corner,
        file=place.file,
        line=place.line,
        variant=variant,
    )


def _worst_of(stresses: Sequence[Stress]) -> list[Stress]:
    """One entry for each device, quantity, pin and variant: the worst of several operating points and directions,
    proven as far as all of them are."""
    best: dict[tuple[str, str, str | None, str | None], Stress] = {}
    for s in stresses:
        key = (s.device, s.quantity, s.pin, s.variant)
        if key not in best:
            best[key] = s
            continue
        worse, other = (s, best[key]) if _badness(s) > _badness(best[key]) else (best[key], s)
        best[key] = _weaker(worse, other)
    return list(best.values())


def _weaker(worse: Stress, other: Stress) -> Stress:
    """The worse of two with the weaker proof of both."""
    if "checked" in (worse.proof, other.proof) or worse.direction != other.direction:
        return worse if worse.proof == "checked" else replace(worse, proof="checked", bound=None)
    bounds = [s.bound * s.direction for s in (worse, other) if s.bound is not None]
    most = max(bounds, default=-math.inf)
    if most <= worse.worst * worse.direction:
        return worse if worse.proof == "proven" else replace(worse, bound=worse.worst)
    return replace(worse, proof="bounded", bound=most * worse.direction)


def _badness(s: Stress) -> tuple[bool, float, float]:
    return (beyond(s) is not None and s.ratio is None, s.ratio or 0.0, s.worst * s.direction)


def _variants(circuit: Circuit, out: ModeAudit, options: Options, workers: Workers) -> None:
    """The mode once more for each supply that is fed back, with that supply neither delivering nor absorbing."""
    fed = {f.device for f in out.findings if f.rule == "point/back-feed"}
    for name in sorted(n for n in fed if n is not None):
        device = circuit.device(name)
        if device.words.get("state") == "off":
            continue
        opened = replace(device, words={**device.words, "state": "off"})
        changed = replace(circuit, devices=tuple(opened if d.name == name else d for d in circuit.devices))
        operation = Operation(changed)
        result = operation.result()
        variant = f"{name} open"
        if not result.points:
            out.findings.append(replace(_none_found(result), variant=variant))
            continue
        explorer = Explorer(operation.solver, operation.boards[0], options.nominal, workers)
        _explore(explorer, watched(operation.solver, options.policy), [], out, variant)


def _none_found(result: ModeResult) -> Finding:
    place = result.circuit.devices[0].place if result.circuit.devices else None
    return Finding(
        "point/none-found",
        "error",
        f"mode {result.mode}: {result.failure}: check the parts on that net",
        net=result.failure_net,
        mode=result.mode,
        file=place.file if place is not None else None,
        line=place.line if place is not None else None,
    )
