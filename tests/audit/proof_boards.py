"""Random boards for the proofs: networks, bridges, mirrors, zeners and LEDs; and an oracle that solves all vertices."""

from __future__ import annotations

from itertools import product

import numpy as np

import netaudit
from netaudit.audit.proof import prove
from netaudit.audit.stress import Watched, watched
from netaudit.audit.worst import Explorer, Extreme
from netaudit.devices.base import Array
from netaudit.parts.policy import load_policy
from netaudit.solve.operate import Operation
from netaudit.solve.sensitivity import assign
from netaudit.solve.settle import Job

HEAD = "netlist 1\nground GND\nambient 25degC\n"


def ohms(rng: np.random.Generator) -> str:
    return f"{10 ** rng.uniform(2, 4):.0f}ohm"


def spread(rng: np.random.Generator, widest: float) -> str:
    return f"{rng.uniform(1, widest):.1f}%"


def network(rng: np.random.Generator, widest: float, count: int = 6) -> str:
    """Resistors and diodes at random: sensitivities change their sign."""
    lines = ["PS1 supply 12V 10.8V..13.2V +:V -:GND"]
    nodes = ["V", "GND"]
    for k in range(count):
        a = nodes[int(rng.integers(len(nodes)))]
        lines.append(f"R{k} resistor {ohms(rng)} {spread(rng, widest)} P_tot=250mW 1:{a} 2:N{k}")
        nodes.append(f"N{k}")
        if rng.random() < 0.4:
            b = nodes[int(rng.integers(len(nodes) - 1))]
            lines.append(f"D{k} diode I_S=1e-12 n=1.6 I_F=100mA V_R=50V A:N{k} K:{b}")
    for k in range(count):
        b = nodes[int(rng.integers(len(nodes)))]
        if b != f"N{k}":
            lines.append(f"Q{k} resistor {ohms(rng)} 1:N{k} 2:{b}")
    return HEAD + "\n".join(lines) + "\n"


def bridge(rng: np.random.Generator, widest: float) -> str:
    """A bridge near its balance: the current across turns over."""
    r = 10 ** rng.uniform(2.5, 3.5)
    turn = rng.uniform(0.9, 1.1, 4)
    lines = ["PS1 supply 10V 9V..11V +:V -:GND"]
    for k, (a, b) in enumerate((("V", "X"), ("X", "GND"), ("V", "Y"), ("Y", "GND"))):
        lines.append(f"R{k} resistor {r * turn[k]:.0f}ohm {spread(rng, widest)} P_tot=250mW 1:{a} 2:{b}")
    lines.append(f"R4 resistor {ohms(rng)} {spread(rng, widest)} P_tot=250mW 1:X 2:Y")
    return HEAD + "\n".join(lines) + "\n"


def mirror(rng: np.random.Generator, widest: float) -> str:
    """A current mirror of two transistors with emitter resistors and a load."""
    beta = rng.integers(80, 300)
    low = int(beta * 0.7)
    npn = f"npn I_S=1e-14A beta_F={beta},{low}..{2 * beta} beta_R=3 I_C=100mA V_CEO=40V V_EBO=6V P_tot=300mW"
    return HEAD + (
        f"PS1 supply 9V 8V..10V +:V -:GND\nR1 resistor {ohms(rng)} {spread(rng, widest)} P_tot=1W 1:V 2:B\n"
        f"Q1 {npn} B:B C:B E:E1\nQ2 {npn} B:B C:C E:E2\n"
        f"R2 resistor 100ohm {spread(rng, widest)} P_tot=1W 1:E1 2:GND\nR3 resistor 100ohm {spread(rng, widest)} P_tot=1W 1:E2 2:GND\n"
        f"R4 resistor {rng.integers(50, 800)}ohm {spread(rng, widest)} P_tot=1W 1:V 2:C\n"
    )


def reference(rng: np.random.Generator, widest: float) -> str:
    """A zener reference with an LED and a divider."""
    return HEAD + (
        f"PS1 supply 12V {rng.uniform(7, 11):.1f}V..{rng.uniform(12.5, 15):.1f}V +:V -:GND\n"
        f"R1 resistor {rng.integers(200, 2000)}ohm {spread(rng, widest)} P_tot=250mW 1:V 2:Z\n"
        f"D1 zener V_Z=5.1V,{spread(rng, min(widest, 8))} I_Z=5mA r_Z={rng.integers(5, 60)}ohm I_ZM=90mA P_tot=500mW K:Z A:GND\n"
        f"R2 resistor {rng.integers(300, 3000)}ohm {spread(rng, widest)} P_tot=125mW 1:Z 2:L\n"
        f"D2 led I_S=1e-18A,3e-19A..3e-18A n=2 I_F=25mA V_R=5V P_tot=75mW A:L K:GND\n"
        f"R3 resistor {ohms(rng)} {spread(rng, widest)} P_tot=125mW 1:Z 2:T\nR4 resistor {ohms(rng)} {spread(rng, widest)} P_tot=125mW 1:T 2:GND\n"
    )


def islands(rng: np.random.Generator, widest: float) -> str:
    """Two circuits on one stiff rail: values of one have no influence on the other."""
    lines = ["PS1 supply 12V 10.8V..13.2V limit=5A +:V -:GND"]
    for side in "AB":
        for k, (a, b) in enumerate((("V", "1"), ("1", "2"), ("1", "GND"), ("2", "GND"))):
            a, b = (x if x in ("V", "GND") else side + x for x in (a, b))
            lines.append(f"R{side}{k} resistor {ohms(rng)} {spread(rng, widest)} P_tot=250mW 1:{a} 2:{b}")
        lines.append(f"D{side} diode I_S=1e-14 n=1.5 I_F=50mA V_R=50V A:{side}2 K:GND")
    return HEAD + "\n".join(lines) + "\n"


KINDS = (network, bridge, mirror, reference, islands)


def claims(operation: Operation) -> tuple[Explorer, list[Watched], list[list[Extreme]]]:
    """The extremes of a solved mode's stresses with their proofs."""
    items = watched(operation.solver, load_policy("none"))
    explorer = Explorer(operation.solver, operation.boards[0])
    objectives = [item.objectives() for item in items]
    left = iter(explorer.extremes([o for some in objectives for o in some]))
    return explorer, items, prove(explorer, items, [[next(left) for _ in some] for some in objectives])


def solved_rows(operation: Operation, explorer: Explorer, inside: int, seed: int) -> tuple[Array, object]:
    """All vertices and some points inside, solved."""
    rng = np.random.default_rng(seed)
    vertices = np.array(list(product(*zip(explorer.low, explorer.high, strict=True))))
    rows = explorer.low + (explorer.high - explorer.low) * rng.random((inside, len(explorer.low)))
    rows = np.concatenate([vertices, rows])
    overrides, _ = assign(explorer.spans, rows, 25.0)
    start = operation.solver.job({}, None, len(rows))
    job = Job(overrides, 25.0, len(rows), np.repeat(operation.boards[0].u, len(rows), axis=0), start.t0)
    settled = operation.solver.settle(job)
    return settled.converged, settled.solved


def broken(text: str, seed: int, inside: int = 150) -> tuple[dict[str, int], list[str]]:
    """How many stresses are proven, bounded and checked, and what contradicts their proofs on solved rows."""
    operation = Operation(netaudit.loads(text).board.circuits[0])
    if not operation.result().points:
        return {}, []
    explorer, items, extremes = claims(operation)
    good, solved = solved_rows(operation, explorer, inside, seed)
    counts = dict.fromkeys(("proven", "bounded", "checked"), 0)
    wrong = []
    for item, some in zip(items, extremes, strict=True):
        top = max(some, key=lambda e: e.value)
        counts[top.proof] += 1
        for objective in item.objectives():
            most = float(np.max(objective(solved)[good]))  # type: ignore[arg-type]  # a Solved
            limit = top.bound if top.bound is not None else top.value
            room = 1e-6 if top.proof == "checked" else 1e-9
            if most > limit + room * abs(limit) + 1e-12:
                wrong.append(f"{item.device.name} {item.check.quantity} {top.proof}: {most:.12g} > {limit:.12g}")
    return counts, wrong
