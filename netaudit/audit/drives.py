"""``point/weak-drive``, ``point/amplifier-limits``, ``point/coil-state``: transistors, op amps and relays."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

import numpy as np

from netaudit.audit.context import CONDUCTS, POWERED, REACHED, Context
from netaudit.audit.tasks import Task, made
from netaudit.audit.worst import Extreme
from netaudit.circuit.circuit import Circuit
from netaudit.devices.base import Array, Device
from netaudit.finding import Finding
from netaudit.quantities.write import engineering
from netaudit.solve.solved import Solved

#: below this collector-emitter voltage a transistor is used as a switch, V
_SWITCH = 1.0
#: share of the least h_FE above which a switch is not driven hard
_FORCED = 0.5
#: shares of the voltage of an energised coil: a relay that is on needs the first, one that is off has less than the
#: second (pick-up and drop-out of common relays lie between them: common practice)
_HOLDS, _RELEASES = 0.5, 0.1
_COIL = 1.0
#: what an objective says where its question does not arise
_NO = -1.0


def bipolar_tasks(device: Device, circuit: Circuit) -> Iterator[Task]:
    """I_C / I_B above half the least h_FE while V_CE is below 1 V.  A transistor connected as a diode is no switch."""
    least = _least_gain(device)
    if least is not None and device.pins["B"] != device.pins["C"]:
        yield Task(lambda b: _forced_share(b, device, least), lambda e, n: _weak_base(e, device, circuit, least))


def _least_gain(device: Device) -> float | None:
    if "h_FE" in device.ratings:
        return device.ratings["h_FE"].nominal
    for name in ("h_FE", "beta_F"):
        if name in device.values:
            return device.values[name].low
    return None


def _currents(board: Solved, device: Device) -> tuple[Array, Array, Array]:
    """I_C, I_B and V_CE in the direction of normal use."""
    view = board.view(device.name)
    s = -1.0 if device.kind == "pnp" else 1.0
    return s * view.i("C"), s * view.i("B"), s * (view.v("C") - view.v("E"))


def _forced_share(board: Solved, device: Device, least: float) -> Array:
    """(I_C / I_B) / (half the least h_FE) - 1 for a transistor that carries current with V_CE below 1 V."""
    i_c, i_b, v_ce = _currents(board, device)
    share = i_c / np.maximum(i_b, 1e-15) / (_FORCED * least) - 1.0
    return np.where((i_c > CONDUCTS) & (v_ce < _SWITCH), share, _NO)


def _weak_base(extreme: Extreme, device: Device, circuit: Circuit, least: float) -> Iterable[Finding]:
    if extreme.value <= 0:
        return
    i_c, i_b, _ = (float(x) for x in _currents(extreme.board, device))
    forced = i_c / max(i_b, 1e-15)
    yield made(
        "point/weak-drive", "warning", device, circuit.mode,
        f"as a switch it carries {engineering(i_c, 'A')} with a base current of {engineering(i_b, 'A')}, a ratio of "
        f"{forced:.3g} above half its least h_FE ({_FORCED * least:.3g}): lower the base resistance",
        extreme.corner, quantity="gain", value=forced, limit=_FORCED * least, unit="1",
    )  # fmt: skip


def gate_tasks(device: Device, circuit: Circuit) -> Iterator[Task]:
    """V_GS below the value at which R_DS_on is specified, while current flows from drain to source."""
    specified = device.values.get("R_DS_on.at")
    if specified is not None:
        needed = abs(specified.nominal)
        yield Task(lambda b: _gate_lacking(b, device, needed), lambda e, n: _weak_gate(e, device, circuit, needed))


def _gate(board: Solved, device: Device) -> tuple[Array, Array]:
    """V_GS and I_D in the direction of normal use."""
    view = board.view(device.name)
    s = -1.0 if device.kind == "pmos" else 1.0
    return s * (view.v("G") - view.v("S")), s * view.i("D")


def _gate_lacking(board: Solved, device: Device, needed: float) -> Array:
    v_gs, i_d = _gate(board, device)
    return np.where(i_d > CONDUCTS, needed - v_gs, _NO)


def _weak_gate(extreme: Extreme, device: Device, circuit: Circuit, needed: float) -> Iterable[Finding]:
    if extreme.value <= 1e-9 * needed:
        return
    v_gs, i_d = (float(x) for x in _gate(extreme.board, device))
    yield made(
        "point/weak-drive", "warning", device, circuit.mode,
        f"it carries {engineering(i_d, 'A')} with V_GS at {engineering(v_gs, 'V')}, below the "
        f"{engineering(needed, 'V')} at which R_DS_on is specified: drive the gate higher or choose a lower threshold",
        extreme.corner, quantity="gate-source-voltage", value=v_gs, limit=needed, unit="V",
    )  # fmt: skip


def amplifier_tasks(device: Device, circuit: Circuit) -> Iterator[Task]:
    """Output at its swing, output at its current limit, inputs beyond the rails (each judged where powered)."""
    for question in _AMPLIFIER:
        if question != "limit" or "limit" in device.values:
            yield _amplifier_task(device, circuit, question)


def _amplifier_task(device: Device, circuit: Circuit, question: str) -> Task:
    return Task(
        lambda b: _amplifier(b, device, question), lambda e, n: _at_limit(e, device, circuit, _AMPLIFIER[question])
    )


_AMPLIFIER = {
    "swing": "its output stands at the end of its swing and feedback no longer holds: give it more supply or less gain",
    "limit": "its output delivers its current limit and feedback no longer holds: lighten its load",
    "inputs": "an input is beyond the supply rails: divide the input down or choose another supply",
}


def _amplifier(board: Solved, device: Device, question: str) -> Array:
    """Above zero where the limit is reached, as a share of the supply voltage or of the current limit."""
    view = board.view(device.name)
    low, high = view.v("V-"), view.v("V+")
    span = np.maximum(high - low, 1e-12)
    if question == "swing":
        # what the output would be without its ends: beyond them the loop is open
        ideal, swing = view.inner("x"), view.value("swing")
        share = np.maximum(ideal - (high - swing), low + swing - ideal) / span - 1e-6
    elif question == "limit":
        share = np.abs(view.i("OUT")) / view.value("limit") - REACHED
    else:
        inputs = view.v("IN+"), view.v("IN-")
        share = np.maximum(np.maximum(*inputs) - high, low - np.minimum(*inputs)) / span - 1e-6
    return np.where(high - low > POWERED, share, _NO)


def _at_limit(extreme: Extreme, device: Device, circuit: Circuit, said: str) -> Iterable[Finding]:
    if extreme.value > 0:
        output = float(extreme.board.view(device.name).v("OUT"))
        yield made(
            "point/amplifier-limits", "warning", device, circuit.mode, said, extreme.corner,
            net=device.pins["OUT"], quantity="voltage", value=output, unit="V",
        )  # fmt: skip


def relay_tasks(device: Device, circuit: Circuit, known: Context) -> Iterator[Task]:
    """The coil's voltage against the given state of the contact."""
    energised = known.coils.get(device.name, 0.0)
    on = device.words.get("state") == "on"
    share = _HOLDS if on else _RELEASES
    limit = device.nominal("V_on" if on else "V_off", max(share * energised, _COIL))
    s = -1.0 if on else 1.0
    yield Task(lambda b: s * (_coil(b, device) - limit), lambda e, n: _misfit(e, device, circuit, on, limit))


def _coil(board: Solved, device: Device) -> Array:
    view = board.view(device.name)
    return np.abs(view.v("C1") - view.v("C2"))


def _misfit(extreme: Extreme, device: Device, circuit: Circuit, on: bool, limit: float) -> Iterable[Finding]:
    if extreme.value <= 0:
        return
    volts = float(_coil(extreme.board, device))
    said, state = ("too little to hold it", "on") if on else ("enough to pull it in", "off")
    yield made(
        "point/coil-state", "warning", device, circuit.mode,
        f"its coil gets {engineering(volts, 'V')}, {said}, but its contact is given as {state}: set the state that "
        "fits, or mend the drive of the coil",
        extreme.corner, quantity="voltage", value=volts, limit=limit, unit="V",
    )  # fmt: skip
