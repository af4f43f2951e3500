"""Part tables: TOML and CSV of the same parts agree; what a row may not say is named with its place."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from netaudit.failure import InputError
from netaudit.parts.materials import MATERIALS, material
from netaudit.parts.tables import common_table, read_table
from netaudit.place import Place

TOML = """
[LED-RED-5MM]
kind     = "led"
material = "GaAsP"
forward  = ["1.75V @ 1mA", "1.95V @ 10mA", "2.10V @ 20mA"]
pins     = { "1" = "A", "2" = "K" }
spread   = { V_F = "0.15V" }
source   = "data sheet, figure 2"
[LED-RED-5MM.ratings]
I_F = ["25mA @ 25degC", "0mA @ 100degC"]
V_R = "5V"
T_j = "100degC"
R_th_ja = "450K/W"
"""
CSV = (
    "name,kind,material,forward,pins.1,pins.2,spread.V_F,source,I_F,ratings.V_R,T_j,R_th_ja\n"
    'LED-RED-5MM,led,GaAsP,1.75V @ 1mA; 1.95V @ 10mA; 2.10V @ 20mA,A,K,0.15V,"data sheet, figure 2",'
    "25mA @ 25degC; 0mA @ 100degC,5V,100degC,450K/W\n"
)


def table(tmp_path: Path, text: str, name: str = "parts.toml"):  # type: ignore[no-untyped-def]  # see read_table
    (tmp_path / name).write_text(text, encoding="utf-8")
    return read_table(str(tmp_path / name), name)


def test_toml_and_csv_give_the_same_part(tmp_path: Path) -> None:
    a = table(tmp_path, TOML).get("LED-RED-5MM")
    b = table(tmp_path, CSV, "parts.csv").get("LED-RED-5MM")
    assert a is not None
    assert b is not None
    assert a.parameters == b.parameters
    assert {k: r.points for k, r in a.ratings.items()} == {k: r.points for k, r in b.ratings.items()}
    assert (a.words, a.pins, a.source) == (b.words, b.pins, b.source)


def test_the_fit_passes_near_its_points_and_says_how_near(tmp_path: Path) -> None:
    part = table(tmp_path, TOML).get("LED-RED-5MM")
    assert part is not None
    assert part.fit_error is not None
    assert part.fit_error < 0.02
    assert part.parameters["V_F"].low == -0.15


def test_ratings_fall_between_their_temperatures(tmp_path: Path) -> None:
    part = table(tmp_path, TOML).get("LED-RED-5MM")
    assert part is not None
    assert np.allclose(part.ratings["I_F"].at([-10, 25, 62.5, 100, 120]), [0.025, 0.025, 0.0125, 0.0, 0.0])


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("[A]\nkindd = 'led'\n", "kind"),
        ("[A]\nI_S = '1nA'\nforward = ['0.7V @ 1mA', '0.8V @ 10mA']\n", "two models"),
        ("[A]\nforward = ['0.8V @ 1mA', '0.7V @ 10mA']\n", "does not rise"),
        ("[A]\nforward = ['0.7V @ 1mA']\n", "needs a material"),
        ("[A]\nforward = ['0.7V']\n", "no point"),
        ("[A]\nmaterial = 'unobtainium'\n", "unknown material"),
        ("[A]\n[A.ratings]\nI_FF = '1A'\n", "I_F"),
        ("[A]\n[A.ratings]\nI_F = '1V'\n", "voltage"),
        ("[A\n", "not TOML"),
        ("kind = 'led'\n", "outside any part"),
    ],
)
def test_rows_that_cannot_be(tmp_path: Path, text: str, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        table(tmp_path, text).get("A")
    assert "parts.toml:" in str(caught.value)


def test_missing_file_and_wrong_encoding(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="cannot be read"):
        read_table(str(tmp_path / "none.toml"))
    (tmp_path / "p.toml").write_bytes(b"[A]\nsource = '\xff'\n")
    with pytest.raises(InputError, match="UTF-8"):
        read_table(str(tmp_path / "p.toml"))


def test_a_later_table_wins_and_says_so(tmp_path: Path) -> None:
    first, second = table(tmp_path, "[A]\nn = 1.0\n", "a.toml"), table(tmp_path, "[A]\nn = 2.0\n", "b.toml")
    both = first.merge(second)
    part = both.get("A")
    assert part is not None
    assert part.parameters["n"].nominal == 2.0
    assert "a.toml" in both.overridden[0]


def test_every_generic_class_is_marked_and_has_a_source() -> None:
    shipped = common_table()
    for name in shipped.rows:
        part = shipped.get(name)
        assert part is not None
        assert part.generic
        assert "common practice" in part.source
        assert part.rough


# knees near 10 mA, common practice: silicon about 0.7 V, germanium lower, red 1.8 to 2 V, blue 2.7 to 3 V
@pytest.mark.parametrize(
    ("name", "low", "high"),
    [("silicon", 0.65, 0.78), ("germanium", 0.2, 0.4), ("schottky", 0.2, 0.4), ("red", 1.8, 2.0), ("blue", 2.7, 3.0)],
)
def test_knees_of_the_materials(name: str, low: float, high: float) -> None:
    m = material(name, Place("t", 1))
    volts = m.n * 0.025692579 * np.log(0.01 / m.I_S + 1) + m.R_S * 0.01
    assert low <= volts <= high


def test_silicon_drifts_by_about_two_millivolts_a_kelvin_near_a_milliampere() -> None:
    """Common practice."""
    import netaudit

    def volts(celsius: float) -> float:
        board = netaudit.loads(
            f"netlist 1\nground GND\nambient {celsius}degC\nI1 current-source 1mA +:A -:GND\nD1 diode I_S=10fA A:A K:GND\n"
        )
        return board.solve()[0].points[0].nets["A"]

    assert -2.3e-3 < (volts(35) - volts(25)) / 10 < -1.6e-3


def test_materials_are_complete() -> None:
    assert all(m.E_g > 0.5 and m.n >= 1 and m.I_S > 0 for m in MATERIALS.values())
