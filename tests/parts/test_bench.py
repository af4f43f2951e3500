"""Parameters from synthetic curves with noise, and files as benches write them."""

from __future__ import annotations

import numpy as np
import pytest

from netaudit.failure import InputError
from netaudit.parts.bench import BOLTZMANN, CHARGE, Meter, fit_curves
from netaudit.parts.measured import Curve, Layout, read_curves


def synthetic(i_s: float, n: float, r_s: float, seed: int, celsius: float = 25.0) -> Curve:
    """A sweep with 1 mV and 1 % noise over five decades of current."""
    rng = np.random.default_rng(seed)
    i = np.logspace(-6, -0.9, 90)
    vt = BOLTZMANN * (celsius + 273.15) / CHARGE
    v = n * vt * np.log1p(i / i_s) + r_s * i
    return Curve(
        v + 1e-3 * rng.standard_normal(90), i * (1 + 0.01 * rng.standard_normal(90)), celsius, tuple(range(90))
    )


@pytest.mark.parametrize("seed", range(5))
@pytest.mark.parametrize(
    ("i_s", "n", "r_s"), [(1e-12, 1.2, 1.0), (1e-9, 1.8, 0.5), (1e-18, 2.0, 3.0), (1e-14, 1.05, 0.02)]
)
def test_parameters_come_back(i_s: float, n: float, r_s: float, seed: int) -> None:
    fit = fit_curves([synthetic(i_s, n, r_s, seed)])
    assert fit.exponential
    assert fit.n == pytest.approx(n, rel=0.02)
    if r_s * 0.126 >= 0.05:
        assert pytest.approx(r_s, rel=0.05) == fit.R_S
    else:
        assert abs(fit.R_S - r_s) <= 3 * max(fit.errors["R_S"], 1e-3)


def test_order_of_the_points_does_not_matter() -> None:
    c = synthetic(1e-12, 1.2, 1.0, 0)
    order = np.random.default_rng(1).permutation(len(c.v))
    shuffled = Curve(c.v[order], c.i[order], 25.0, c.lines)
    assert fit_curves([shuffled]).n == pytest.approx(fit_curves([c]).n, rel=1e-9)


def test_points_at_the_current_limit_are_left_out_and_named() -> None:
    c = synthetic(1e-12, 1.2, 1.0, 0)
    v = np.concatenate([c.v, np.linspace(1.0, 2.0, 12)])
    i = np.concatenate([c.i, np.full(12, c.i.max() * 1.02)])
    fit = fit_curves([Curve(v, i, 25.0, tuple(range(len(v))))])
    assert fit.n == pytest.approx(1.2, rel=0.02)
    assert "current limit" in fit.left_out[0]


def test_offset_noise_is_left_out() -> None:
    c = synthetic(1e-12, 1.2, 1.0, 0)
    fit = fit_curves([Curve(c.v, c.i + 2e-6, 25.0, c.lines)], Meter(amperes=2e-6))
    assert fit.n == pytest.approx(1.2, rel=0.02)
    assert "offset noise" in fit.left_out[0]


def test_temperatures_give_the_gap_and_the_drift() -> None:
    def hot(celsius: float) -> Curve:
        t, t0 = celsius + 273.15, 298.15
        i_s = 1e-14 * (t / t0) ** 3 * np.exp(1.12 * CHARGE / BOLTZMANN * (1 / t0 - 1 / t))
        return synthetic(i_s, 1.0, 0.5, int(celsius), celsius)

    fit = fit_curves([hot(c) for c in (0.0, 25.0, 60.0, 85.0)])
    assert fit.E_g == pytest.approx(1.12, rel=0.03)
    assert fit.alpha_VF is not None
    # about -2 mV/K near 1 mA: common practice
    assert -2.4e-3 < fit.alpha_VF[0] < -1.5e-3


def test_what_is_no_exponential_stays_a_curve() -> None:
    v = np.linspace(0, 3, 40)
    i = 1e-3 * (2.5 * v**3 - 10.5 * v**2 + 11.8 * v)
    fit = fit_curves([Curve(v, i, 25.0, tuple(range(40)))])
    assert not fit.exponential
    assert len(fit.points) == 40


def test_breakdown_and_leakage_of_the_reverse_branch() -> None:
    u = np.linspace(0.5, 5.4, 60)
    reverse = 1e-7 * u / 5 + 5e-3 * np.exp((u - 5.1) / 0.03)
    c = synthetic(1e-12, 1.2, 0.5, 0)
    fit = fit_curves([Curve(np.concatenate([-u, c.v]), np.concatenate([-reverse, c.i]), 25.0, ())], Meter(amperes=0.0))
    assert fit.breakdown is not None
    assert fit.breakdown[0] == pytest.approx(5.3, abs=0.3)


@pytest.mark.parametrize(
    "text",
    [
        "V,I\n0.5,0.001\n0.6,0.01\n",
        "\ufeffV;I\n0,5;0,001\n0,6;0,01\n",
        "# bench, 4 May\nvoltage (mV)\tcurrent (mA)\n500\t1\n600\t10\n",
        "I [mA], V [V]\n1,0.5\n10,0.6\n",
        "0.5 0.001\n0.6 0.01\n",
    ],
)
def test_files_as_benches_write_them(text: str) -> None:
    (curve,) = read_curves(text.encode(), "c.csv")
    assert np.allclose(curve.v, [0.5, 0.6])
    assert np.allclose(curve.i, [0.001, 0.01])


def test_a_supply_behind_a_known_resistor() -> None:
    (curve,) = read_curves(b"V_S,V_D\n1.0,0.5\n2.0,0.6\n", "c.csv", Layout(series=1e3))
    assert np.allclose(curve.i, [0.0005, 0.0014])


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("V,I\n0.5,abc\n", "not a number"),
        ("V,I\n", "no points"),
        ("", "no points"),
        ("V,I\n0.5,1\n", "1 point"),
        ("V\n0.5\n0.6\n", "one column"),
        ("V_S,V_D\n1,0.5\n2,0.6\n", "series resistance"),
    ],
)
def test_files_that_are_no_curve(text: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_curves(text.encode(), "c.csv")


def test_two_currents_at_one_voltage() -> None:
    with pytest.raises(InputError, match="two currents"):
        fit_curves([Curve(np.array([0.5, 0.5, 0.6]), np.array([1e-3, 5e-3, 1e-2]), 25.0, (1, 2, 3))])


def test_reversed_leads_are_noticed() -> None:
    c = synthetic(1e-12, 1.2, 1.0, 0)
    fit = fit_curves([Curve(-c.v, -c.i, 25.0, c.lines)])
    assert fit.n == pytest.approx(1.2, rel=0.02)
    assert "reversed" in fit.left_out[0]


def test_an_offset_that_stands_at_the_origin_is_left_out() -> None:
    v = np.linspace(0.0, 0.75, 76)
    i = 1e-12 * np.expm1(v / (1.2 * 0.025692579)) + 5e-8
    fit = fit_curves([Curve(v, i, 25.0, tuple(range(76)))])
    assert fit.n == pytest.approx(1.2, rel=0.02)
    assert "offset noise" in fit.left_out[0]
