"""``[export]`` of a project: rules, letters, columns, marks, and one line for each mistake."""

from __future__ import annotations

import tomllib
from pathlib import Path

import jsonschema
import pytest

import netaudit
from netaudit.circuit.export_section import _GIVEN, _KEYS
from netaudit.cli.main import main
from netaudit.failure import InputError
from netaudit.project.keys import schema
from tests.exports.board import coverage, write

TABLE = "Bauteil,Pin,Netz,Wert,Footprint,Status\nR1,1,VIN,1k,CHIP_0805,\nR1,2,A,,,\nVT1,1,A,X,,\nVT1,2,GND,,,\nR2,1,A,1k,,offen\nR2,2,GND,,,\n"
PROJECT = """parts = ["p.toml"]
[export]
not-fitted = ["offen"]
[export.columns]
designator = ["Bauteil"]
net = ["Netz"]
value = ["Wert"]
[export.letters]
VT = "led"
[[export.rules]]
when = { designator = "r*", Footprint = "*0805*" }
part = "CHIP-0805"
[[export.rules]]
when = { value = "X" }
part = "LAMP"
"""
PARTS = """[CHIP-0805]
kind = "resistor"
ratings = { P_tot = "125mW" }
[LAMP]
kind = "led"
material = "red"
pins = { "1" = "A", "2" = "K" }
"""


def project(tmp_path: Path, text: str = PROJECT) -> Path:
    (tmp_path / "b.csv").write_text(TABLE, encoding="utf-8")
    (tmp_path / "p.toml").write_text(PARTS, encoding="utf-8")
    (tmp_path / "netaudit.toml").write_text(text, encoding="utf-8")
    path = tmp_path / "b.netlist"
    path.write_text(
        'netlist 1\ninclude "b.csv"\nground GND\nambient 25degC\nPS1 supply 12V +:VIN -:GND\n', encoding="utf-8"
    )
    return path


def test_rules_letters_columns_and_marks(tmp_path: Path) -> None:
    board = netaudit.load(str(project(tmp_path))).board
    devices = {d.name: d for d in board.circuits[0].devices}
    assert set(devices) == {"PS1", "R1", "VT1"}
    assert devices["R1"].ratings["P_tot"].nominal == 0.125
    assert devices["VT1"].kind == "led"
    assert devices["VT1"].part is not None
    assert devices["VT1"].part.name == "LAMP"
    (summary,) = board.exports
    assert ("resistor", "mapping rule", ("R1",)) in summary.kinds
    assert summary.not_fitted == ("R2",)


def test_what_is_not_fitted_can_be_placed(tmp_path: Path) -> None:
    path = project(tmp_path)
    path.write_text(path.read_text() + 'mode "full"\nplace R2\nend\n')
    board = netaudit.load(str(path)).board
    fitted = {c.mode: {d.name for d in c.devices} for c in board.circuits}
    assert "R2" in fitted["full"]
    assert "R2" not in fitted["normal"]


def test_convert_reads_the_project(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    project(tmp_path)
    assert main(["convert", str(tmp_path / "b.csv")]) == 0
    out = capsys.readouterr().out
    assert "omit R2" in out
    assert "VT1 led part=LAMP A:A K:GND" in out


@pytest.mark.parametrize(
    ("text", "line", "words"),
    [
        ("[export]\nletter = 1\n", 2, "did you mean letters"),
        ('[export.letters]\nHL = "ledd"\n', 2, "did you mean led"),
        ('[export.letters]\n"1" = "led"\n', 2, "letters"),
        ('[export.columns]\nvalues = ["a"]\n', 2, "did you mean value"),
        ("[export.columns]\nvalue = 3\n", 2, "list of texts"),
        ('[export.ratings]\nP_tott = ["a"]\n', 2, "did you mean P_tot"),
        ('[export]\nencoding = "utf-99"\n', 2, "8-bit"),
        ("[export]\nnot-fitted = 1\n", 2, "list of texts"),
        ('[[export.rules]]\nwhen = { value = "X" }\n', 1, "says nothing"),
        ('[[export.rules]]\nkind = "led"\n', 1, "needs patterns"),
        (
            '[[export.rules]]\nwhen = { value = "X" }\nkind = "led"\n[[export.rules]]\nwhen = { value = "Y" }\nkind = "leds"\n',
            6,
            "did you mean led",
        ),
        ('[[export.rules]]\nwhen = { value = "X" }\nkin = "led"\n', 3, "did you mean kind"),
        ('[[export.rules]]\nwhen = { value = "X" }\nkind = "switch"\nstate = "opn"\n', 4, "did you mean open"),
        ('[[export.rules]]\nwhen = { value = "X" }\nfitted = "no"\n', 3, "true or false"),
        ('[[export.rules]]\nwhen = { value = "X" }\nvalue = "much"\n', 3, "such as"),
        ("export = 3\n", 1, "section"),
    ],
)
def test_mistakes_have_their_line(tmp_path: Path, text: str, line: int, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        netaudit.load(str(project(tmp_path, text)))
    assert caught.value.place is not None
    assert caught.value.place.line == line


def test_what_an_hour_buys_on_a_board_of_300_parts(tmp_path: Path) -> None:
    """The numbers that the README states."""
    paths = write(tmp_path)
    first, _ = coverage(paths["export"])
    assert (first.parts, first.audited, len(first.unmodelled), first.checks) == (304, 21, 72, 0)
    last, levels = coverage(paths["rows"])
    assert (last.audited, last.covered, len(last.unmodelled), last.checks) == (296, 8, 0, 570)
    assert levels["error"] == 0


def test_the_schema_of_the_project_knows_the_keys_that_are_read() -> None:
    known = schema()["properties"]["export"]["properties"]
    assert set(known) == set(_KEYS)
    assert set(known["rules"]["items"]["properties"]) == {"when", *_GIVEN}
    validator = jsonschema.Draft202012Validator(schema())
    assert validator.is_valid(tomllib.loads(PROJECT))
    for wrong in ('[export]\nnot-fited = ["x"]\n', '[[export.rules]]\nkind = "led"\n', "[export.letters]\nVT = 5\n"):
        assert not validator.is_valid(tomllib.loads(wrong))
