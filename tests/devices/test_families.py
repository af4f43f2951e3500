"""Branch families: bounds contain samples, the exponential against 50-digit arithmetic, tables keep their shape."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.special import wrightomega

from netaudit.devices.families import EXPONENTIAL, RAMP, SQUARE, Family
from netaudit.devices.omega import wright_omega
from netaudit.devices.power import FADING_POWER, PARABOLA
from netaudit.devices.table import Table

CURVE = Table(tuple((v, 2.5 * v**3 - 10.5 * v**2 + 11.8 * v) for v in np.linspace(-0.5, 3.0, 36).tolist()))
RISING = Table(tuple((v, v**3 + v) for v in np.linspace(-2, 2, 15).tolist()))
FAMILIES: list[tuple[Family, dict[str, float]]] = [
    (EXPONENTIAL, {"log_I": np.log(1e-12), "V": 0.0257, "R": 0.0}),
    (EXPONENTIAL, {"log_I": np.log(1e-9), "V": 0.046, "R": 0.5}),
    (EXPONENTIAL, {"log_I": -900.0, "V": 0.005, "R": 10.0}),
    (RAMP, {"offset": 0.3}),
    (SQUARE, {"offset": 1.2}),
    (FADING_POWER, {"P": 5.0, "V_min": 2.0}),
    (PARABOLA, {}),
    (CURVE, {}),
    (RISING, {}),
]


def arrays(p: dict[str, float]) -> dict[str, np.ndarray]:
    return {k: np.asarray(v) for k, v in p.items()}


@pytest.mark.parametrize(("family", "p"), FAMILIES)
@settings(max_examples=60, deadline=None, derandomize=True)
@given(a=st.floats(-6, 6), b=st.floats(-6, 6))
def test_bounds_contain_samples_of_value_and_slope(family: Family, p: dict[str, float], a: float, b: float) -> None:
    low, high = np.array(min(a, b)), np.array(max(a, b))
    at = np.linspace(low, high, 41)
    value, slope = family.value(at, arrays(p))
    v0, v1 = family.bounds(low, high, arrays(p))
    s0, s1 = family.slope_bounds(low, high, arrays(p))
    assert (v0 <= value).all() and (value <= v1).all()  # noqa: PT018  # one statement about an interval
    assert (s0 <= slope).all() and (slope <= s1).all()  # noqa: PT018


@pytest.mark.parametrize(("family", "p"), FAMILIES)
@settings(max_examples=60, deadline=None, derandomize=True)
@given(a=st.floats(-6, 6), b=st.floats(-6, 6), share=st.floats(-0.5, 1.5))
def test_offset_bounds_contain_samples_off_any_line(
    family: Family, p: dict[str, float], a: float, b: float, share: float
) -> None:
    low, high = np.array(min(a, b)), np.array(max(a, b))
    at = np.linspace(low, high, 41)
    value = family.value(at, arrays(p))[0]
    chord = (value[-1] - value[0]) / (high - low) if high > low else np.array(1.0)
    slope = share * chord
    lo, hi = family.offset_bounds(low, high, slope, arrays(p))
    off = value - slope * at
    slack = 1e-15 * (np.abs(value) + np.abs(slope * at))
    assert (lo <= off + slack).all()
    assert (off - slack <= hi).all()


def test_offset_of_a_curve_shrinks_with_the_square_of_the_interval() -> None:
    widths = []
    for half in (0.04, 0.02, 0.01):
        low, high = np.array(1.0 - half), np.array(1.0 + half)
        v0, v1 = CURVE.value(low, {})[0], CURVE.value(high, {})[0]
        lo, hi = CURVE.offset_bounds(low, high, (v1 - v0) / (high - low), {})
        widths.append(float(hi - lo))
    assert widths[1] < 0.4 * widths[0]
    assert widths[2] < 0.4 * widths[1]


@pytest.mark.parametrize(
    ("i_s", "v", "r"), [(1e-12, 0.0257, 0.0), (1e-9, 0.046, 0.5), (1e-6, 0.0257, 1e9), (1e-15, 0.03, 1e-6)]
)
def test_exponential_agrees_with_fifty_digits(i_s: float, v: float, r: float) -> None:
    mp.mp.dps = 50
    for u in (-50.0, -0.3, -1e-6, 1e-9, 0.2, 0.65, 0.9, 5.0):
        if r == 0.0 and u > 1.0:
            continue
        found = float(EXPONENTIAL.value(np.array(u), arrays({"log_I": np.log(i_s), "V": v, "R": r}))[0])
        low, high = (mp.mpf(u), mp.mpf(0)) if u < 0 else (mp.mpf(0), mp.mpf(u))
        for _ in range(260):
            middle = (low + high) / 2
            if middle + r * mp.mpf(i_s) * mp.expm1(middle / mp.mpf(v)) > u:
                high = middle
            else:
                low = middle
        wanted = mp.mpf(i_s) * mp.expm1(low / mp.mpf(v))
        assert abs(found - wanted) <= 3e-13 * abs(wanted) + mp.mpf(i_s) * mp.mpf("1e-14"), u


def test_omega_agrees_with_scipy() -> None:
    """scipy.special.wrightomega."""
    x = np.concatenate([np.linspace(-700, 700, 20_001), np.linspace(-4, 4, 4_001), [1e6, 1e12]])
    assert np.allclose(wright_omega(x), wrightomega(x), rtol=5e-15, atol=0)


def test_table_passes_through_its_points_and_keeps_their_hills() -> None:
    x = np.array([q[0] for q in CURVE.points])
    y = np.array([q[1] for q in CURVE.points])
    assert np.allclose(CURVE.value(x, {})[0], y, rtol=1e-13, atol=1e-13)
    fine = np.linspace(x[0], x[-1], 5_001)
    rises = np.sign(np.diff(CURVE.value(fine, {})[0]))
    turns = int((np.diff(rises[rises != 0]) != 0).sum())
    assert turns == int((np.diff(np.sign(np.diff(y))) != 0).sum()) == 2
    assert CURVE.shape == "other"
    assert RISING.shape == "increasing"
