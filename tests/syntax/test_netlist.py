"""Statements, places and the messages of known mistakes."""

from __future__ import annotations

from pathlib import Path

import pytest

import netaudit
from netaudit.failure import InputError
from netaudit.syntax.reader import read_netlist, read_netlist_text
from netaudit.syntax.statements import BlockStatement, CoveredStatement, DeviceStatement, ExpectStatement, ModeStatement

HEAD = "netlist 1\nground GND\nPS1 supply 12V +:VIN -:GND\n"


def statement(line: str):  # type: ignore[no-untyped-def]  # the statement's own type is what each test asks for
    return read_netlist_text(f"netlist 1\n{line}\n", "t").statements[0]


def test_device_items_keep_their_texts_and_places() -> None:
    s = statement('  "R 1" resistor 4k7 5% part=CHIP-0805 1:"LED string (2)" 2:nc')
    assert isinstance(s, DeviceStatement)
    assert (s.designator.text, s.designator.quoted) == ("R 1", True)
    assert [w.text for w in s.items.words] == ["4k7", "5%"]
    assert [(k.key.text, k.value.text) for k in s.items.keys] == [("part", "CHIP-0805")]
    assert [(p.pin.text, p.net.text, p.open) for p in s.items.pins] == [
        ("1", "LED string (2)", False),
        ("2", "nc", True),
    ]
    assert (s.items.words[0].place.line, s.items.words[0].place.column) == (2, 18)


def test_continuation_comments_bom_and_crlf() -> None:
    text = "\ufeffnetlist 1\r\n# a comment\r\nR1 resistor \\\r\n  1k 1:A \\\r\n  2:B # end\r\n"
    (s,) = read_netlist_text(text.lstrip("\ufeff"), "t").statements
    assert isinstance(s, DeviceStatement)
    assert s.items.pins[1].net.place.line == 5
    assert s.items.pins[1].net.text == "B"


def test_other_statements() -> None:
    s = statement('covered U1 "bench, 4 May" draws VCC:GND=80mA,60mA..120mA A:B=1mA')
    assert isinstance(s, CoveredStatement)
    assert [(d.source.text, d.sink.text, d.value.text) for d in s.draws] == [
        ("VCC", "GND", "80mA,60mA..120mA"),
        ("A", "B", "1mA"),
    ]
    s = statement('expect current Q1:C 5mA.. mode "night"')
    assert isinstance(s, ExpectStatement)
    assert (s.targets[0].text, s.pin.text if s.pin else None, s.span.text, s.mode.text if s.mode else None) == (
        "Q1", "C", "5mA..", "night",
    )  # fmt: skip
    n = read_netlist_text('netlist 1\nonly modes\nmode "a"\n  omit R1 R2\n  ambient 5degC 0degC..9degC\nend\n', "t")
    assert n.only_modes
    (m,) = n.statements
    assert isinstance(m, ModeStatement)
    assert len(m.changes) == 2
    (b,) = read_netlist_text("netlist 1\nblock F IN OUT r=1k\nR1 resistor $r 1:IN 2:OUT\nend\n", "t").statements
    assert isinstance(b, BlockStatement)
    assert [w.text for w in b.pins] == ["IN", "OUT"]


def test_a_statement_word_may_be_a_net() -> None:
    board = netaudit.loads(
        "netlist 1\nground end\nPS1 supply 5V +:mode -:end\nR1 resistor 1k 1:mode 2:end\nexpect voltage mode 4V..6V\n"
    )
    assert board.solve()[0].points[0].nets["mode"] == 5.0


# (line, words of the message): each is one line that names file, line and a mend
MISTAKES = [
    ("R1 resistor 1k 1:VIN 2 :GND", "blank beside"),
    ("R1 resistor 1k, 5% 1:VIN 2:GND", "comma"),
    ("R1 resistor 1k 1:VIN 2:GND#x", "# inside a word"),
    ("R1 resistor 1k 1:a:b 2:GND", "second :"),
    ("R1 resistor “1k” 1:VIN 2:GND", "typographic"),
    ('R1 resistor 1k 1:"VIN 2:GND', "never closed"),
    ("R1 resistor 1k 1:VIN 2:N(1)", "needs quotes"),
    ("R1 resistor 1k 1:VIN 2:A..B", "needs quotes"),
    ("set R1 1:VIN", "not pins"),
    ("title Greenhouse", "does not fit"),
    ("parts parts.toml", "in quotes"),
    ("ground", "too early"),
    ("R1", "too early"),
    ("end", "without a mode or block"),
    ("only one", "only modes"),
    ("netlist 1", "second netlist"),
    ("R1 resistor 1k 2k 1:VIN 2:GND", "second value"),
    ("R1 resistor 1k 0.9k..1.1k 5% 1:VIN 2:GND", "range and a tolerance"),
    ("R1 resistor 1000V 1:VIN 2:GND", "voltage"),
    ("R1 resistor 12mOhm 1:VIN 2:GND", "unit"),
    ("R1 resistor 1,5k 1:VIN 2:GND", "comma"),
    ("R1 resistor 1k 3:VIN 2:GND", "no pin 3"),
    ("R1 resistor 1k P_tott=1W 1:VIN 2:GND", "P_tot"),
    ("R1 resistor 1k 1:VIN 1:GND", "twice"),
    ("S1 switch shut 1:VIN 2:GND", "open or closed"),
    ("PS1 supply 5V +:A -:GND", "stands twice"),
    ("ambient 25", "degC"),
    ("omit R77", "no device R77"),
    ("expect voltage VINN 1V..2V", "VIN"),
    ("expect speed VIN 1V..2V", "voltage"),
    ("expect power PS1 1V..2V", "voltage"),
    ('expect voltage VIN 1V..2V mode "x"', "no mode"),
    ("same-heat PS1 R5 R_th=5K/W", "no device R5"),
    ("block resistor A\nR9 resistor 1k 1:A 2:GND\nend", "like a kind"),
    ("A1 filter IN:VIN", "no kind or block"),
    ('mode "a"\nR1 resistor 1k 1:VIN 2:GND\nend', "set, omit, place"),
    ("R1 resistor 1E3 1:VIN 2:GND", "e"),
    ("C1 capacitor 10uFF 1:VIN 2:GND", "unit"),
    ("D1 diode I_S=1nA n=0 A:VIN K:GND", "above zero"),
    ("T1 trimmer 10k at=1.5 1:VIN W:A 2:GND", "above 1"),
    ("U1 converter 5V efficiency=130% IN:VIN OUT:O GND:GND", "above 1"),
    ("P1 load 5W +:VIN -:GND", "V_min"),
    ("Q1 npn I_S=1fA h_FE=0 B:VIN C:VIN E:GND", "above zero"),
]


@pytest.mark.parametrize(("line", "words"), MISTAKES)
def test_mistakes_are_named(line: str, words: str) -> None:
    with pytest.raises(InputError) as caught:
        netaudit.loads(HEAD + line + "\n", "board.netlist")
    text = str(caught.value)
    assert "\n" not in text
    assert "board.netlist:" in text
    assert words in text


def test_missing_first_statement() -> None:
    for text in ("", "R1 resistor 1k 1:A 2:B\n", "netlist 2\n"):
        with pytest.raises(InputError, match="netlist"):
            netaudit.loads(text)


def test_message_does_not_carry_an_escape() -> None:
    with pytest.raises(InputError) as caught:
        netaudit.loads(HEAD + "R1 resistor \x1b[2J 1:VIN 2:GND\n")
    assert "\x1b" not in str(caught.value)


def test_includes_stay_below_the_root_and_name_their_chain(tmp_path: Path) -> None:
    (tmp_path / "sub").mkdir()
    (tmp_path / "a.netlist").write_text('netlist 1\ninclude "sub/b.netlist"\n')
    (tmp_path / "sub" / "b.netlist").write_text("netlist 1\nR1\n")
    with pytest.raises(InputError) as caught:
        read_netlist(str(tmp_path / "a.netlist"))
    assert "b.netlist:2" in str(caught.value)
    assert "included from" in str(caught.value)
    (tmp_path / "secret.txt").write_text("do not show this")
    (tmp_path / "sub" / "c.netlist").write_text('netlist 1\ninclude "../secret.txt"\n')
    with pytest.raises(InputError) as caught:
        read_netlist(str(tmp_path / "sub" / "c.netlist"))
    assert "outside" in str(caught.value)
    assert "do not show" not in str(caught.value)
    (tmp_path / "d.netlist").write_text('netlist 1\ninclude "d.netlist"\n')
    with pytest.raises(InputError, match="itself"):
        read_netlist(str(tmp_path / "d.netlist"))


def test_blocks_nest_with_parameters_and_private_nets() -> None:
    board = netaudit.loads(
        HEAD + "block half IN OUT r=1k\nR1 resistor $r 1:IN 2:m\nR2 resistor $r 1:m 2:OUT\nend\n"
        "block pair IN OUT\nA half r=2k IN:IN OUT:x\nB half IN:x OUT:OUT\nend\nX1 pair IN:VIN OUT:GND\n"
    )
    circuit = board.board.circuits[0]
    assert {d.name for d in circuit.devices} >= {"X1/A/R1", "X1/A/R2", "X1/B/R1"}
    nets = board.solve()[0].points[0].nets
    assert nets["X1/x"] == pytest.approx(4.0)
    assert nets["X1/A/m"] == pytest.approx(8.0)


def test_modes_set_omit_and_place() -> None:
    board = netaudit.loads(
        HEAD + "R1 resistor 1k 5% 1:VIN 2:M\nR2 resistor 1k 0.9k..1.1k 1:M 2:GND\nR3 resistor 1k 1:M 2:GND\nomit R3\n"
        'mode "b"\n  set R1 3k\n  set R2 2k\n  place R3\nend\nmode "c"\n  omit R2\n  place R3\nend\n'
    )
    by_mode = {c.mode: c for c in board.board.circuits}
    assert list(by_mode) == ["normal", "b", "c"]
    assert {d.name for d in by_mode["normal"].devices} == {"PS1", "R1", "R2"}
    assert {d.name for d in by_mode["c"].devices} == {"PS1", "R1", "R3"}
    r1, r2 = by_mode["b"].device("R1").values["value"], by_mode["b"].device("R2").values["value"]
    # a percentage stays, a range is dropped
    assert (r1.low, r1.high) == (pytest.approx(2850.0), pytest.approx(3150.0))
    assert not r2.varies
