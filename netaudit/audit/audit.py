"""The audit of a board: every mode solved, every check at its worst corner, every rule."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace

from netaudit.audit.conduction import never_conducts
from netaudit.audit.coverage import coverage, fitted, rating_notes, spread_note
from netaudit.audit.expectation import expectation_tasks
from netaudit.audit.lint import lint, ordered
from netaudit.audit.points import CONDUCTS, point_tasks
from netaudit.audit.records import Audit, Stress
from netaudit.audit.stress import Watched, findings_of, stress_of, watched
from netaudit.audit.tasks import Task
from netaudit.audit.thermal import thermal_findings
from netaudit.audit.worst import Explorer
from netaudit.circuit.circuit import Board, Circuit
from netaudit.finding import Finding, rank
from netaudit.parts.policy import Policy, load_policy
from netaudit.solve.operate import Operation
from netaudit.solve.point import ModeResult
from netaudit.solve.solved import Solved


@dataclass(frozen=True)
class Options:
    """How to audit: the policy, nominal values only, and which modes (all when none is named)."""

    policy: Policy
    nominal: bool = False
    modes: tuple[str, ...] = ()


@dataclass
class ModeAudit:
    """What one mode gave."""

    result: ModeResult
    stresses: list[Stress]
    findings: list[Finding]
    watched: list[Watched]


def audit(board: Board, policy: str | Policy = "none", nominal: bool = False, modes: Sequence[str] = ()) -> Audit:
    """The audit.  ``policy`` by name, file or as loaded; ``nominal`` looks at nominal values only."""
    loaded = load_policy(policy) if isinstance(policy, str) else policy
    options = Options(loaded, nominal, tuple(modes))
    operations = [(c, Operation(c)) for c in board.circuits if not modes or c.mode in modes]
    results = [(circuit, op, op.result()) for circuit, op in operations]
    regulating = _regulating(board, [r for _, _, r in results])
    audits = [_audit_mode(board, op, result, options, regulating) for _, op, result in results]
    return _joined(board, audits, options)


def _joined(board: Board, audits: Sequence[ModeAudit], options: Options) -> Audit:
    items: dict[tuple[str, str], Watched] = {}
    for one in audits:
        for item in one.watched:
            items.setdefault((item.device.name, item.check.quantity), item)
    found = [*lint(board), *(f for one in audits for f in one.findings)]
    found += never_conducts(board, [one.result for one in audits])
    found += [*rating_notes(list(items.values())), *spread_note(board, options.nominal)]
    covered = coverage(board, list(items.values()))
    unsolved = any(f.rule == "point/none-found" for f in found)
    stresses = [s for one in audits for s in one.stresses]
    lower = {f.device for f in found if f.rule == "part/no-current"}
    if lower:
        stresses = [replace(s, lower_bound=s.device in _upstream(board, s.mode)) for s in stresses]
    generic = tuple(sorted({d.part.name for d in fitted(board).values() if d.part is not None and d.part.generic}))
    return Audit(
        board,
        options.policy.name,
        tuple(one.result for one in audits),
        ordered(_distinct(found)),
        tuple(sorted(stresses, key=_worst_first)),
        covered,
        not covered.not_audited and not unsolved,
        options.nominal,
        generic,
    )


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
    """Stresses without a limit above zero but with a value come first, then by ratio, then those without rating."""
    if s.ratio is not None:
        return (1, -s.ratio)
    return (0, 0.0) if s.limit is not None and s.worst > 0 else (2, 0.0)


def _upstream(board: Board, mode: str) -> set[str]:
    """Parts that feed a part which draws an unknown current."""
    from netaudit.audit.feeding import upstream

    circuit = next(c for c in board.circuits if c.mode == mode)
    return upstream(circuit)


def _regulating(board: Board, results: Sequence[ModeResult]) -> frozenset[str]:
    """References that regulate: at their knee or above in some mode, or with an ``expect`` across them."""
    names = set()
    for result in results:
        for device in result.circuit.devices:
            if device.kind not in ("zener", "shunt-reference") or device.missing:
                continue
            symbol = "I_ZK" if device.kind == "zener" else "I_K_min"
            rating = device.ratings.get(symbol)
            knee = rating.nominal if rating is not None else device.nominal(symbol, CONDUCTS)
            if any(float(p.view(device.name).i("K")) >= knee for p in result.points):
                names.add(device.name)
            ends = {device.pins["A"], device.pins["K"]}
            for wanted in board.expectations:
                nets = set(wanted.nets) if len(wanted.nets) > 1 else set(wanted.nets) | set(result.circuit.grounds[:1])
                if wanted.quantity == "voltage" and nets == ends:
                    names.add(device.name)
    return frozenset(names)


def _audit_mode(
    board: Board, operation: Operation, result: ModeResult, options: Options, regulating: frozenset[str]
) -> ModeAudit:
    items = watched(operation.solver, options.policy)
    out = ModeAudit(result, [], [], items)
    if not result.points:
        out.findings.append(_none_found(result))
        return out
    out.findings += _several(result)
    for nominal, point in zip(operation.boards, result.points, strict=True):
        if point.stable is False:
            continue
        explorer = Explorer(operation.solver, nominal, options.nominal)
        tasks = [
            *point_tasks(operation.circuit, board, regulating),
            *expectation_tasks(board, operation.circuit, frozenset(operation.system.index_of)),
        ]
        _explore(explorer, items, tasks, out, None)
        out.findings += thermal_findings(operation, explorer, result, point)
    out.stresses = _worst_of(out.stresses)
    _variants(board, operation.circuit, out, options)
    devices = {d.name: d for d in operation.circuit.devices}
    for stress in out.stresses:
        out.findings += findings_of(stress, devices[stress.device])
    return out


def _explore(
    explorer: Explorer, items: Sequence[Watched], tasks: Sequence[Task], out: ModeAudit, variant: str | None
) -> None:
    """All checks and tasks of a mode in one exploration."""
    spread = [(k, objective) for k, item in enumerate(items) for objective in item.objectives()]
    objectives = [objective for _, objective in spread] + [task.objective for task in tasks]
    extremes = explorer.extremes(objectives)
    nominal: Solved = explorer.boards[0].pick(0)
    mode = out.result.mode
    for k, item in enumerate(items):
        own = [e for (number, _), e in zip(spread, extremes, strict=False) if number == k]
        out.stresses.append(stress_of(item, own, nominal, mode, variant))
    for task, extreme in zip(tasks, extremes[len(spread) :], strict=True):
        out.findings += task.verdict(extreme, nominal)
    for corner in explorer.failures[:1]:
        where = ", ".join(f"{key} = {v:.5g}" for key, v in corner.items())
        out.findings.append(
            Finding(
                "point/none-found",
                "error",
                f"no operating point was found at the corner {where}; tried every remedy there",
                mode=mode,
                corner=corner,
                file=explorer.solver.system.circuit.devices[0].place.file,
                variant=variant,
            )
        )


def _worst_of(stresses: Sequence[Stress]) -> list[Stress]:
    """One entry for each device, quantity and variant: the worst of several operating points."""
    best: dict[tuple[str, str, str | None], Stress] = {}
    for s in stresses:
        key = (s.device, s.quantity, s.variant)
        old = best.get(key)
        if old is None or (s.ratio or 0.0, s.worst) > (old.ratio or 0.0, old.worst):
            best[key] = s
    return list(best.values())


def _variants(board: Board, circuit: Circuit, out: ModeAudit, options: Options) -> None:
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
        explorer = Explorer(operation.solver, operation.boards[0], options.nominal)
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


def _several(result: ModeResult) -> Iterable[Finding]:
    kept = [p for p in result.points if p.stable is not False]
    if len(kept) > 1:
        place = result.circuit.devices[0].place
        yield Finding(
            "point/several",
            "warning",
            f"mode {result.mode} can settle in {len(kept)} operating points; each one is audited "
            f"({result.because}): make sure that it starts in the right one",
            mode=result.mode,
            value=float(len(kept)),
            unit="1",
            file=place.file,
            line=place.line,
        )
