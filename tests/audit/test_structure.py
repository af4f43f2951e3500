"""Structural rules: each with boards that fail and near twins that pass."""

from __future__ import annotations

import pytest

import netaudit

HEAD = "netlist 1\nground GND\n"
PS = "PS1 supply 12V +:VIN -:GND\n"
LOAD = "R9 resistor 1k 1:VIN 2:GND\n"


def found(text: str) -> dict[tuple[str, str | None], str]:
    """Rules of a board: {(rule, device or net): level}, notes of models and ratings left out."""
    return {(f.rule, f.device or f.net): f.level for f in netaudit.loads(HEAD + text).lint()}


FAILS = [
    (PS + LOAD + "R1 resistor 1k 1:VIN 2:OUT\n", "graph/single-pin-net", "R1", "warning"),
    (PS + LOAD + "R1 resistor 1k 1:A 2:B\nR2 resistor 1k 1:A 2:B\n", "graph/unreferenced-net", "A", "error"),
    (
        PS + LOAD + "S1 switch open 1:VIN 2:A\nR1 resistor 1k 1:A 2:B\nR2 resistor 1k 1:A 2:B\n",
        "graph/unreferenced-net",
        "A",
        "note",
    ),
    (
        PS + LOAD + "R1 resistor 1k 1:VIN 2:D\nQ1 nmos V_th=2V K=1 G:G D:D S:GND\nC1 capacitor 1n 1:G 2:GND\n",
        "graph/floating-control",
        "Q1",
        "error",
    ),
    (PS + LOAD + "Q1 npn I_S=1fA beta_F=100 B:nc C:VIN E:GND\n", "graph/floating-control", "Q1", "error"),
    (PS + LOAD + "PS2 supply 12V +:VIN -:GND\n", "graph/source-loop", "PS1", "error"),
    (PS + LOAD + "L1 inductor 1mH 1:VIN 2:GND\n", "graph/source-loop", "PS1", "error"),
    (PS + LOAD + "S1 switch closed 1:VIN 2:GND\n", "graph/source-loop", "PS1", "error"),
    (PS + "L1 link 1:VIN 2:A\nL2 link 1:VIN 2:A\nR1 resistor 1k 1:A 2:GND\n", "graph/source-loop", "L2", "note"),
    (PS + LOAD + "I1 current-source 1mA +:A -:GND\nC1 capacitor 1n 1:A 2:GND\n", "graph/source-cut", "I1", "error"),
    (PS + LOAD + "R1 resistor 1k 1:VIN 2:VIN\n", "graph/bridged-part", "R1", "warning"),
    (
        PS + LOAD + "ground AGND\nR1 resistor 10R 1:GND 2:AGND\nR2 resistor 10R 1:VIN 2:AGND\n",
        "graph/joined-grounds",
        "AGND",
        "error",
    ),
    (PS + "D1 led material=red A:VIN K:GND\n", "graph/unlimited-junction", "D1", "error"),
    (
        PS + "D1 led material=red A:VIN K:A\nD2 led material=red A:A K:GND\n".replace("material=red", "I_S=1fA"),
        "graph/unlimited-junction",
        "D1",
        "error",
    ),
    (
        PS + "D1 bridge I_S=1nA AC1:A AC2:B +:GND -:VIN\nR1 resistor 1k 1:A 2:B\n",
        "graph/unlimited-junction",
        "D1",
        "error",
    ),
    (PS + LOAD + "U1 unmodelled 1:NC 2:VIN\nU2 unmodelled 1:NC 2:VIN\n", "graph/nc-net", "U1", "warning"),
    (PS + LOAD + 'U1 unmodelled 1:"nc" 2:VIN\nU2 unmodelled 1:"nc" 2:VIN\n', "graph/nc-net", "U1", "warning"),
    (PS + LOAD + "D1 diode part=NOTHING A:VIN K:A\nR1 resistor 1k 1:A 2:GND\n", "part/unknown", "D1", "error"),
    (PS + LOAD + "U1 unmodelled VCC:VIN GND:GND\n", "part/no-model", "U1", "warning"),
    (PS + LOAD + "U1 unmodelled VCC:VIN GND:GND\n", "part/no-current", "U1", "warning"),
    (PS + LOAD + "D1 diode A:VIN K:A\nR1 resistor 1k 1:A 2:GND\n", "part/no-model", "D1", "warning"),
    (PS + LOAD + "D1 diode material=silicon A:VIN K:A\nR1 resistor 1k 1:A 2:GND\n", "part/rough-model", "D1", "note"),
]


@pytest.mark.parametrize(("text", "rule", "subject", "level"), FAILS)
def test_boards_that_fail(text: str, rule: str, subject: str, level: str) -> None:
    rules = found(text)
    hits = {s: lv for (r, s), lv in rules.items() if r == rule}
    assert hits, rules
    assert level in hits.values()
    if rule not in ("graph/source-loop",):
        assert subject in hits


PASSES = [
    ("graph/single-pin-net", PS + LOAD + "R1 resistor 1k 1:VIN 2:nc\n"),
    ("graph/single-pin-net", PS + LOAD + "R1 resistor 1k 1:VIN 2:OUT\nJ1 connector 1:OUT\n"),
    ("graph/single-pin-net", PS + LOAD + "R1 resistor 1k 1:VIN 2:OUT\nTP1 testpoint 1:OUT\n"),
    (
        "graph/single-pin-net",
        PS + LOAD + 'R1 resistor 1k 1:VIN 2:OUT\nR2 resistor 1k 1:OUT 2:GND\nmode "m"\n  omit R2\nend\n',
    ),
    ("graph/unreferenced-net", PS + LOAD + "ground FAR\nPS2 supply 5V +:A -:FAR\nR1 resistor 1k 1:A 2:FAR\n"),
    ("graph/floating-control", PS + LOAD + "Q1 nmos V_th=2V K=1 G:G D:VIN S:GND\nR1 resistor 100k 1:G 2:GND\n"),
    (
        "graph/floating-control",
        PS + LOAD + 'Q1 nmos V_th=2V K=1 G:G D:VIN S:GND\nS1 switch open 1:G 2:VIN\nmode "on"\n  set S1 closed\nend\n',
    ),
    ("graph/floating-control", PS + LOAD + "Q1 nmos V_th=2V K=1 G:G D:VIN S:GND\nJ1 connector 1:G\n"),
    ("graph/floating-control", PS + LOAD + "Q1 npn I_S=1fA beta_F=100 B:X C:X E:GND\nR1 resistor 1k 1:VIN 2:X\n"),
    ("graph/source-loop", PS + LOAD + "PS2 supply 12V R=10mohm +:VIN -:GND\n"),
    ("graph/source-loop", PS + LOAD + "L1 inductor 1mH R=1ohm 1:VIN 2:GND\n"),
    ("graph/source-loop", PS + LOAD + "S1 switch open 1:VIN 2:GND\n"),
    ("graph/source-cut", PS + LOAD + "I1 current-source 1mA +:A -:GND\nR1 resistor 1k 1:A 2:GND\n"),
    ("graph/bridged-part", PS + LOAD + "J1 connector 1:VIN 2:VIN\n"),
    ("graph/joined-grounds", PS + LOAD + "ground FAR\nPS2 supply 5V +:A -:FAR\nR1 resistor 1k 1:A 2:FAR\n"),
    ("graph/unlimited-junction", PS + "D1 led material=red A:A K:GND\nR1 resistor 1k 1:VIN 2:A\n"),
    ("graph/unlimited-junction", PS + LOAD + "D1 diode I_S=1nA A:GND K:VIN\n"),
    ("graph/unlimited-junction", "PS1 supply 0.6V +:VIN -:GND\nD1 diode I_S=1fA A:VIN K:GND\n"),
    ("graph/unlimited-junction", "PS1 supply 12V limit=1A +:VIN -:GND\nD1 diode I_S=1nA A:VIN K:GND\n"),
    ("graph/unlimited-junction", PS + LOAD + "D1 zener V_Z=15V I_Z=5mA r_Z=10ohm K:VIN A:GND\n"),
    ("graph/nc-net", PS + LOAD + "U1 unmodelled 1:nc 2:VIN\nU2 unmodelled 1:nc 2:VIN\n"),
    ("part/no-model", PS + LOAD + 'U1 unmodelled VCC:VIN GND:GND\ncovered U1 "bench" no-current\n'),
    ("part/no-current", PS + LOAD + 'U1 unmodelled VCC:VIN GND:GND\ncovered U1 "bench" draws VCC:GND=5mA\n'),
]


@pytest.mark.parametrize(("rule", "text"), PASSES)
def test_near_twins_pass(rule: str, text: str) -> None:
    assert rule not in {r for r, _ in found(text)}


def test_findings_point_at_the_device() -> None:
    (finding,) = [
        f
        for f in netaudit.loads(HEAD + PS + LOAD + "R1 resistor 1k 1:VIN 2:VIN\n", "b.netlist").lint()
        if f.level == "warning"
    ]
    assert (finding.device, finding.file, finding.line) == ("R1", "b.netlist", 5)
