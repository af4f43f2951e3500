"""Derating policies: shipped tables as published and only where they speak, users' files with their mistakes."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from netaudit.failure import InputError
from netaudit.parts.policy import diode_class, load_policy, policy_names
from tests.audit.helper import audited, stress


def test_policies(tmp_path: Path) -> None:
    for name in policy_names():
        assert load_policy(name).name == name
    cautious = load_policy("cautious")
    row = cautious.row(("diode",), ("T_j",))
    assert row is not None
    assert float(row.limit(np.array(150.0))) == 110.0
    assert float(row.limit(np.array(125.0))) == 100.0
    (tmp_path / "own.toml").write_text('base = "cautious"\n[led]\nI_F = "50%"\n[all]\nT_j = ["95degC", "T_j - 40K"]\n')
    own = load_policy(str(tmp_path / "own.toml"))
    row = own.row(("led",), ("I_F",))
    assert row is not None
    assert row.factor == 0.5
    row = own.row(("npn",), ("T_j",))
    assert row is not None
    assert float(row.limit(np.array(125.0))) == 85.0
    with pytest.raises(InputError, match="no policy"):
        load_policy("reckless")
    with pytest.raises(InputError, match="not allowed"):
        load_policy("quality-3-severe")


# US Navy SD-18, discrete semiconductors, Table 1A, silicon diodes; Part Derating Parameters, two levels
@pytest.mark.parametrize(
    ("policy", "owner", "symbol", "rating", "limit"),
    [
        ("quality-1-normal", "diode-signal", "V_R", 100.0, 90.0),
        ("quality-2-severe", "diode-signal", "I_F", 1.0, 0.7),
        ("quality-2-normal", "diode-signal", "T_j", 150.0, 85.0),
        ("quality-3-protected", "diode-signal", "V_RRM", 100.0, 70.0),
        ("quality-1-severe", "diode-rectifier", "I_F", 1.0, 0.9),
        ("quality-2-normal", "diode-rectifier", "I_F", 1.0, 0.85),
        ("quality-2-severe", "bridge-rectifier", "V_R", 100.0, 30.0),
        ("quality-3-normal", "diode-rectifier", "T_j", 150.0, 35.0),
        ("quality-2-severe", "diode-schottky", "P_tot", 1.0, 0.5),
        ("quality-2-severe", "diode-schottky", "V_R", 100.0, 25.0),
        ("quality-3-normal", "bridge-schottky", "P_tot", 1.0, 0.75),
        ("two-level-severe", "diode-signal", "V_R", 100.0, 70.0),
        ("two-level-benign", "diode-rectifier", "T_j", 150.0, 115.0),
        ("two-level-severe", "diode-schottky", "P_tot", 1.0, 0.9),
        ("two-level-severe", "zener", "I_ZM", 1.0, 0.9),
    ],
)
def test_published_derating_rows(policy: str, owner: str, symbol: str, rating: float, limit: float) -> None:
    row = load_policy(policy).row((owner,), (symbol,))
    assert row is not None
    assert row.document
    assert float(row.limit(np.array(rating))) == pytest.approx(limit)


@pytest.mark.parametrize("policy", ["quality-2-normal", "two-level-severe"])
def test_published_tables_do_not_speak_of_what_they_do_not_cover(policy: str) -> None:
    loaded = load_policy(policy)
    for owner in ("led", "optocoupler", "shunt-reference", "resistor", "npn", "nmos"):
        assert all(loaded.row((owner,), (s,)) is None for s in ("I_F", "V_R", "V_RRM", "P_tot", "T_j", "I_C", "V_DS"))
    # Schottky diodes are limited by power there, not by current
    assert loaded.row(("diode-schottky", "diode"), ("I_F",)) is None


def test_class_of_a_diode() -> None:
    assert diode_class("diode", False, 0.2) == "diode-signal"
    assert diode_class("diode", False, None) == "diode-signal"
    assert diode_class("diode", False, 1.0) == "diode-rectifier"
    assert diode_class("diode", True, 3.0) == "diode-schottky"
    assert diode_class("bridge", False, 0.5) == "bridge-rectifier"
    assert diode_class("led", False, 0.5) == ""


def test_an_audit_takes_the_row_of_the_class_and_names_what_has_none() -> None:
    text = "PS1 supply 12V +:V -:GND\nR1 resistor 1k P_tot=2W 1:V 2:A\n{} A:A K:GND\n"
    signal = audited(text.format("D1 diode I_S=1nA n=1.8 I_F=200mA V_R=100V"), policy="quality-2-severe")
    assert stress(signal, "D1", "forward-current").limit == pytest.approx(0.7 * 0.2)
    rectifier = audited(text.format("D1 diode I_S=1nA n=1.8 I_F=1A V_R=100V"), policy="quality-2-severe")
    assert stress(rectifier, "D1", "forward-current").limit == pytest.approx(0.6)
    led = audited(text.format("D1 led material=red I_F=20mA V_R=5V"), policy="quality-2-severe")
    assert stress(led, "D1", "forward-current").limit == pytest.approx(0.02)
    assert "led forward-current" in led.without_row


@pytest.mark.parametrize(
    ("text", "words", "line"),
    [
        ("[led]\nI_FF = '50%'\n", "unknown rating I_FF; did you mean I_F", 2),
        ("[led]\nI_F = 'much'\n", "policy: I_F", 2),
        ("[led]\nI_F = '120%'\n", "a share of 120%; it lies between", 2),
        ("[led]\nI_F = 0\n", "a share of 0", 2),
        ("[led]\nI_F = []\n", "it is empty", 2),
        ("[led]\nI_F = true\n", "a truth value", 2),
        ("[led]\nI_F = {a = 1}\n", "a table", 2),
        ("[led]\nI_F = nan\n", "nan is no value", 2),
        ("[led]\nI_F = '95degC'\n", "for temperatures", 2),
        ("[led]\nT_j = 'T_max - 40K'\n", "no offset", 2),
        ("[led]\nh_FE = '50%'\n", "no check compares it", 2),
        ("[[led]]\nI_F = '50%'\n", "unknown rating led", 1),
        ("base = ['cautious']\n", "base names a policy", 1),
        ("base = 'reckless'\n", "no policy reckless", 1),
        ("[led\n", "not TOML", 1),
    ],
)
def test_mistakes_of_a_policy_file(tmp_path: Path, text: str, words: str, line: int) -> None:
    path = tmp_path / "ours.toml"
    path.write_text(text, encoding="utf-8")
    with pytest.raises(InputError, match=words) as caught:
        load_policy(str(path))
    assert caught.value.place is not None
    assert (caught.value.place.file, caught.value.place.line) == (str(path), line)


def test_a_policy_file_that_is_based_on_itself_or_cannot_be_read(tmp_path: Path) -> None:
    path = tmp_path / "ours.toml"
    path.write_text(f"base = '{path}'\n", encoding="utf-8")
    with pytest.raises(InputError, match="based on itself"):
        load_policy(str(path))
    other = tmp_path / "theirs.toml"
    path.write_text(f"base = '{other}'\n", encoding="utf-8")
    other.write_text(f"base = '{path}'\n", encoding="utf-8")
    with pytest.raises(InputError, match="based on itself"):
        load_policy(str(path))
    path.write_bytes(b"\xff")
    with pytest.raises(InputError, match="UTF-8"):
        load_policy(str(path))
    with pytest.raises(InputError, match="cannot be read"):
        load_policy(str(tmp_path / "none.toml"))
