"""Every kind and every rating of the language's rating table: 10 % beyond is an error by its rule, 10 % within is none."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.audit.records import Audit
from netaudit.devices import KINDS
from tests.audit.helper import HEAD

DIODE = "I_S=1nA n=1.8 R_th_ja=100K/W"
BOARDS = {
    "resistor": "PS1 supply 10V +:V -:GND\nX resistor 100R {r} 1:V 2:GND\n",
    "trimmer": "PS1 supply 10V +:V -:GND\nX trimmer 1k {r} 1:V W:W 2:GND\nRL resistor 1k 1:W 2:GND\n",
    "thermistor": "PS1 supply 10V +:V -:GND\nX thermistor 10k B=3950K {r} 1:V 2:GND\n",
    "capacitor": "PS1 supply 10V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX capacitor 1u {r} 1:A 2:GND\n",
    "capacitor +": "PS1 supply 10V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX capacitor 1u {r} +:A -:GND\n",
    "capacitor -": "PS1 supply 10V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX capacitor 1u {r} -:A +:GND\n",
    "inductor": "PS1 supply 10V +:V -:GND\nX inductor 1mH R=10ohm {r} 1:V 2:A\nR1 resistor 90R 1:A 2:GND\n",
    "link": "PS1 supply 10V +:V -:GND\nX link R=10ohm {r} 1:V 2:A\nR1 resistor 90R 1:A 2:GND\n",
    "switch": "PS1 supply 10V +:V -:GND\nX switch closed {r} 1:V 2:A\nR1 resistor 90R 1:A 2:GND\n",
    "switch open": "PS1 supply 10V +:V -:GND\nX switch open {r} 1:V 2:A\nR1 resistor 90R 1:A 2:GND\n",
    "relay": "PS1 supply 10V +:V -:GND\nX relay on R=100ohm {r} C1:V C2:GND COM:V NO:A NC:B\n"
    "R1 resistor 90R 1:A 2:GND\nR2 resistor 90R 1:B 2:GND\n",
    "supply": "X supply 10V {r} +:V -:GND\nR1 resistor 90R 1:V 2:GND\n",
    "driver": "PS1 supply 5V +:V -:GND\nX driver high R_high=30ohm R_th_ja=100K/W {r} OUT:O V:V G:GND\nR1 resistor 1k 1:O 2:GND\n",
    "bridge": f"PS1 supply 12V +:V -:N\nX bridge {DIODE} {{r}} AC1:V AC2:N +:P -:GND\nR1 resistor 1k 1:P 2:GND\n",
    "zener": "PS1 supply 12V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX zener V_Z=5.1V I_Z=5mA r_Z=20ohm R_th_ja=100K/W {r} K:A A:GND\n",
    "zener forward": "PS1 supply 12V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX zener V_Z=5.1V I_Z=5mA r_Z=20ohm {r} A:A K:GND\n",
    "suppressor": "PS1 supply 30V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX suppressor V_Z=18V I_Z=1mA r_Z=2ohm R_th_ja=100K/W {r} K:A A:GND\n",
    "suppressor two-way": "PS1 supply 30V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX suppressor V_Z=18V I_Z=1mA r_Z=2ohm {r} 1:GND 2:A\n",
    "regulator": "PS1 supply 12V +:V -:GND\nX regulator 5V V_drop=1V I_Q=1mA R_th_ja=50K/W {r} IN:V OUT:O GND:GND\nR1 resistor 100R 1:O 2:GND\n",
    "converter": "PS1 supply 12V +:V -:GND\nX converter 5V efficiency=80% V_I_min=7V R_th_ja=50K/W {r} IN:V OUT:O GND:GND\nR1 resistor 100R 1:O 2:GND\n",
    "opamp": "PS1 supply 5V +:V -:GND\nPS2 supply 2V +:A -:GND\nR2 resistor 1M 1:A 2:GND\nR1 resistor 1k 1:B 2:GND\n"
    "X opamp gain=100000 I_Q=1mA R_th_ja=100K/W {r} IN+:A IN-:B OUT:B V+:V V-:GND\n",
    "shunt-reference": "PS1 supply 5V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX shunt-reference V_ref=2.5V R_th_ja=100K/W {r} K:A A:GND REF:A\n",
    "load": "PS1 supply 10V +:V -:GND\nX load 100mA {r} +:V -:GND\n",
    "optocoupler": "PS1 supply 5V +:V -:GND\nR1 resistor 1k 1:V 2:A\nR2 resistor 1k 1:V 2:C\n"
    "X optocoupler CTR=50% material=infrared R_th_ja=200K/W {r} A:A K:GND C:C E:GND\n",
    "optocoupler off": "PS1 supply 5V +:V -:GND\nR1 resistor 1k 1:V 2:K\nR2 resistor 1k 1:V 2:C\n"
    "X optocoupler CTR=50% material=infrared {r} A:GND K:K C:C E:GND\n",
    "optocoupler back": "PS1 supply 0.3V +:V -:GND\nR1 resistor 1k 1:V 2:A\nR2 resistor 1k 1:V 2:E\n"
    "X optocoupler CTR=50% material=infrared {r} A:A K:GND C:GND E:E\n",
}
for name in ("diode", "led"):
    BOARDS[name] = f"PS1 supply 12V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX {name} {DIODE} {{r}} A:A K:GND\n"
    BOARDS[f"{name} off"] = f"PS1 supply 12V +:V -:GND\nR1 resistor 1k 1:V 2:A\nX {name} {DIODE} {{r}} K:A A:GND\n"
for name, sign in (("npn", ""), ("pnp", "-")):
    law = f"X {name} I_S=1e-14A beta_F=100 beta_R=1 R_th_ja=100K/W {{r}} C:C E:GND B:B\n"
    BOARDS[name] = f"PS1 supply {sign}12V sinks=yes +:V -:GND\nR1 resistor 100k 1:V 2:B\nR2 resistor 1k 1:V 2:C\n{law}"
    other = "-" if not sign else ""
    BOARDS[f"{name} off"] = (
        f"PS1 supply {sign}12V sinks=yes +:V -:GND\nPS2 supply {other}3V sinks=yes +:W -:GND\nR1 resistor 1k 1:W 2:B\n"
        f"R2 resistor 1k 1:V 2:C\n{law}"
    )
for name, sign in (("nmos", ""), ("pmos", "-")):
    BOARDS[name] = (
        f"PS1 supply {sign}12V sinks=yes +:V -:GND\nR1 resistor 10k 1:V 2:G\nR3 resistor 10k 1:G 2:GND\nR2 resistor 100R 1:V 2:D\n"
        f"X {name} V_th={sign}2V K=10m R_th_ja=60K/W {{r}} G:G D:D S:GND\n"
    )
for name, sign in (("njfet", ""), ("pjfet", "-")):
    other = "-" if not sign else ""
    BOARDS[name] = (
        f"PS1 supply {sign}12V sinks=yes +:V -:GND\nPS2 supply {other}1V sinks=yes +:G -:GND\nR2 resistor 1k 1:V 2:D\n"
        f"X {name} I_DSS=5mA V_P={other}2V R_th_ja=60K/W {{r}} G:G D:D S:GND\n"
    )
CHECKS = [
    ("P_tot", "power", "resistor trimmer thermistor inductor driver diode led bridge zener suppressor npn pnp nmos pmos njfet pjfet "
     "regulator converter opamp shunt-reference load optocoupler"),
    ("T_j", "junction-temperature", "diode led bridge zener suppressor npn pnp nmos pmos njfet pjfet regulator converter opamp driver "
     "shunt-reference optocoupler"),
    ("V_max", "voltage", "resistor trimmer thermistor inductor link switch_open relay supply driver"),
    ("I_max", "current", "trimmer inductor link switch relay supply driver"),
    ("V_R", "voltage", "capacitor capacitor_+"),
    ("V_rev", "reverse-polarity", "capacitor_-"),
    ("I_F", "forward-current", "diode led bridge optocoupler zener_forward"),
    ("V_R", "reverse-voltage", "diode_off led_off bridge optocoupler_off"),
    ("V_RRM", "reverse-voltage", "diode_off led_off bridge optocoupler_off"),
    ("V_RWM", "stand-off-voltage", "suppressor suppressor_two-way"),
    ("I_ZM", "zener-current", "zener suppressor suppressor_two-way shunt-reference"),
    ("I_C", "collector-current", "npn pnp optocoupler"),
    ("I_B", "base-current", "npn pnp"),
    ("V_CEO", "collector-emitter-voltage", "npn_off pnp_off optocoupler_off"),
    ("V_CBO", "collector-emitter-voltage", "npn_off pnp_off optocoupler_off"),
    ("V_EBO", "emitter-base-voltage", "npn_off pnp_off optocoupler_back"),
    ("I_D", "drain-current", "nmos pmos njfet pjfet"),
    ("V_DS", "drain-source-voltage", "nmos pmos njfet pjfet"),
    ("V_GS", "gate-source-voltage", "nmos pmos njfet pjfet"),
    ("V_I", "input-voltage", "regulator converter opamp"),
    ("I_O", "output-current", "regulator converter opamp"),
]  # fmt: skip
CASES = [(board.replace("_", " "), symbol, rule) for symbol, rule, boards in CHECKS for board in boards.split()]
UNITS = {"P": "W", "T": "degC", "V": "V", "I": "A"}


def audit(board: str, symbol: str, rating: float) -> Audit:
    return netaudit.loads(HEAD + BOARDS[board].format(r=f"{symbol}={rating:.12g}{UNITS[symbol[0]]}")).audit()


@pytest.mark.parametrize(("board", "symbol", "quantity"), CASES)
def test_ten_percent_beyond_is_an_error_and_within_is_none(board: str, symbol: str, quantity: str) -> None:
    (loose,) = [s for s in audit(board, symbol, 500.0).stresses if (s.device, s.quantity) == ("X", quantity)]
    assert loose.rating is not None
    assert loose.worst > 0
    errors = {
        share: [
            f.level
            for f in audit(board, symbol, loose.worst * share).findings
            if (f.rule, f.device) == (f"stress/{quantity}", "X")
        ]
        for share in (1 / 1.1, 1.0001, 1 / 0.9)
    }
    assert errors == {1 / 1.1: ["error"], 1.0001: [], 1 / 0.9: []}


def test_a_fuses_own_value_is_its_rating() -> None:
    for amperes, levels in ((0.0909, ["error"]), (0.1111, [])):
        text = f"PS1 supply 10V +:V -:GND\nX fuse {amperes}A 1:V 2:A\nR1 resistor 100R 1:A 2:GND\n"
        found = netaudit.loads(HEAD + text).audit().findings
        assert [f.level for f in found if f.rule == "stress/current"] == levels


def test_every_inline_rating_of_every_kind_is_in_the_table_above() -> None:
    """Ratings that no check of their own compares: conditions of others, and knees judged by ``point/zener-starved``."""
    conditions = {"T_ref", "T_max", "R_th_ja", "R_th_jc", "I_ZK"}
    named = {(board.split()[0], symbol) for board, symbol, _ in CASES}
    silent = {
        (kind.name, symbol)
        for kind in KINDS.values()
        for symbol in kind.ratings
        if symbol not in conditions and (kind.name, symbol) not in named
    }
    # a resistive part's T_j stands for its T_max; a curve is tested with its points; an optocoupler's base has no pin
    assert silent == {
        ("resistor", "T_j"), ("thermistor", "T_j"), ("load", "T_j"), ("curve", "P_tot"), ("curve", "T_j"), ("curve", "V_max"),
        ("curve", "I_max"), ("optocoupler", "I_B"),
    }  # fmt: skip


def test_both_voltages_of_a_collector_count() -> None:
    """12 V at the collector, -3 V at the base: V_CEO of 20 V holds, V_CBO of 14 V does not."""
    text = BOARDS["npn off"].format(r="V_CEO=20V V_CBO=14V V_EBO=6V")
    (found,) = [f for f in netaudit.loads(HEAD + text).audit().findings if f.rule == "stress/collector-emitter-voltage"]
    assert (found.level, found.pin, found.rating) == ("error", "B", 14.0)
    assert found.value == pytest.approx(15.0, abs=1e-3)
    assert "collector base voltage" in found.message
