"""The certificate of an operating point, worked out from the reported pin currents alone.

Kirchhoff: on every net the pin currents sum to zero.  Tellegen (Philips Research Reports 7, 259-269, 1952): the powers
of all devices sum to zero.  Neither uses the matrix that gave the point.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from netaudit.solve.solved import Solved

#: the smallest current that a result states (A): pin currents hold within 1e-9 relative or this
_CLAIMED = 1e-15


@dataclass(frozen=True)
class Certificate:
    """``residual_current`` in amperes (the largest over the nets; the grounds count as one), ``worst_net``,
    ``power_imbalance`` as a share of the power that is turned over, ``holds``: all within rounding."""

    residual_current: float
    worst_net: str | None
    power_imbalance: float
    holds: bool


def certify(solved: Solved) -> Certificate:
    """The certificate of one operating point (arrays without batch axes)."""
    system = solved.system
    pins = len(system.pins)
    if not pins:
        return Certificate(0.0, None, 0.0, True)
    currents = solved.handle_sums[:pins]
    net_sum = system.to_nets.spread(currents)
    net_size = system.to_nets.spread(np.abs(currents))
    grounds = [k for k, net in enumerate(system.nets) if net in system.circuit.grounds]
    net_sum[grounds], net_size[grounds] = net_sum[grounds].sum(), net_size[grounds].sum()
    worst = int(np.argmax(np.abs(net_sum)))
    volts = solved.pin_voltages
    scale = float(np.abs(volts * currents).sum())
    imbalance = abs(float((volts * currents).sum())) / scale if scale > 0 else 0.0
    noise = _rounding(solved)
    holds = bool((np.abs(net_sum) <= 1e-9 * net_size + noise).all()) and imbalance <= 1e-6 + noise.sum() * np.abs(
        volts
    ).max() / max(scale, 1e-300)
    return Certificate(float(abs(net_sum[worst])), system.nets[worst], imbalance, holds)


def _rounding(solved: Solved) -> np.ndarray:
    """The rounding floor of every net's sum: the magnitudes of all terms of its pins times a few ulp, in amperes.

    Below a femtoampere no current is claimed: nets that only blocking junctions reach carry less than that, and their
    currents are differences within a matrix of much larger terms.
    """
    system = solved.system
    terms = np.abs(system.contributions(solved.num, solved.x, solved.phi))
    per_pin = system.balance.spread(terms)[: len(system.pins)]
    floor = system.to_nets.spread(per_pin) * 256 * np.finfo(float).eps + _CLAIMED
    grounds = [k for k, net in enumerate(system.nets) if net in system.circuit.grounds]
    floor[grounds] = floor[grounds].sum()
    return np.asarray(floor)
