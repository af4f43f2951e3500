"""Solving one mode: its operating points with certificates, or a sentence that says why there is none."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from netaudit.circuit.circuit import Circuit
from netaudit.solve.certificate import certify
from netaudit.solve.further import further_points
from netaudit.solve.persist import Persistence
from netaudit.solve.point import ModeResult, Point, Uniqueness
from netaudit.solve.runaway import follow
from netaudit.solve.search import WILDEST
from netaudit.solve.settle import Settled, Solver
from netaudit.solve.solved import Solved
from netaudit.solve.stability import Stability
from netaudit.solve.structure import ALONE, isolated, structure
from netaudit.solve.system import System
from netaudit.solve.warm import hotter_points, moved, thermal_stability

#: thermal loop gain up to which a proof at fixed temperatures is passed on (hot starts look for others all the same)
_CALM = 0.02


def operate(circuit: Circuit) -> ModeResult:
    """Every operating point of a mode at nominal values.

    A point is reported only with its certificate (Kirchhoff's law over the nets, Tellegen's theorem); without it, or
    when every remedy failed, the result has no points and says what was tried.
    """
    return Operation(circuit).result()


class Operation:
    """A mode being solved; keeps its Solver and the solved boards for what comes after (corners, samples, load lines).

    ``boards[k]`` is the board of ``result().points[k]``, as a batch of one.
    """

    def __init__(self, circuit: Circuit) -> None:
        self.circuit = circuit
        self.system = System(circuit)
        self.solver = Solver(self.system)
        self.persistence = Persistence(self.solver)
        self.boards: list[Solved] = []

    def result(self) -> ModeResult:
        """Solves the mode (once; asking again solves again)."""
        followed = follow(self.solver, self.solver.job())
        settled = followed.settled
        known = structure(self.system)
        proven, because = known.unique, known.because
        if not settled.converged[0]:
            return self._nothing(settled, because)
        wild = self._wild(settled.solved.pick(0))
        if wild is not None:
            failure = (
                f"net {wild} would have to rise beyond {WILDEST:.0e} V: a current that is forced into it has no "
                "way back but leakage"
            )
            return ModeResult(self.circuit, (), "searched", because, failure, wild)
        certificate = certify(settled.solved.pick(0))
        if not certificate.holds:
            failure = (
                f"the iteration ended in a point whose pin currents do not sum to zero: "
                f"{certificate.residual_current:.3g} A are left over on net {certificate.worst_net}"
            )
            return ModeResult(self.circuit, (), "searched", because, failure, certificate.worst_net)
        every = [settled]
        if known.monotone and not proven and isolated(settled.solved):
            proven, because = True, ALONE
        excluded = False
        if not proven and not followed.runaway:
            further = further_points(self.solver, settled)
            every = [settled, *further.settled]
            because = further.said if further.proven else because + further.said
            excluded = further.proven
        warm = () if followed.runaway else moved(self.solver, settled.solved)
        hotter = hotter_points(self.solver, every) if warm else []
        every += hotter
        calm = not hotter and float(settled.gain[0]) <= _CALM
        if warm and (proven or excluded or hotter):
            because += _at_these_temperatures(warm, bool(hotter), calm)
        # unstable points last: what is asked for "the" point should get one in which a board can rest
        pairs = sorted(((self._point(one, proven), one.solved) for one in every), key=lambda p: p[0].stable is False)
        self.boards = [board for _, board in pairs]
        points = tuple(point for point, _ in pairs)
        if followed.runaway:
            said = "it runs away thermally: shown is the last point before the fold, which is no equilibrium of the whole board"
            points = tuple(replace(p, stable=None, stable_because=said) for p in points)
            proven = False
        uniqueness: Uniqueness = "proven" if proven and (calm or not warm) else "searched"
        if excluded and (calm or not warm):
            uniqueness = "proven" if len(every) == 1 else "complete"
        return ModeResult(self.circuit, points, uniqueness, because, runaway=followed.runaway)

    def _wild(self, board: Solved) -> str | None:
        """A net whose voltage has no physical meaning, where a source pushes its current through leakage alone."""
        volts = {net: abs(float(board.net(net))) for net in self.circuit.nets if net in self.system.net_of}
        worst = max(volts, key=lambda net: volts[net], default=None)
        return worst if worst is not None and volts[worst] > WILDEST else None

    def _point(self, settled: Settled, proven: bool) -> Point:
        stable = thermal_stability(None if settled.gain_matrix is None else settled.gain_matrix[0])
        stable = stable or self._stability(settled.solved, proven)
        return make_point(settled.solved.pick(0), settled, stable, self._gains(settled))

    def _stability(self, board: Solved, proven: bool) -> Stability:
        """Passive circuits need no numbers; others a dense Jacobian, which very large ones do not get."""
        if proven:
            return Stability(
                True, "all branches are strictly increasing and the rest is passive: it decays with any capacitances"
            )
        return self.persistence.of(board)

    def _gains(self, settled: Settled) -> dict[str, float]:
        """The thermal loop gain R_th dP/dT_j of every heated device, the circuit responding."""
        if settled.gain_matrix is None:
            return {}
        diagonal = np.diagonal(settled.gain_matrix[0])
        return {self.system.devices[k].name: float(g) for k, g in zip(self.solver.heat.devices, diagonal, strict=True)}

    def _nothing(self, settled: Settled, because: str) -> ModeResult:
        with np.errstate(all="ignore"):
            certificate = certify(settled.solved.pick(0))
        failure = (
            f"no operating point was found; tried {settled.method[0]} ({int(settled.iterations[0])} steps); "
            f"the largest unbalanced current was {certificate.residual_current:.3g} A on net {certificate.worst_net}"
        )
        return ModeResult(self.circuit, (), "searched", because, failure, certificate.worst_net)


def _at_these_temperatures(warm: tuple[str, ...], several: bool, calm: bool) -> str:
    """What self-heating leaves open, for the sentence about uniqueness."""
    if several:
        return f"; {_listed(warm)} can stand at several temperatures, found from hot starts, not proven to be all"
    if calm:
        return f"; this speaks of the temperatures solved, from hot starts no others of {_listed(warm)} were found"
    return f"; the proof speaks of the temperatures solved: warming feeds itself, others of {_listed(warm)} are not excluded"


def _listed(names: tuple[str, ...]) -> str:
    return ", ".join(names[:3]) + (f" and {len(names) - 3} more" if len(names) > 3 else "")


def make_point(solved: Solved, settled: Settled, stable: Stability, gains: dict[str, float]) -> Point:
    """The reported point with its certificate."""
    system = solved.system
    certificate = certify(solved)
    nets = {net: float(solved.net(net)) for net in system.circuit.nets if net in system.net_of}
    temperatures = {d.name: float(solved.temperature[..., k]) for k, d in enumerate(system.devices)}
    return Point(
        nets,
        temperatures,
        solved.view,
        settled.method[0],
        int(settled.iterations[0]),
        certificate.residual_current,
        certificate.power_imbalance,
        stable.stable,
        stable.because,
        gains,
    )
