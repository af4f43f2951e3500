"""How the varying values of a system enter its equations: coefficient functions and the terms that they multiply.

Over a box of values most entries of G, s, A, B and of the branch parameters are fixed numbers.  The others fall into few
coefficient functions c_j: a resistor's four entries are one conductance with signs, and it multiplies one difference of
voltages.  Kept together so, an interval of the conductance does not turn into four independent ones:

    F(x) = F_centre(x) + sum over terms  a_t (c_j - c_j,centre) w_t(x)

Where every entry is monotone in each value for fixed others, its range is that of the vertices; ``MONOTONE`` lists for
which values that holds.  A value that enters through one function, or through several that are affine in one another, is
represented by that function: the sign of a derivative with respect to either is the same up to a known sign.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from netaudit.devices.base import Array
from netaudit.solve.sensitivity import Variable, assign
from netaudit.solve.settle import Solver
from netaudit.solve.solved import Solved
from netaudit.solve.system import Index, Numbers, System

_RESISTIVE = frozenset({"value", "R", "R_on", "alpha", "alpha_2", "B", "at", "leakage"})
_JUNCTION = frozenset({"V_F", "I_S", "R_S", "I_R", "V_Z"})
#: values for which every entry that they enter is monotone in each of them, for fixed others
MONOTONE: dict[str, frozenset[str]] = {
    **dict.fromkeys(("resistor", "link", "trimmer", "thermistor", "capacitor", "inductor", "fuse"), _RESISTIVE),
    **dict.fromkeys(("switch", "relay"), _RESISTIVE),
    **dict.fromkeys(("supply", "current-source"), frozenset({"value", "R", "limit", "compliance"})),
    "load": frozenset({"value"}),
    **dict.fromkeys(("diode", "led", "zener", "suppressor", "bridge"), _JUNCTION),
    **dict.fromkeys(("npn", "pnp"), frozenset({"I_S", "V_F", "beta_F", "h_FE", "beta_R", "R_B", "R_C", "R_E"})),
    **dict.fromkeys(("nmos", "pmos"), frozenset({"V_th", "K"})),
    **dict.fromkeys(("njfet", "pjfet"), frozenset({"I_DSS"})),
    "optocoupler": frozenset({"CTR"}),
    "regulator": frozenset({"value", "V_drop", "I_Q"}),
    "shunt-reference": frozenset({"V_ref", "r_K"}),
    "opamp": frozenset({"V_OS", "I_B", "I_Q", "swing"}),
    "unmodelled": frozenset(),
}
#: values of one device that may vary at once
_MOST = 4
#: agreement of two functions that count as affine in one another
_AFFINE = 1e-9


class Unsupported(Exception):  # noqa: N818 - nothing is wrong: there is no proof to be had
    """The box of this system cannot be enclosed: something varies of which no bounds are known."""


@dataclass(frozen=True)
class Terms:
    """The coefficient functions of a system and their terms; columns live on handles (pins, inner rows).

    ``entry``: array and position of one entry that each function equals.  ``g``: function, column (handles), control row
    over x.  ``s``: function, column.  ``inject``: function, column, branch.  ``sense``: function, control row, branch.
    ``parameter``: function, branch, name.  ``ratio``: (variables, functions) derivative of each function with respect to
    the variable's own representative, zero where it does not enter; ``known`` variables have one.  ``pattern``: position
    of each variable among those of its device.
    """

    entry: tuple[tuple[str, int], ...]
    g: tuple[Index, Array, Array]
    s: tuple[Index, Array]
    inject: tuple[Index, Array, Index]
    sense: tuple[Index, Array, Index]
    parameter: tuple[tuple[int, int, str], ...]
    ratio: Array
    known: np.ndarray
    direction: Array
    pattern: Index
    vertices: int


def terms(solver: Solver, nominal: Solved, spans: Sequence[Variable]) -> Terms:
    """The terms of a system over the box of ``spans``.  Raises Unsupported."""
    _supported(solver, spans)
    system = solver.system
    low = np.array([v.quantity.low for v in spans])
    high = np.array([v.quantity.high for v in spans])
    rng = np.random.default_rng(1)
    some = low + (high - low) * rng.random((5, len(spans)))
    entries = _Entries(system, _numbers(solver, nominal, spans, np.vstack([low, high, some])))
    position, most = _positions(spans)
    change, direction, ratio, known = _ratios(solver, nominal, spans, entries)
    if not change.any(axis=0).all():
        raise Unsupported
    return Terms(
        tuple(entries.first), *_columns(system, entries), ratio, known, direction, position,
        2**most,
    )  # fmt: skip


def values_of(found: Terms, num: Numbers) -> Array:
    """The coefficient functions at the rows of ``num`` (one batch axis): shape (rows, functions)."""
    arrays = _arrays(num)
    if not found.entry:
        return np.zeros((*num.batch, 0))
    return np.stack([np.broadcast_to(arrays[a][..., k], num.batch) for a, k in found.entry], axis=-1)


def _numbers(solver: Solver, nominal: Solved, spans: Sequence[Variable], rows: Array) -> Numbers:
    overrides, air = assign(spans, rows, float(np.asarray(nominal.ambient).reshape(-1)[0]))
    count = len(rows)
    temperature = np.repeat(nominal.temperature, count, axis=0)
    return solver.system.numbers(overrides, temperature, air, (count,))


def _supported(solver: Solver, spans: Sequence[Variable]) -> None:
    system = solver.system
    kind = {d.name: d.kind for d in system.devices}
    if any(v.device and v.name not in MONOTONE.get(kind[v.device], ()) for v in spans):
        raise Unsupported
    warm = np.array(solver.heat.devices, dtype=np.intp)
    if any(not v.device for v in spans):
        warm = np.arange(len(system.devices))
    if not len(warm):
        return
    base = np.full(len(system.devices), 25.0)
    other = base.copy()
    other[warm] = 61.0
    one, two = (_arrays(system.numbers({}, t, 25.0, ())) for t in (base, other))
    if any(not np.array_equal(one[name], two[name]) for name in one):
        raise Unsupported


def _arrays(num: Numbers) -> dict[str, Array]:
    out = {"g": num.g, "s": num.s, "inject": num.inject, "sense": num.sense}
    for number, (_, _, parameters) in enumerate(num.branches.groups):
        out |= {f"{number}.{name}": values for name, values in parameters.items()}
    return out


def _positions(spans: Sequence[Variable]) -> tuple[Index, int]:
    """The number of each variable among those of its device, and the largest count."""
    seen: dict[str, int] = {}
    out = []
    for v in spans:
        out.append(seen.get(v.device, 0))
        seen[v.device] = out[-1] + 1
    most = max(seen.values(), default=0)
    if most > _MOST:
        raise Unsupported
    return np.array(out, dtype=np.intp), most


class _Entries:
    """The varying entries of all arrays, sorted into functions by what they do on a few rows."""

    def __init__(self, system: System, num: Numbers) -> None:
        self.system = system
        self.first: list[tuple[str, int]] = []
        self.first_sign: list[float] = []
        self.rows = _arrays(num)
        self.of: dict[tuple[str, int], tuple[int, float]] = {}
        numbers: dict[tuple[int, bytes], int] = {}
        for name, values in self.rows.items():
            if values.ndim < 2:
                continue
            for k in np.flatnonzero((values != values[:1]).any(axis=0)):
                column = values[:, k]
                sign = float(np.sign(column[np.argmax(column != 0.0)]))
                mark = (self._device(name, int(k)), (column * sign).tobytes())
                if mark not in numbers:
                    numbers[mark] = len(self.first)
                    self.first.append((name, int(k)))
                    self.first_sign.append(sign)
                self.of[(name, int(k))] = (numbers[mark], sign * self.first_sign[numbers[mark]])

    def _device(self, name: str, k: int) -> int:
        s = self.system
        if name == "g":
            return int(s.handle_device[s.g_row[k]])
        if name == "s":
            return int(s.handle_device[s.s_row[k]])
        if name == "inject":
            return int(s.branch_device[s.a_branch[k]])
        if name == "sense":
            return int(s.branch_device[s.b_branch[k]])
        return int(s.branch_device[self.branch(name, k)[0]])

    def branch(self, name: str, k: int) -> tuple[int, str]:
        """The branch and the name of a parameter array's entry."""
        number, parameter = name.split(".", 1)
        return int(self.system.groups[int(number)][1][k]), parameter

    def of_array(self, name: str) -> Iterator[tuple[int, int, float]]:
        """(position, function, sign) of the varying entries of an array."""
        for (array, k), (j, sign) in self.of.items():
            if array == name:
                yield k, j, sign


def _columns(
    system: System, entries: _Entries
) -> tuple[
    tuple[Index, Array, Array],
    tuple[Index, Array],
    tuple[Index, Array, Index],
    tuple[Index, Array, Index],
    tuple[tuple[int, int, str], ...],
]:
    handles = len(system.position)
    g = _conductances(system, entries)
    s: dict[int, Array] = {}
    for k, j, sign in entries.of_array("s"):
        s.setdefault(j, np.zeros(handles))[system.s_row[k]] += sign
    inject: dict[tuple[int, int], Array] = {}
    for k, j, sign in entries.of_array("inject"):
        inject.setdefault((j, int(system.a_branch[k])), np.zeros(handles))[system.a_row[k]] += sign
    sense: dict[tuple[int, int], Array] = {}
    for k, j, sign in entries.of_array("sense"):
        column = system.position[system.b_column[k]]
        row = sense.setdefault((j, int(system.b_branch[k])), np.zeros(system.n))
        if column >= 0:
            row[column] += sign
    parameter = []
    for (name, k), (j, sign) in entries.of.items():
        if "." in name:
            if sign < 0:
                raise Unsupported
            parameter.append((j, *entries.branch(name, k)))
    return (
        g,
        (_ints(list(s)), _stack(list(s.values()), handles)),
        (_ints([j for j, _ in inject]), _stack(list(inject.values()), handles), _ints([b for _, b in inject])),
        (_ints([j for j, _ in sense]), _stack(list(sense.values()), system.n), _ints([b for _, b in sense])),
        tuple(parameter),
    )


def _conductances(system: System, entries: _Entries) -> tuple[Index, Array, Array]:
    """Each function's entries of G as outer products: rows that are the same up to a sign share one control."""
    handles = len(system.position)
    rows: dict[tuple[int, int], Array] = {}
    for k, j, sign in entries.of_array("g"):
        column = system.position[system.g_column[k]]
        row = rows.setdefault((j, int(system.g_row[k])), np.zeros(system.n))
        if column >= 0:
            row[column] += sign
    found: dict[tuple[int, bytes], tuple[Array, Array]] = {}
    for (j, handle), row in rows.items():
        if not row.any():
            continue
        way = float(np.sign(row[np.argmax(row != 0.0)]))
        mark = (j, (row * way + 0.0).tobytes())
        column = found.setdefault(mark, (np.zeros(handles), row * way))[0]
        column[handle] += way
    return (
        _ints([j for j, _ in found]),
        _stack([column for column, _ in found.values()], handles),
        _stack([row for _, row in found.values()], system.n),
    )


def _ratios(
    solver: Solver, nominal: Solved, spans: Sequence[Variable], entries: _Entries
) -> tuple[np.ndarray, Array, Array, np.ndarray]:
    """Which function each variable changes, the sign of its representative's change, the derivatives of the others by
    it, and whether that is known: looked at with the other values low, nominal and high."""
    count, width = len(spans), len(entries.first)
    ratio, known = np.zeros((count, width)), np.zeros(count, dtype=bool)
    change, direction = np.zeros((count, width), dtype=bool), np.zeros(count)
    low, middle, high = (np.array([getattr(v.quantity, side) for v in spans]) for side in ("low", "nominal", "high"))
    for k in range(count):
        inside = low[k] + np.array([0.0, 0.37, 1.0]) * (high[k] - low[k])
        rows = np.repeat(np.stack([low, middle, high]), 3, axis=0)
        rows[:, k] = np.tile(inside, 3)
        arrays = _arrays(_numbers(solver, nominal, spans, rows))
        some = [np.broadcast_to(arrays[a][..., e], (9,)) for a, e in entries.first]
        at = np.array(some).reshape(width, 9).T.reshape(3, 3, width)
        whole = at[:, 2] - at[:, 0]
        change[k] = (whole != 0.0).any(axis=0)
        mine = np.flatnonzero(change[k])
        if not len(mine):
            known[k] = spans[k].device == ""
            continue
        lead = mine[0]
        steps, part = whole[:, lead], at[:, 1] - at[:, 0]
        direction[k] = np.sign(steps[0])
        with np.errstate(all="ignore"):
            every = whole[:, mine] / steps[:, None]
            bent = np.abs(part[:, mine] - every * part[:, lead][:, None]) > _AFFINE * np.abs(whole[:, mine])
        same = np.abs(every - every[0]) <= _AFFINE * np.abs(every[0])
        known[k] = bool((np.sign(steps) == direction[k]).all() and same.all() and (len(mine) == 1 or not bent.any()))
        ratio[k, mine] = every[0] if known[k] else 0.0
    return change, direction, ratio, known


def _stack(rows: list[Array], width: int) -> Array:
    return np.array(rows).reshape(len(rows), width)


def _ints(values: list[int]) -> Index:
    return np.array(values, dtype=np.intp)
