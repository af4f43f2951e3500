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


def reverse(v_z: float, i_z: float, r_z: float, leak: float, seed: int | None) -> Curve:
    """A zener's whole curve by the language's law, half of r_Z each in knee and series, with a meter's noise."""
    rng = np.random.default_rng(seed)
    i = np.logspace(-6, np.log10(min(20e-3, 2 / v_z)), 40)
    u = v_z + 0.5 * i_z * r_z * np.log(i / i_z) + 0.5 * r_z * (i - i_z)
    i, u = i[u > 0.5 * v_z], u[u > 0.5 * v_z]
    low = np.linspace(0.2, 0.97 * u.min(), 15)
    c = synthetic(1e-14, 1.05, 0.5, 0)
    v = np.concatenate([-u[::-1], -low[::-1], c.v])
    amperes = np.concatenate([-(i + leak)[::-1], -leak * low[::-1] / low.max(), c.i])
    if seed is not None:
        v = v + 1e-3 * rng.standard_normal(len(v))
        amperes = amperes * (1 + 0.01 * rng.standard_normal(len(v)))
    return Curve(v, amperes, 25.0, tuple(range(len(v))))


@pytest.mark.parametrize("seed", [None, 0, 1, 2])
@pytest.mark.parametrize(
    ("v_z", "i_z", "r_z", "leak"),
    [
        (5.1, 5e-3, 10.0, 1e-7),
        (12.0, 5e-3, 9.0, 2e-8),
        (30.0, 2e-3, 40.0, 1e-8),
        (3.3, 5e-3, 60.0, 1e-6),
        (75.0, 1e-3, 200.0, 1e-9),
    ],
)
def test_breakdown_and_leakage_of_the_reverse_branch(
    v_z: float, i_z: float, r_z: float, leak: float, seed: int | None
) -> None:
    fit = fit_curves([reverse(v_z, i_z, r_z, leak, seed)])
    found = fit.breakdown
    assert found is not None
    knee, series = 0.5 * i_z * r_z, 0.5 * r_z
    wanted = v_z + knee * np.log(found.I_Z / i_z) + series * (found.I_Z - i_z)
    # a point's 1 mV and 1 % of the current, over the square root of some ten points
    slope = knee + series * found.I_Z
    assert pytest.approx(wanted, abs=1e-3 + 0.005 * slope) == found.V_Z
    assert found.r_Z == pytest.approx(knee / found.I_Z + series, rel=0.02)
    assert found.r_ZK == pytest.approx(knee / found.I_ZK + series, rel=0.02)
    assert fit.leakage is not None
    amperes, volts = fit.leakage
    lowest = v_z + knee * np.log(1e-6 / i_z) + series * (1e-6 - i_z)
    assert amperes / volts == pytest.approx(leak / (0.97 * max(lowest, 0.5 * v_z)), rel=0.03)
    assert 0.4 * v_z < volts < v_z
    assert fit.n == pytest.approx(1.05, rel=0.02)


def test_saturated_and_noisy_leakage_is_no_breakdown() -> None:
    c = synthetic(1e-9, 1.8, 0.5, 0)
    u = np.linspace(0.2, 50.0, 40)
    for amperes in (np.full(40, 1e-9), 1e-8 * np.sqrt(u), np.abs(1e-9 * np.random.default_rng(3).standard_normal(40))):
        fit = fit_curves([Curve(np.concatenate([-u, c.v]), np.concatenate([-amperes, c.i]), 25.0, tuple(range(130)))])
        assert fit.breakdown is None
        assert not fit.left_out
    assert fit.n == pytest.approx(1.8, rel=0.02)


@pytest.mark.parametrize("noise", [0.0, 0.001, 0.01])
def test_a_current_limit_is_noticed_through_noise(noise: float) -> None:
    rng = np.random.default_rng(4)
    v = np.linspace(0.3, 1.2, 80)
    i = np.logspace(-8, 1, 4000)
    true = np.interp(v, 1.2 * 0.025692579 * np.log1p(i / 1e-12) + 1.0 * i, i)
    limited = np.minimum(true, 0.05) * (1 + noise * rng.standard_normal(80))
    fit = fit_curves([Curve(v, limited, 25.0, tuple(range(80)))])
    assert fit.n == pytest.approx(1.2, rel=0.02)
    assert pytest.approx(1.0, rel=0.05 if noise == 0.0 else 0.15) == fit.R_S
    assert "current limit of 0.0" in fit.left_out[0]


def test_a_resistive_end_is_no_current_limit() -> None:
    c = synthetic(1e-12, 1.2, 20.0, 5)
    assert not fit_curves([c]).left_out
    dense = np.linspace(1e-6, 0.1, 400)
    v = 1.2 * 0.025692579 * np.log1p(dense / 1e-12) + 20 * dense
    assert not fit_curves([Curve(v, dense, 25.0, tuple(range(400)))]).left_out


V = np.linspace(0.01, 0.6, 60)


@pytest.mark.parametrize(
    ("v", "i"),
    [
        (V, 1e-3 * (V / 0.06) * np.exp(1 - V / 0.06) + 1e-12 * np.expm1(V / 0.0257)),  # a tunnel diode's hump
        (V, 1.0 - V),  # falling
        (V * 1e200, V * 1e200),
        (V * 1e-200, V * 1e-300),
        (V, V * 1e-3),  # a resistor
        (-V, -1e-9 * V),  # leakage alone
        (V - 0.3, 1e-3 * (V - 0.3)),  # both ways
    ],
)
def test_what_no_junction_is_keeps_its_curve(v: np.ndarray, i: np.ndarray) -> None:
    fit = fit_curves([Curve(v, i, 25.0, tuple(range(60)))])
    assert not fit.exponential
    assert len(fit.points) == 60


@pytest.mark.parametrize(
    ("v", "i", "words"),
    [([0.5] * 9, range(9), "every point lies at 0.5 V"), ([0.0] * 9, [0.0] * 9, "every point lies at 0 V")],
)
def test_points_without_a_curve(v: list[float], i: list[float], words: str) -> None:
    with pytest.raises(InputError, match=words):
        fit_curves([Curve(np.array(v), np.array(i, dtype=float), 25.0, tuple(range(9)))])


@pytest.mark.parametrize(
    "text",
    [
        "V,I\n0.5,0.001\n0.6,0.01\n",
        "\ufeffV;I\n0,5;0,001\n0,6;0,01\n",
        "# bench, 4 May\nvoltage (mV)\tcurrent (mA)\n500\t1\n600\t10\n",
        "I [mA], V [V]\n1,0.5\n10,0.6\n",
        "0.5 0.001\n0.6 0.01\n",
        "U/mV;I/µA\n500,0;1000\n600,0;10000\n",
        "I [uA],U [V]\n1000,0.5\n10000,0.6\n",
        "Voltage (V),Current (A)\n0.5,1E-3\n0.6,1e-02\n",
        "Voltage,Current\nV,mA\n0.5,1\n0.6,10\n",
        "Voltage,Current\n[mV],[uA]\n500,1000\n600,10000\n",
        "volts,milliamps\n0.5,1\n0.6,10\n",
        "V (v),I (ua)\n0.5,1000\n0.6,10000\n",
        '"U (V)","I (A)"\n"0,5","0,001"\n"0,6","0,01"\n',
        "V|I\n0.5|0.001\n0.6|0.01\n",
        "Source meter: no. 4\nDate: 2024-01-02\nLimit: 100mA\n\nVoltage (V),Current (mA)\n0.5,1\n0.6,10\n",
        "No.,U (V),I (mA)\n1,0.5,1\n2,0.6,10\n",
        "Time (s);Current (mA);Voltage (V)\n0.1;1;0.5\n0.2;10;0.6\n",
        "V,I,\r\n0.5,0.001,\r\n0.6,0.01,\r\n",
        "V,I\r0.5,0.001\r0.6,0.01\r",
        "V_F in mV,I_F in mA\n500,1\n600,10\n",
    ],
)
def test_files_as_benches_write_them(text: str) -> None:
    (curve,) = read_curves(text.encode(), "c.csv")
    assert np.allclose(curve.v, [0.5, 0.6])
    assert np.allclose(curve.i, [0.001, 0.01])


@pytest.mark.parametrize(
    ("encoding", "text"), [("utf-16", "V,I [µA]"), ("latin-1", "V,I [µA]"), ("utf-8-sig", "V,I [µA]")]
)
def test_encodings_of_instruments(encoding: str, text: str) -> None:
    (curve,) = read_curves(f"{text}\n0.5,1000\n0.6,10000\n".encode(encoding), "c.csv")
    assert np.allclose(curve.i, [0.001, 0.01])


@pytest.mark.parametrize("heading", ["U/V;I/A", "U/V;I/A 25 °C"])
def test_long_files_are_read_at_once_with_the_same_content(heading: str) -> None:
    rows = [f"{0.3 + 1e-5 * k:.5f};{1e-6 * k:.7f}".replace(".", ",") for k in range(30_000)]
    (curve,) = read_curves(("\n".join([heading, *rows]) + "\n").encode(), "c.csv")
    assert np.allclose(curve.v, 0.3 + 1e-5 * np.arange(30_000))
    assert np.allclose(curve.i, 1e-6 * np.arange(30_000))
    assert curve.lines[-1] == 30_001
    rows[20_000] = "0,5;1x"
    with pytest.raises(InputError, match="1x") as caught:
        read_curves("\n".join([heading, *rows]).encode(), "c.csv")
    assert caught.value.place is not None
    assert caught.value.place.line == 20_002


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
        ("V,V\n1,0.5\n2,0.6\n", "told apart"),
        ("V,I\n0.5,nan\n0.6,1\n", "'nan' is not a number"),
        ("V,I\n0.5 V,1 mA\n0.6 V,2 mA\n", "its unit in the heading"),
        ("V,I\n1e400,1\n0.6,1\n", "too large"),
        ("V,I\n1_0,1\n0.6,1\n", "not a number"),
        ("V,I\n\0,1\n", "not a text file"),
        ("<html>\n<body>\n", "one column"),
    ],
)
def test_files_that_are_no_curve(text: str, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_curves(text.encode(), "c.csv")


def test_two_currents_at_one_voltage() -> None:
    with pytest.raises(InputError, match="two currents") as caught:
        fit_curves([Curve(np.array([0.5, 0.5, 0.6]), np.array([1e-3, 5e-3, 1e-2]), 25.0, (1, 2, 3))])
    assert caught.value.place is not None
    assert caught.value.place.line == 2


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
