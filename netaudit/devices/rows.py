"""Rows that limits are made of: outputs that deliver within bounds, quiescent currents that fade with their supply."""

from __future__ import annotations

import numpy as np

from netaudit.devices.base import Assembly, Terms, Value, conductance, two_pin
from netaudit.devices.families import EXPONENTIAL, RAMP
from netaudit.devices.junction import BOLTZMANN, CHARGE, KELVIN, LEAK

#: a quiescent current falls to zero in a straight line below this supply voltage, V
FADE = 1.0
#: saturation current of clamp and reverse junctions that no data sheet states, A
CLAMP_I_S = 1e-14


def quiescent(a: Assembly, p: int, q: int, current: Value) -> None:
    """A current from p to q that is constant above FADE volts and falls to 0 at 0 V below."""
    slope = np.asarray(current) / FADE
    conductance(a, p, q, slope)
    a.branch(RAMP, [(p, -slope), (q, slope)], [(p, 1.0), (q, -1.0)], start=2 * FADE, offset=FADE)


def clamp(a: Assembly, p: int, q: int, temperature: Value) -> None:
    """A clamp junction from p to q (I_S 1e-14 A, n 1), at the part's temperature but with its I_S held."""
    vt = BOLTZMANN * (np.asarray(temperature) + KELVIN) / CHARGE
    two_pin(a, EXPONENTIAL, p, q, log_I=np.log(CLAMP_I_S), V=vt, R=0.0)
    conductance(a, p, q, LEAK)


def bounded_output(
    a: Assembly, j: int, wanted: Terms, output: Terms, least: Value | None, most: Value | None, rho: float
) -> None:
    """The row of an output current j: holds wanted = output while j is between least and most (None: no bound), j stays
    at a bound where that cannot be had.

    rho j - clamp(rho j + wanted - output, rho least, rho most) = 0, clamp(w) = w + max(0, lo - w) - max(0, w - hi).
    """
    difference = [*wanted, *((c, -np.asarray(k)) for c, k in output)]
    w = [(j, rho), *difference]
    for column, k in difference:
        a.add(j, column, -np.asarray(k))
    if least is not None:
        a.branch(RAMP, [(j, -1.0)], [(c, -np.asarray(k)) for c, k in w], offset=-rho * np.asarray(least))
    if most is not None:
        a.branch(RAMP, [(j, 1.0)], w, offset=rho * np.asarray(most))
