"""What would mend each failing check: the smallest single change that lets it pass and makes no new finding.

Two kinds of change are tried: another preferred value (IEC 60063, E24 unless asked otherwise) of a resistor near the
part, and the next class of the rating that is exceeded.  A change counts only after the whole board, with it, has been
audited at its worst case: the finding must be gone (or no longer fail) and nothing may be found that was not there.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

from netaudit.audit.audit import audit
from netaudit.audit.size import preferred_values, with_value
from netaudit.circuit.circuit import Board
from netaudit.devices.base import Device
from netaudit.finding import Finding, rank
from netaudit.parts.part import Rating
from netaudit.parts.policy import Policy, load_policy
from netaudit.workers import IN_PROCESS, Interrupted, Workers

#: power sizes of resistors and small parts in W, capacitor voltages in V: common practice of makers' lists
POWERS = (0.0625, 0.1, 0.125, 0.25, 0.33, 0.5, 0.75, 1.0, 2.0, 3.0, 5.0, 7.0, 10.0, 15.0, 25.0, 50.0, 100.0)
CAPACITOR_VOLTS = (
    4.0,
    6.3,
    10.0,
    16.0,
    25.0,
    35.0,
    50.0,
    63.0,
    100.0,
    160.0,
    200.0,
    250.0,
    400.0,
    450.0,
    630.0,
    1000.0,
)
#: all other classes: the series R10 of preferred numbers (ISO 3)
_R10 = (1.0, 1.25, 1.6, 2.0, 2.5, 3.15, 4.0, 5.0, 6.3, 8.0)
#: ratings that come in classes; temperatures and thermal resistances do not
_CLASSED = frozenset(
    "P_tot V_R V_RRM V_RWM V_max V_CEO V_CBO V_DS I_F I_ZM I_C I_D I_max I_O V_I".split()  # noqa: SIM905
)
#: how many nets away a resistor may be, how many are tried, on nets with how many pins at most
_AWAY, _NEAREST, _BUSY = 3, 10, 16
#: numbers of preferred steps that are tried; between the last failing and the first passing one it is halved
_STRIDES = (1, 2, 4, 8, 16, 32, 48)
#: a ratio must fall by this share for a direction to be worth following
_FALLS = 1e-6

Key = tuple[str | None, ...]


@dataclass(frozen=True)
class Change:
    """``name`` of ``device`` (``value`` or a rating's symbol) from ``old`` to ``new``, in ``unit``."""

    device: str
    name: str
    unit: str
    old: float
    new: float

    @property
    def size(self) -> float:
        """How large the change is: the logarithm of the ratio."""
        return abs(math.log(self.new / self.old))

    def apply(self, board: Board) -> Board:
        """The board with it, in every mode."""
        return (
            with_value(board, self.device, self.new)
            if self.name == "value"
            else with_rating(board, self.device, self.name, self.new / self.old)
        )


@dataclass(frozen=True)
class Mend:
    """A failing check and what mends it, the smallest change first; empty: no single change does."""

    finding: Finding
    changes: tuple[Change, ...]


@dataclass(frozen=True)
class Mends:
    """All failing checks of a board; ``partial`` where the search was interrupted: some mends may be missing."""

    board: str
    policy: str
    mends: tuple[Mend, ...]
    partial: bool = False


@dataclass(frozen=True)
class _Trial:
    board: Board
    policy: Policy
    change: Change


def key(finding: Finding) -> Key:
    """What makes two findings of two audits the same one."""
    f = finding
    return (f.rule, f.device, f.net, f.pin, f.quantity, f.mode, f.variant)


def mends(
    board: Board, policy: str | Policy = "none", series: Sequence[str] = ("E24",), workers: Workers = IN_PROCESS
) -> Mends:
    """What mends each error of a board's audit.  Raises InputError for a policy or series that there is not."""
    loaded = load_policy(policy) if isinstance(policy, str) else policy
    found = audit(board, loaded, workers=workers)
    failing = [f for f in found.findings if f.level == "error" and f.waived is None]
    search = _Search(board, loaded, found.findings, failing, series, workers)
    partial = bool(found.partial)
    try:
        search.run()
    except Interrupted:
        partial = True
    return Mends(board.name, found.policy, tuple(Mend(f, search.best(f)) for f in failing), partial)


class _Search:
    """The changes tried so far and what they led to: every change is audited once, for all findings."""

    def __init__(
        self,
        board: Board,
        policy: Policy,
        before: Sequence[Finding],
        failing: Sequence[Finding],
        series: Sequence[str],
        workers: Workers,
    ) -> None:
        self.board, self.policy, self.failing, self.workers = board, policy, failing, workers
        self.series = tuple(series)
        self.before = {key(f): f for f in before}
        self.after: dict[Change, Mapping[Key, Finding]] = {}

    def run(self) -> None:
        self._try([c for f in self.failing for c in rating_changes(self.board, f)])
        ladders = {name: self._ladder(name) for f in self.failing for name in near(self.board, f)}
        roads = [(name, way) for name, (down, up) in ladders.items() for way in (down, up) if way]
        self._try([way[0] for _, way in roads])
        roads = [(name, way) for name, way in roads if self._helps(way[0])]
        ways = [way for _, way in roads]
        for stride in _STRIDES:
            ways = [way for way in ways if len(way) >= stride and self._promises(way, stride)]
            self._try([way[stride - 1] for way in ways])
        for finding in self.failing:
            for _, way in roads:
                self._narrow(finding, way)

    def best(self, finding: Finding) -> tuple[Change, ...]:
        """The smallest change of a rating and the smallest one of a value that mend a finding, the smaller first."""
        good = sorted((c for c in self.after if self._mended(c, finding)), key=lambda c: c.size)
        rated = [c for c in good if c.name != "value"][:1]
        valued = [c for c in good if c.name == "value"][:1]
        return tuple(sorted([*rated, *valued], key=lambda c: c.size))

    def _try(self, changes: Iterable[Change]) -> None:
        fresh = [c for c in dict.fromkeys(changes) if c not in self.after]
        trials = [_Trial(self.board, self.policy, c) for c in fresh]
        for change, found in zip(fresh, self.workers.each(_tried, trials, "changes"), strict=True):
            self.after[change] = found

    def _ladder(self, name: str) -> tuple[list[Change], list[Change]]:
        """The preferred values below and above a device's own, nearest first."""
        value = _device(self.board, name).values["value"]
        low, high = value.nominal / 100.0, value.nominal * 100.0
        every = sorted({v for s in self.series for v in preferred_values(s, low, high)})
        changes = [Change(name, "value", value.unit, value.nominal, v) for v in every]
        down = [c for c in reversed(changes) if c.new < value.nominal * (1 - 1e-9)]
        return down, [c for c in changes if c.new > value.nominal * (1 + 1e-9)]

    def _helps(self, change: Change) -> bool:
        """Whether some failing check is better with the change."""
        after = self.after[change]
        return any(_excess(after.get(key(f))) < _excess(f) - _FALLS for f in self.failing)

    def _promises(self, way: list[Change], stride: int) -> bool:
        """Whether going as far as this could mend a finding by less than what already mends it."""
        size = way[stride // 2].size if stride > 1 else 0.0
        return any(
            size < min((c.size for c in self.best(f) if c.name == "value"), default=math.inf) for f in self.failing
        )

    def _mended(self, change: Change, finding: Finding) -> bool:
        after = self.after[change]
        left = after.get(key(finding))
        if left is not None and rank(left.level) >= rank(finding.level):
            return False
        for k, f in after.items():
            old = self.before.get(k)
            if f.level != "note" and (old is None or rank(f.level) > rank(old.level)):
                return False
        return True

    def _narrow(self, finding: Finding, way: list[Change]) -> None:
        """Halves between the last stride that does not mend a finding and the first that does."""
        last = 0
        for stride in (s for s in _STRIDES if len(way) >= s and way[s - 1] in self.after):
            if self._mended(way[stride - 1], finding):
                break
            last = stride
        else:
            return
        smallest = min((c.size for c in self.best(finding) if c.name == "value"), default=math.inf)
        while stride - last > 1 and way[last].size < smallest:
            middle = (last + stride) // 2
            self._try([way[middle - 1]])
            if self._mended(way[middle - 1], finding):
                stride = middle
            else:
                last = middle


def _tried(trial: _Trial, workers: Workers) -> Mapping[Key, Finding]:
    found = audit(trial.change.apply(trial.board), trial.policy, workers=workers)
    if found.partial:
        raise Interrupted
    return {key(f): f for f in found.findings if f.waived is None}


def _excess(finding: Finding | None) -> float:
    """How far a check is beyond its limit: the ratio, or the value's distance where it has none; 0 when mended."""
    if finding is None or finding.level != "error":
        return 0.0
    if finding.ratio is not None:
        return finding.ratio
    if finding.value is None or finding.limit is None:
        return 1.0
    return abs(finding.value - finding.limit) / max(abs(finding.limit), 1e-12)


def _device(board: Board, name: str) -> Device:
    return next(d for c in board.circuits for d in c.devices if d.name == name)


def near(board: Board, finding: Finding) -> list[str]:
    """Resistors near the device or net of a finding, nearest first, in its mode; busy nets (supplies, references) are
    not walked across."""
    circuit = next((c for c in board.circuits if c.mode == finding.mode), board.circuits[0])
    on_net: dict[str, list[Device]] = {}
    for device in circuit.devices:
        for net in set(device.pins.values()):
            on_net.setdefault(net, []).append(device)
    start = [d for d in circuit.devices if d.name == finding.device] or on_net.get(finding.net or "", [])
    seen = {d.name: d for d in start}
    edge = list(seen.values())
    for _ in range(_AWAY):
        nets = {n for d in edge for n in d.pins.values() if n not in circuit.grounds and len(on_net[n]) <= _BUSY}
        edge = [d for n in sorted(nets) for d in on_net[n] if d.name not in seen]
        seen |= {d.name: d for d in edge}
    names = [d.name for d in seen.values() if d.kind == "resistor" and d.values["value"].nominal > 0]
    return names[:_NEAREST]


def rating_changes(board: Board, finding: Finding) -> Iterator[Change]:
    """The next two classes of the exceeded rating that would be enough."""
    if finding.ratio is None or finding.device is None or not finding.rule.startswith("stress/"):
        return
    device = next((d for c in board.circuits for d in c.devices if d.name == finding.device), None)
    if device is None:
        return
    for name, unit, old in _exceeded(device, finding):
        enough = [c for c in _classes(device, name, old) if c > old and c >= old * finding.ratio * (1 - 1e-9)]
        for new in enough[:2]:
            yield Change(device.name, name, unit, old, new)


def _exceeded(device: Device, finding: Finding) -> Iterator[tuple[str, str, float]]:
    """The ratings of a device that this check compares with: symbol, unit, value."""
    from netaudit.devices import KINDS

    for check in KINDS[device.kind].checks(device):
        if check.quantity != finding.quantity:
            continue
        for symbol in check.symbols:
            if symbol in device.ratings and symbol in _CLASSED and device.ratings[symbol].nominal > 0:
                yield symbol, check.unit, device.ratings[symbol].nominal


def _classes(device: Device, name: str, old: float) -> Sequence[float]:
    if name == "P_tot":
        return POWERS
    if device.kind == "capacitor":
        return CAPACITOR_VOLTS
    decade = math.floor(math.log10(old))
    return [float(f"{v * 10.0**e:.4g}") for e in range(decade, decade + 4) for v in _R10]


def with_rating(board: Board, name: str, symbol: str, factor: float) -> Board:
    """The board with one rating of a device times a factor, at every temperature and in every mode."""

    def changed(d: Device) -> Device:
        if d.name != name:
            return d
        rating = d.ratings[symbol]
        points = tuple((t, float(f"{v * factor:.12g}")) for t, v in rating.points)
        return replace(d, ratings={**d.ratings, symbol: Rating(symbol, points, rating.origin, rating.generic)})

    return _each_device(board, changed)


def _each_device(board: Board, changed: Callable[[Device], Device]) -> Board:
    circuits = (replace(c, devices=tuple(changed(d) for d in c.devices)) for c in board.circuits)
    return replace(board, circuits=tuple(circuits))
