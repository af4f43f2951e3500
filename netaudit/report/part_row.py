"""A fit as a part row (TOML) and as words: parameters with their errors, the largest deviation, a small picture."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from netaudit.parts.bench import BOLTZMANN, CHARGE, Fit
from netaudit.parts.measured import Curve
from netaudit.quantities.write import engineering, write_number


def kept(kind: str, fit: Fit) -> bool:
    """Whether the row keeps the curve itself: no exponential fits, or the kind's model is not what was found."""
    return not fit.exponential or kind == "curve" or (kind in ("zener", "suppressor") and fit.breakdown is None)


def part_row(name: str, kind: str, fit: Fit, source: str) -> str:
    """The row; a name with other characters than a bare TOML key allows is quoted."""
    key = name if name and all(c.isalnum() or c in "-_" for c in name) else f'"{_escaped(name)}"'
    lines = [f"[{key}]"]
    if kept(kind, fit):
        points = ",\n".join(f'  "{write_number(v, "V")} @ {write_number(i, "A")}"' for v, i in fit.points)
        lines += [
            f'kind = "{kind}"',
            f"points = [\n{points},\n]",
        ]
    else:
        lines += [f'kind = "{kind}"', f'I_S = "{write_number(fit.I_S, "A")}"', f"n = {fit.n!r}"]
        lines.append(f'R_S = "{write_number(fit.R_S, "ohm")}"')
        if abs(fit.temperature - 25.0) > 0.05:
            lines.append(f'T_0 = "{fit.temperature:g}degC"')
        if fit.leakage is not None:
            lines.append(f'I_R = "{write_number(fit.leakage[0], "A")} @ {write_number(fit.leakage[1], "V")}"')
        if fit.breakdown is not None:
            for symbol, unit in (("V_Z", "V"), ("I_Z", "A"), ("r_Z", "ohm"), ("r_ZK", "ohm"), ("I_ZK", "A")):
                lines.append(f'{symbol} = "{write_number(getattr(fit.breakdown, symbol), unit)}"')
        if fit.alpha_VF is not None:
            lines.append(f'alpha_VF = "{fit.alpha_VF[0] * 1e3:.4g}mV/K @ {write_number(fit.alpha_VF[1], "A")}"')
    lines.append(f'source = "measured, {_escaped(source)}"')
    return "\n".join(lines) + "\n"


def _escaped(text: str) -> str:
    return "".join(c if c.isprintable() and c not in '"\\' else f"\\u{ord(c):04x}" for c in text)


def fit_text(name: str, kind: str, fit: Fit, curves: Sequence[Curve]) -> str:
    """What the fit found, as comments before the row."""
    count = sum(len(c.v) for c in curves)
    lines = [f"# {name}: {count} points at {', '.join(_degrees(c, fit) for c in curves)}"]
    lines += [f"# left out: {said}" for said in fit.left_out]
    if kept(kind, fit):
        if fit.exponential:
            why = "as its kind asks" if kind == "curve" else f"it shows no breakdown that a {kind} could be modelled by"
            lines.append(f"# the curve itself is kept: {why}")
            return "\n".join(lines)
        worst = "" if np.isnan(fit.worst) else f" (the best one misses by {engineering(fit.worst, 'V')})"
        lines.append(f"# no exponential fits{worst}: the curve itself is kept")
        return "\n".join(lines)
    for symbol, value, unit in (("I_S", fit.I_S, "A"), ("n", fit.n, "1"), ("R_S", fit.R_S, "ohm")):
        error = fit.errors.get(symbol, 0.0)
        lines.append(f"# {symbol:<4} {engineering(value, unit, 4)}  standard error {engineering(error, unit, 2)}")
    if fit.leakage is not None:
        lines.append(f"# I_R  {engineering(fit.leakage[0], 'A', 3)} at {engineering(fit.leakage[1], 'V', 3)}")
    if fit.breakdown is not None:
        b = fit.breakdown
        lines.append(
            f"# V_Z  {engineering(b.V_Z, 'V', 4)} at {engineering(b.I_Z, 'A', 3)}, slope {engineering(b.r_Z, 'ohm', 3)}"
        )
    if fit.E_g is not None and fit.alpha_VF is not None:
        lines.append(
            f"# E_g  {fit.E_g:.3f} eV, drift {fit.alpha_VF[0] * 1e3:.3g} mV/K at {engineering(fit.alpha_VF[1], 'A')}"
        )
    at_v, at_i = fit.worst_at
    lines.append(
        f"# largest deviation {engineering(fit.worst, 'V')} at {engineering(at_v, 'V')}, {engineering(at_i, 'A')}"
    )
    return "\n".join([*lines, *_picture(fit)])


def _degrees(curve: Curve, fit: Fit) -> str:
    return f"{curve.temperature if curve.temperature is not None else fit.temperature:g} degC"


def _picture(fit: Fit, width: int = 60, height: int = 12) -> list[str]:
    """Measured points (o) and the fit (.), current on a logarithmic scale upwards, voltage to the right."""
    points = [(v, i) for v, i in fit.points if v > 0 and i > 0]
    if len(points) < 3:
        return []
    v = np.array([p[0] for p in points])
    log_i = np.log10([p[1] for p in points])
    grid = [[" "] * width for _ in range(height)]
    bottom, top = float(log_i.min()), float(log_i.max()) + 1e-12

    def mark(volts: float, log: float, sign: str) -> None:
        column = round((volts - v.min()) / (np.ptp(v) + 1e-300) * (width - 1))
        row = round((log - bottom) / (top - bottom) * (height - 1))
        if 0 <= column < width and 0 <= row < height:
            grid[height - 1 - row][column] = sign

    scale = fit.n * BOLTZMANN * (fit.temperature + 273.15) / CHARGE
    for log in np.linspace(bottom, top, 400):
        amperes = 10.0**log
        mark(scale * float(np.log1p(amperes / fit.I_S)) + fit.R_S * amperes, float(log), ".")
    for volts, log in zip(v.tolist(), log_i.tolist(), strict=True):
        mark(volts, log, "o")
    body = [f"# |{''.join(line)}" for line in grid]
    return [
        f"# {engineering(10**top, 'A')}",
        *body,
        f"# {engineering(10**bottom, 'A')}   {engineering(float(v.min()), 'V')} to {engineering(float(v.max()), 'V')}   "
        "o measured  . fit",
    ]
