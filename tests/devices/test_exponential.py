"""The exponential branch against its closed form by Lambert's W in 90 digits, and what an iteration asks of it."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from netaudit.devices.families import EXPONENTIAL, Parameters
from netaudit.devices.omega import wright_omega


def parameters(log_i: float, v: float, r: float) -> Parameters:
    return {"log_I": np.array(log_i), "V": np.array(v), "R": np.array(r)}


def exact(u: float, log_i: float, v: float, r: float) -> tuple[mp.mpf, mp.mpf]:
    """i and di/du: i = (V/R) W((R I_S/V) exp((u + R I_S)/V)) - I_S (Banwell and Jayakumar 2000), W from its logarithm."""
    # digits enough for the difference with I_S below
    with mp.workdps(90):
        i_s, v_t, ohms, volts = mp.exp(mp.mpf(log_i)), mp.mpf(v), mp.mpf(r), mp.mpf(u)
        if r == 0.0:
            i, grown = i_s * mp.expm1(volts / v_t), i_s * mp.exp(volts / v_t)
        else:
            theta = (volts + ohms * i_s) / v_t + mp.log(ohms * i_s / v_t)
            w = mp.exp(theta) if theta < -50 else mp.log1p(mp.exp(min(theta, mp.mpf(50)))) + max(theta - 50, 0)
            old = mp.mpf(0)
            while abs(w - old) > mp.mpf(10) ** -85 * w:
                old, w = w, w * (1 + theta - mp.log(w)) / (1 + w)
            grown = w * v_t / ohms
            i = grown - i_s if u else mp.mpf(0)
        return i, grown / (v_t + ohms * grown)


@settings(max_examples=300, deadline=None, derandomize=True)
@given(
    log_i=st.one_of(st.floats(-60, -5), st.floats(-1500, -100)),
    v=st.floats(-3, 0).map(lambda e: 10.0**e),
    r=st.one_of(st.just(0.0), st.floats(-6, 10).map(lambda e: 10.0**e)),
    share=st.one_of(st.just(0.0), st.floats(1e-12, 1.2), st.floats(-2, -1e-12)),
)
@example(log_i=-14.0, v=0.025, r=1e9, share=1e-9)
@example(log_i=-32.0, v=0.025, r=0.0, share=0.0)
@example(log_i=-1025.0, v=0.005, r=1.0, share=1.0)
def test_value_and_bounds_hold_the_exact_current_and_slope(log_i: float, v: float, r: float, share: float) -> None:
    """``share`` of the voltage at which a bare junction carries 1 A; forward, starved, reverse and at zero."""
    u = -share * log_i * v
    if r == 0.0:
        u = min(u, -log_i * v + 7 * v)
    p = parameters(log_i, v, r)
    i, g = exact(u, log_i, v, r)
    at = np.array(u)
    low, high = EXPONENTIAL.bounds(at, at, p)
    assert mp.mpf(float(low)) <= i <= mp.mpf(float(high))
    least, most = EXPONENTIAL.slope_bounds(at, at, p)
    assert mp.mpf(float(least)) <= g <= mp.mpf(float(most))
    found = EXPONENTIAL.value(at, p)
    # an exponent e is known to eps e, and so is what it gives, relatively
    size = (1 + abs(log_i) + abs(u) / v) * np.finfo(float).eps
    assert abs(mp.mpf(float(found[0])) - i) <= 2 * size * abs(i) + np.finfo(float).tiny
    assert abs(mp.mpf(float(found[1])) - g) <= 2 * size * g + np.finfo(float).tiny


def test_no_voltage_gives_no_current_whatever_the_resistance() -> None:
    for r in (0.0, 1e-9, 1.0, 1e12):
        current, slope = EXPONENTIAL.value(np.array([0.0, -0.0]), parameters(-20.0, 0.026, r))
        assert (current == 0.0).all()
        assert (slope > 0.0).all()


@pytest.mark.parametrize("u", [1e4, 1e300, -1e4, -1e300])
def test_absurd_voltages_stay_finite_and_silent(u: float) -> None:
    p = {"log_I": np.array([-30.0, -1500.0]), "V": np.array([0.02, 0.005]), "R": np.array([1.0, 0.0])}
    current, slope = EXPONENTIAL.value(np.array([u, u]), p)
    assert np.isfinite(current).all()
    assert (slope >= 0.0).all()
    old = np.zeros(2)
    for rho in (0.0, 10.0, np.inf):
        step = EXPONENTIAL.limit(old, np.array([u, u]), np.array([1.0, -1.0]), np.full(2, rho), p)
        assert np.isfinite(step).all()


@settings(max_examples=80, deadline=None, derandomize=True)
@given(rho=st.floats(-3, 6).map(lambda e: 10.0**e), u0=st.floats(-20, 50), log_i=st.floats(-45, -8))
def test_limited_step_meets_the_curve_on_its_load_line(rho: float, u0: float, log_i: float) -> None:
    """From any point of the load line u + rho i = u0 the next value lies where the curve crosses that line."""
    p = parameters(log_i, 0.03, 0.2)
    met = EXPONENTIAL.limit(np.array(1e3), np.array(u0), np.array(0.0), np.array(rho), p)
    current = EXPONENTIAL.value(met, p)[0]
    assert float(met + rho * current) == pytest.approx(u0, rel=1e-9, abs=1e-12)


@pytest.mark.parametrize(("log_i", "v"), [(-30.0, 0.026), (-1025.0, 0.005)])
def test_level_load_line_gives_the_curves_point_of_that_current(log_i: float, v: float) -> None:
    p = parameters(log_i, v, 2.0)
    for current in (1e-9, 1e-3, 1.0):
        u = EXPONENTIAL.limit(np.array(1e3), np.array(0.0), np.array(current), np.array(np.inf), p)
        assert float(EXPONENTIAL.value(u, p)[0]) == pytest.approx(current, rel=1e-9)
    # no point of the curve carries less than -I_S: the linear solution stands
    assert float(EXPONENTIAL.limit(np.array(9.0), np.array(-3.0), np.array(-1.0), np.array(np.inf), p)) == -3.0


def test_batch_axes_give_what_single_calls_give() -> None:
    rng = np.random.default_rng(5)
    u = rng.uniform(-2, 2, (4, 3))
    p = {"log_I": np.array([-30.0, -20.0, -900.0]), "V": np.array([0.026, 0.05, 0.006]), "R": rng.uniform(0, 3, (4, 1))}
    current, slope = EXPONENTIAL.value(u, p)
    for k in range(4):
        for j in range(3):
            one = EXPONENTIAL.value(u[k, j], parameters(p["log_I"][j], p["V"][j], p["R"][k, 0]))
            assert (float(one[0]), float(one[1])) == pytest.approx((current[k, j], slope[k, j]), rel=1e-13)


def test_omega_solves_its_equation_in_its_tails() -> None:
    assert float(wright_omega(np.array(-1e4))) == 0.0
    assert float(wright_omega(np.array(np.inf))) == np.inf
    for x in (-700.0, -30.25, 1e155, 1e300):
        w = float(wright_omega(np.array(x)))
        with mp.workdps(50):
            # a relative error e of w moves w + ln w by e (1 + w)
            miss = abs(mp.mpf(w) + mp.log(mp.mpf(w)) - mp.mpf(x)) / (1 + mp.mpf(w))
            assert miss <= 4 * np.finfo(float).eps
