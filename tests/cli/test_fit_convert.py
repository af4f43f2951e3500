"""``fit`` and ``convert`` as commands."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

import netaudit
from netaudit.cli.main import main


def test_a_fitted_row_is_a_part(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    i = np.logspace(-6, -1.5, 30)
    v = 1.4 * 0.025692579 * np.log1p(i / 1e-12) + 0.8 * i
    curve = tmp_path / "c.csv"
    curve.write_text(
        "V (V);I (mA)\n" + "\n".join(f"{a:.6f};{b * 1e3:.9f}".replace(".", ",") for a, b in zip(v, i, strict=True))
    )
    table = tmp_path / "parts.toml"
    assert main(["fit", str(curve), "--name", "D-X", "-o", str(table)]) == 0
    assert "largest deviation" in capsys.readouterr().out
    (tmp_path / "b.netlist").write_text(
        'netlist 1\nparts "parts.toml"\nground GND\nI1 current-source 1mA +:A -:GND\nD1 diode part=D-X A:A K:GND\n'
    )
    volts = netaudit.load(str(tmp_path / "b.netlist")).solve()[0].points[0].nets["A"]
    assert volts == pytest.approx(1.4 * 0.025692579 * np.log1p(1e9) + 0.8e-3, abs=1e-4)
    assert main(["fit", str(curve), "--name", "D-X", "-o", str(table)]) == 2
    assert "already has" in capsys.readouterr().err


def test_a_curve_with_a_hill_is_kept_as_a_curve(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    v = np.linspace(0, 3, 31)
    curve = tmp_path / "c.csv"
    curve.write_text("V,I (mA)\n" + "\n".join(f"{a:.3f},{2.5 * a**3 - 10.5 * a**2 + 11.8 * a:.6f}" for a in v))
    assert main(["fit", str(curve), "--name", "TUN", "--kind", "curve"]) == 0
    assert "points = [" in capsys.readouterr().out


def test_a_fitted_zener_gives_its_curve_again(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    """Forward, leakage and breakdown through ``-o``, the part table and the solver: within a millivolt of the points."""
    i = np.logspace(-5, -2, 25)
    forward = 1.2 * 0.025692579 * np.log1p(i / 1e-13) + 0.6 * i
    backward = 6.2 + 0.02 * np.log(i / 5e-3) + 3.0 * (i - 5e-3)
    low = np.linspace(0.5, 5.5, 12)
    rows = [
        *zip(-backward, -i - 2e-8, strict=True),
        *zip(-low, -2e-8 * low / 5.5, strict=True),
        *zip(forward, i, strict=True),
    ]
    curve, table = tmp_path / "c.csv", tmp_path / "parts.toml"
    curve.write_text("U [V],I [uA]\n" + "\n".join(f"{v:.6f},{a * 1e6:.7f}" for v, a in rows))
    assert main(["fit", str(curve), "--name", "Z 6V2/a", "--kind", "zener", "-o", str(table)]) == 0
    assert "V_Z" in capsys.readouterr().out
    (tmp_path / "b.netlist").write_text(
        'netlist 1\nparts "parts.toml"\nground GND\nI1 current-source 1mA +:A -:GND\nD1 zener part="Z 6V2/a" K:A A:GND\n'
        'I2 current-source 2mA +:B -:GND\nD2 zener part="Z 6V2/a" A:B K:GND\n'
        'PS1 supply 4V +:C -:GND\nD3 zener part="Z 6V2/a" K:C A:GND\n'
    )
    point = netaudit.load(str(tmp_path / "b.netlist")).solve()[0].points[0]
    assert point.nets["A"] == pytest.approx(6.2 + 0.02 * np.log(0.2) - 3.0 * 4e-3, abs=1e-3)
    assert point.nets["B"] == pytest.approx(1.2 * 0.025692579 * np.log(2e-3 / 1e-13) + 1.2e-3, abs=1e-3)
    assert float(point.view("D3").i("K")) == pytest.approx(2e-8 * 4 / 5.5, rel=0.02)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["fit", "none.csv", "--name", "X"], "cannot be read"),
        (["convert", "none.edf"], "cannot be read"),
        (["convert", "board.txt"], "no export"),
        (["fit"], "required"),
        (["fit", "c.csv", "--name", "X", "--kind", "npn"], "invalid choice"),
    ],
)
def test_wrong_commands_are_one_line_and_status_two(
    arguments: list[str], words: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert main(arguments) == 2
    err = capsys.readouterr().err
    assert words in err
    assert len(err.strip().splitlines()) == 1
