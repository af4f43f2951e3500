"""From exports to kinds; values as people write them; converting and including again gives the same circuit."""

from __future__ import annotations

from pathlib import Path

import pytest

import netaudit
from netaudit.circuit.mapping import map_export
from netaudit.circuit.people import read_people
from netaudit.cli.main import main
from netaudit.parts.tables import PartTable
from netaudit.syntax.tables import read_table


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("100", "ohm", "100ohm"), ("4700", "ohm", "4700ohm"), ("47к", "ohm", "47kohm"), ("4,7к", "ohm", "4.7kohm"),
        ("180 Ом", "ohm", "180ohm"), ("0,1мк", "F", "0.1uF"), ("0,25Вт", "W", "0.25W"), ("50В", "V", "50V"),
        ("56мкГн", "H", "56uH"), ("4k7", "ohm", "4k7"), ("R047", "ohm", "R047"), ("10uF/16V", "F", "10uF"),
        ("10uF/16V", "V", "16V"), ("1K", "ohm", "1kohm"), ("0", "ohm", "0ohm"), ("100n", "F", "100nF"), ("2R2", "ohm", "2R2"),
        ("4.7 kOhm", "ohm", "4.7kohm"), ("1M", "ohm", "1Mohm"),
    ],
)  # fmt: skip
def test_values_as_people_write_them(text: str, unit: str, value: str) -> None:
    found = read_people(text, unit)
    assert found is not None
    assert found.value == value


@pytest.mark.parametrize(
    ("text", "unit"), [("DNP", "ohm"), ("", "ohm"), ("12МГц", "ohm"), ("100", "F"), ("10uF", "ohm")]
)
def test_what_cannot_be_read_is_not_guessed(text: str, unit: str) -> None:
    assert read_people(text, unit) is None


def test_tolerance_beside_the_value() -> None:
    found = read_people("4k7 5%", "ohm")
    assert found is not None
    assert found.tolerance == "5%"


TABLE = (
    b"designator,pin,net,value,power\nR1,1,VIN,1k 1%,0.25W\nR1,2,A,,\nD1,1,A,RED,\nD1,2,GND,,\nD2,1,A,,\nD2,2,GND,,\n"
    b"U1A,1,A,,\nU1B,2,GND,,\nC1,1,A,100n/16V,\nC1,2,GND,,\nJ1,1,VIN,,\n"
)


def board(tmp_path: Path) -> Path:
    (tmp_path / "b.csv").write_bytes(TABLE)
    (tmp_path / "p.toml").write_text('[RED]\nkind = "led"\nmaterial = "red"\npins = { "1" = "A", "2" = "K" }\n')
    path = tmp_path / "b.netlist"
    path.write_text(
        'netlist 1\nparts "p.toml"\ninclude "b.csv"\nground GND\nambient 25degC\nPS1 supply 12V +:VIN -:GND\n'
        'covered U1 "bench" no-current\n'
    )
    return path


def test_an_export_becomes_a_board(tmp_path: Path) -> None:
    loaded = netaudit.load(str(board(tmp_path)))
    devices = {d.name: d for d in loaded.board.circuits[0].devices}
    assert devices["R1"].values["value"].low == pytest.approx(990.0)
    assert devices["R1"].ratings["P_tot"].nominal == 0.25
    assert devices["D1"].kind == "led"
    assert dict(devices["D1"].pins) == {"A": "A", "K": "GND"}
    assert devices["U1"].kind == "unmodelled"
    assert dict(devices["U1"].pins) == {"2": "GND", "1": "A"}
    assert devices["J1"].kind == "connector"
    rules = {(f.rule, f.device) for f in loaded.lint()}
    assert ("part/no-pin-map", "D2") in rules
    assert loaded.solve()[0].points


def test_converting_gives_the_same_circuit(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = board(tmp_path)
    assert main(["convert", str(tmp_path / "b.csv"), "--parts", str(tmp_path / "p.toml")]) == 0
    text = capsys.readouterr().out.replace(f'parts "{tmp_path}/p.toml"', 'parts "p.toml"')
    (tmp_path / "c.netlist").write_text(text + "ground GND\nPS1 supply 12V +:VIN -:GND\n")
    first, second = (netaudit.load(str(p)) for p in (path, tmp_path / "c.netlist"))
    nets = first.solve()[0].points[0].nets
    again = second.solve()[0].points[0].nets
    assert {k: pytest.approx(v) for k, v in nets.items()} == again


def test_counts_say_by_which_rule() -> None:
    mapped = map_export(read_table(TABLE, "b.csv"), PartTable())
    assert ("resistor", "designator letter", ("R1",)) in mapped.summary.kinds
    assert mapped.summary.parts == 6
