"""Odd rows of part tables: every mistake is one line at the key that is wrong, in TOML and in CSV."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from netaudit.failure import InputError
from netaudit.parts.part import Part
from netaudit.parts.tables import read_table
from netaudit.parts.toml_rows import TomlRows


def part(tmp_path: Path, text: str, name: str = "A", file: str = "p.toml") -> Part:
    (tmp_path / file).write_text(text, encoding="utf-8")
    found = read_table(str(tmp_path / file), file).get(name)
    assert found is not None
    return found


HEAD = "# parts\n[B]\nn = 1\n\n[A]\n"


@pytest.mark.parametrize(
    ("line", "words", "column"),
    [
        ("kind = ['led']", "kind is a list, not a text", 1),
        ("kind = true", "kind is a truth value", 1),
        ("kind = {a = 1}", "kind is a table", 1),
        ("source = 1979-05-27", "source is a date or time", 1),
        ("block = 1.5", "block is a number", 1),
        ("material = []", "material is a list", 1),
        ("material = 'unobtainium'", "unknown material", 1),
        ("body = 'maybe'", "body is yes or no", 1),
        ("use = 'spare'", "use is clamp", 1),
        ("generic = 'yes'", "generic is true or false", 1),
        ("pins = 'A'", "pins holds a table", 1),
        ("pins = { '1' = ['A'] }", "pins.1 is a list", 10),
        ("pins = { '1' = true }", "pins.1 is a truth value", 10),
        ("spread = '5%'", "spread holds a table", 1),
        ("spread = { V_F = ['1V'] }", "spread.V_F: it is a list", 12),
        ("spread = { V_F = '-0.1V' }", "a half-width is not negative", 12),
        ("spread = { V_F = '10%' }", "the spread of V_F is a voltage", 12),
        ("spread = { V_F = '0.1V..0.2V' }", "does not hold the value 0", 12),
        ("spread = { V_Z = '5%' }", "spread of V_Z, which the part does not have; state V_Z itself", 12),
        ("V_Z = '5V'\nspread = { V_Z = '6V' }", "must be above zero over its whole spread", 12),
        ("spread = { V_ZZ = '5%' }", "unknown value V_ZZ; did you mean V_Z", 12),
        ("ratings = 'none'", "ratings holds a table", 1),
        ("ratings = { I_FF = '1A' }", "unknown rating I_FF; did you mean I_F", 13),
        ("ratings = { V_Z = '1V' }", "V_Z is a value of the model", 13),
        ("ratings = { I_F = [] }", "ratings.I_F: it is empty", 13),
        ("ratings = { I_F = [['1A']] }", "it is a list, not a value", 13),
        ("ratings = { I_F = {max = '1A'} }", "it is a table, not a value", 13),
        ("ratings = { I_F = ['1A', '2A'] }", "lacks its temperature", 13),
        ("ratings = { I_F = ['1A @ 25degC', '2A @ 25degC'] }", "two values, 1 and 2, at 25 degC", 13),
        ("ratings = { P_tot = '-1W' }", "cannot be negative", 13),
        ("ratings = { V_R = '0V' }", "must be above zero", 13),
        ("ratings = { T_j = 100 }", "degC", 13),
        ("ratings = { R_th_ja = '-3K/W' }", "cannot be negative", 13),
        ("ratings = { pins = 'IO' }", "ratings.pins holds a table", 13),
        ("I_F = true", "it is a truth value, not a value", 1),
        ("I_F = 1979-05-27", "it is a date or time", 1),
        ("I_F = nan", "nan is no value", 1),
        ("I_F = -inf", "-inf is no value", 1),
        ("I_F = 1" + "0" * 400, "too large", 1),
        ("I_F = ''", "it is empty", 1),
        ("I_F = 1e400", "inf is no value", 1),
        ("P_tot = '1W'\nratings = { P_tot = '2W' }", "P_tot stands twice", 13),
        ("I_S = '0A'", "must be above zero", 1),
        ("I_S = '1nA,100%'", "above zero", 1),
        ("h_FE = 0", "must be above zero", 1),
        ("h_FE = '-100 @ 10mA'", "must be above zero", 1),
        ("efficiency = '130%'", r"cannot be above 1 \(100 %\)", 1),
        ("efficiency = '90%,80%..130%'", "cannot be above 1", 1),
        ("R_S = '-1ohm'", "cannot be negative", 1),
        ("n = '1 @ 5mA'", "n has no condition", 1),
        ("V_F = '2V'", r"needs the current.*forward = \[\"2V @ 20mA\"\]", 1),
        ("V_F = '2V @ 10mA'", r"forward = \[\"2V @ 10mA\"\]", 1),
        ("forward = []", "forward: it is empty", 1),
        ("forward = [1]", "is no point", 1),
        ("forward = '0.7V @'", "forward", 1),
        ("forward = { a = 1 }", "it is a table", 1),
        ("forward = ['0.7V @ 1mA', '0.8V @ 10mA']\nn = 2", "two models: forward and n", 1),
        ("points = ['0V @ 0A']", "a curve of one point", 1),
        ("points = ['1V @ 1A', '1V @ 2A']", "two currents, 1 A and 2 A, at 1 V", 1),
        ("points = [['1V', '1A']]", "it is a list", 1),
        ("points = ['1V @ 1A', '2V @ 2A']\nI_S = '1nA'", "two models: points and I_S", 1),
        ("Colour = 'red'", "unknown key Colour", 1),
        ("RthJA = '100K/W'", "did you mean R_th_ja", 1),
    ],
)
def test_every_mistake_of_a_row_is_named_at_its_key(tmp_path: Path, line: str, words: str, column: int) -> None:
    with pytest.raises(InputError, match=words) as caught:
        part(tmp_path, HEAD + line + "\n")
    place = caught.value.place
    assert place is not None
    assert (place.file, place.line, place.column) == ("p.toml", 6 + line.count("\n"), column)
    assert str(caught.value).count("\n") == 0
    assert caught.value.mend


def test_places_of_headings_sub_tables_and_several_pieces(tmp_path: Path) -> None:
    text = "[A]\nkind = 'led'\n[B]\nn = 1\n[A.ratings]\nV_R = '5V'\n  I_F = '-1A'\n"
    with pytest.raises(InputError, match="cannot be negative") as caught:
        part(tmp_path, text)
    assert str(caught.value.place) == "p.toml:7:3"
    with pytest.raises(InputError, match=r"twice|overwrite") as caught:
        part(tmp_path, "[B]\nn = 1\n[A]\nn = 1\nn = 2\n")
    assert caught.value.place is not None
    assert caught.value.place.line == 5


@pytest.mark.parametrize(
    ("text", "place", "words"),
    [
        ("name,kind,I_F\nA,led,5\nA,led,6\n", "p.csv:3:1", "stands twice"),
        ("name,kind,I_F\nA,led,-5A\n", "p.csv:2:7", "cannot be negative"),
        ('name,source,I_F\n"A","two\nlines",1V\n', "p.csv:3:8", "I_F"),
        ('name;spread.V_F\nA;"0,1V"\n', "p.csv:2:4", "spread.V_F"),
        ("name,ratings.pins.IO3\nA,4V..3V\n", "p.csv:2:3", "reversed"),
        ("name,generic\nA,perhaps\n", "p.csv:2:3", "yes or no"),
        ("name,V_F\nA,2V\n", "p.csv:2:3", "needs the current"),
        ("name,h_FE\nA,0\n", "p.csv:2:3", "above zero"),
        ("name,kind\nA,led,5V\n", "p.csv:2:1", "3 cells in a table of 2"),
        ("name,kindd\nA,led\n", "p.csv:1:1", "unknown column kindd; did you mean kind"),
        ("name,name\nA,led\n", "p.csv:1:1", "stands twice"),
        ("kind\nled\n", "p.csv:1:1", "no column name"),
        ("Name,kind\nA,led\n", "p.csv:1:1", "small letters"),
        ("\n\n", "p.csv:1:1", "empty"),
        ('name,kind\nA,"led\n', "p.csv:2:1", "not CSV"),
        ("name,pins\nA,1\n", "p.csv:1:1", "a column pins.NAME for each"),
        ("name,kind\n,led\n", "p.csv:2:1", "without a part name"),
    ],
)
def test_every_mistake_of_a_csv_row_is_named_at_its_cell(tmp_path: Path, text: str, place: str, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        part(tmp_path, text, file="p.csv")
    assert str(caught.value.place) == place


def test_ratings_take_a_data_sheets_signs_and_conditions(tmp_path: Path) -> None:
    found = part(
        tmp_path,
        "[A]\nkind='pnp'\nh_FE = '200 @ 10mA'\n[A.ratings]\nV_CEO='-40V'\nV_GS='±20V'\nP_tot='5W @ 70degC'\nI_C='-0.2A'\n",
    )
    assert {k: r.nominal for k, r in found.ratings.items()} == {
        "V_CEO": 40.0,
        "V_GS": 20.0,
        "P_tot": 5.0,
        "I_C": 0.2,
        "T_ref": 70.0,
    }
    assert found.parameters["h_FE.at"].nominal == 0.01


def test_bias_current_describes_an_op_amp_and_limits_a_transistor(tmp_path: Path) -> None:
    amp = part(tmp_path, "[A]\nkind='opamp'\nI_B='-20nA'\n")
    assert amp.parameters["I_B"].nominal == -20e-9
    assert not amp.ratings
    transistor = part(tmp_path, "[A]\nkind='npn'\nI_B='20mA'\n")
    assert transistor.ratings["I_B"].nominal == 0.02
    assert not transistor.parameters


@pytest.mark.parametrize(
    ("value", "low", "high"),
    [
        ("0.2V", 4.9, 5.3),
        ("5%", 4.845, 5.355),
        ("-20%..+10%", 4.08, 5.61),
        ("±25mV", 5.075, 5.125),
        ("5V..5.4V", 5.0, 5.4),
    ],
)
def test_ways_to_write_a_spread(tmp_path: Path, value: str, low: float, high: float) -> None:
    v_z = part(tmp_path, f"[A]\nV_Z = '5.1V'\nspread = {{ V_Z = '{value}' }}\n").parameters["V_Z"]
    assert (v_z.low, v_z.nominal, v_z.high) == (pytest.approx(low), 5.1, pytest.approx(high))


def test_only_the_rows_that_are_used_are_understood(tmp_path: Path) -> None:
    assert part(tmp_path, "[A]\nn = 1\n[B]\nn = -1\nm = 3\n").parameters["n"].nominal == 1.0
    for broken in (
        "[A]\nn = 1\n[B]\nn = [1,\n",
        "[A]\nn = 1\n[B]\nn = 1 2\n",
        "[A]\nn=1\n[B]\n[A]\n",
        "[A]\nn=1\nx y\n",
    ):
        with pytest.raises(InputError, match="not TOML"):
            part(tmp_path, broken)


def test_toml_beyond_plain_rows(tmp_path: Path) -> None:
    text = '["A"]\nsource = """two\n[lines]"""\n"n" = 1.0\nratings.I_F = "1\\u0041"\n[A.spread]\nn = "5%"\n'
    found = part(tmp_path, text)
    assert (found.source, found.ratings["I_F"].nominal) == ("two\n[lines]", 1.0)
    with pytest.raises(InputError, match="double brackets"):
        part(tmp_path, "[[A]]\nn = 1\n")
    with pytest.raises(InputError, match="outside any part"):
        part(tmp_path, "n = 1\n[A]\n")


_TOKENS = st.sampled_from(
    [
        "[",
        "]",
        "{",
        "}",
        "=",
        ",",
        ".",
        "\n",
        "\n",
        " ",
        "#",
        '"',
        "'",
        "a",
        "b",
        "A",
        "1",
        "0",
        "-",
        "e",
        "true",
        '"x"',
        "\t",
        "\\",
    ]
)
_LINES = st.sampled_from(
    [
        "[A]\n",
        "[A.b]\n",
        "[B]\n",
        "[ C . 'd' ]\n",
        "x = 1\n",
        "y = ['p', 'q',]\n",
        "z = {a = 1, b = 'c'}\n",
        "# c\n",
        "\n",
        "k.l = 0\n",
        "[A]",
        "x = 01\n",
        "m = [1,\n2]\n",
        '"q" = +1.5e3 # d\n',
    ]
)


@given(st.one_of(st.lists(_TOKENS, max_size=25).map("".join), st.lists(_LINES, max_size=8).map("".join)))
def test_plain_reader_agrees_with_toml(text: str) -> None:
    """Whatever the quick reader takes row by row, the reader of the whole language takes too, with the same content;
    a key or table twice in a row is found when the row is used."""
    try:
        rows = TomlRows(text, "p.toml")
        got = {name: rows.row(name).values for name in rows.names}
    except InputError:
        got = None
    try:
        wanted = tomllib.loads(text)
    except tomllib.TOMLDecodeError:
        wanted = None
    if wanted is not None and all(isinstance(v, dict) for v in wanted.values()):
        assert got == wanted
    else:
        assert got is None
