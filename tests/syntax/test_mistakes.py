"""Every known mistake, by the words of its message and the column of its place."""

from __future__ import annotations

import pytest

from netaudit.failure import InputError
from netaudit.syntax.reader import read_netlist_text
from netaudit.syntax.statements import DeviceStatement
from netaudit.syntax.suggest import closest

MISTAKES = [
    ("R1 resistor 1k 1:A 2 :B", 21, "a blank beside : or ="),
    ("R1 resistor 1k 1: A 2:B", 17, "a blank beside : or ="),
    ("R1 resistor 1k P= 1W", 17, "a blank beside : or ="),
    ("R1 resistor :A", 12, "a blank beside : or ="),
    ("R1 resistor 1k, 5% 1:A 2:B", 13, "comma"),
    ("R1 resistor 1k , 5% 1:A 2:B", 16, "comma"),
    ("R1 resistor V_Z=5V, 5% 1:A", 17, "write key=value,tolerance"),
    ("R1 resistor 1k 1:A,2:B", 19, "comma or semicolon"),
    ("R1 resistor 1k 1:A;2:B", 19, "comma or semicolon"),
    ("R1 resistor 1k 1=A 2:B", 17, "colon"),
    ("R1 resistor 1k +=A -:B", 17, "colon"),
    ("R1 resistor 1k 1:A:B 2:C", 19, "second : in PIN:NET"),
    ("R1 resistor a=b:c 1:A", 16, "a : in the value of a key"),
    ("R1 resistor a=b=c 1:A", 16, "second ="),
    ("R1 resistor 1k 1:A:B=1mA", 19, "second :"),
    ("R1 resistor 1k A:B=1mA", 19, "outside covered"),
    ('R1 resistor 1k 1:"a"b 2:C', 21, "closing quote"),
    ('R1 resistor 1k 1:a"b" 2:C', 19, "quote inside a word"),
    ('R1 resistor "1k" 1:A', 13, "stands in quotes"),
    ('R1 resistor 1k 1:"A 2:B', 18, "never closed"),
    ('title "a', 7, "never closed"),
    ('title "a\\nb"', 9, "only \\\" and \\\\"),
    ("R1 resistor \u201c1k\u201d 1:A", 13, "straight"),
    ("R1 resistor 1k\u00a05% 1:A", 15, "no-break space"),
    ("R1 resistor 1k\u200b 1:A", 15, "zero width space"),
    ("R1 resistor 1k 1:N(1) 2:B", 18, 'write "N(1)" in double quotes'),
    ("R1 resistor 1k 1:a..b 2:B", 18, "needs quotes as a net"),
    ("R$1 resistor 1k 1:a 2:B", 1, "needs quotes as a designator"),
    ("R1 resistor 1k 1:\u00dc 2:B", 18, "needs quotes as a net"),
    ('"" resistor 1k', 1, "an empty designator"),
    ('R1 resistor 1k 1:" " 2:B', 18, "an empty net"),
    ("R1 resistor 1k 1:A#B 2:C", 19, "# inside a word"),
    ("R1 resistor 10 k 1:A", 16, "as in 10k"),
    ("R1 supply 5 V +:A", 13, "as in 5V"),
    ("R1 supply 5V 4V .. 6V +:A", 17, "as in 4V.."),
    ("R1 supply 5V \u00b1 25mV +:A", 14, "\u00b125mV"),
    ("R1 resistor 1k 5 % 1:A", 18, "as in 5%"),
    ("R1 resistor 1k 1:A 1:B", 20, 'pin "1" stands twice'),
    ("R1 resistor a=1 a=2 1:B", 17, 'key "a" stands twice'),
    ("block F A A", 11, 'pin "A" stands twice'),
    ("block F A r=1 r=2", 15, 'key "r" stands twice'),
    ("groud GND", 1, "did you mean ground?"),
    ("Ground GND", 1, "did you mean ground?"),
    ("expct voltage A 1V..2V", 1, "did you mean expect?"),
    ('titel "x"', 7, "the statement title"),
    ('mod "x"', 5, "the statement mode"),
    ("END", 3, "the statement end"),
    ("end resistor 1k 1:A 2:B", 5, 'a designator called end needs quotes: "end"'),
    ("title resistor 1k 1:A", 7, 'called title needs quotes: "title"'),
    ("// a comment", 1, "a comment begins with #"),
    ("; comment", 1, "a comment begins with #"),
    ("* comment", 1, "a comment begins with #"),
    ("expect voltage A 1V..2V mode normal", 30, 'write mode "normal"'),
    ("expect voltage A", 1, "a target and a range"),
    ("expect voltage A B C 1V..2V", 20, "at most 2"),
    ("expect current A B 1V..2V", 18, "at most 1"),
    ("covered U1 no-current", 12, "covered DESIGNATOR"),
    ('covered U1 "w" draws', 16, "draws without a current"),
    ('covered U1 "w" no-current A:B=1mA', 16, "no-current, or"),
    ('covered U1 "w" nothing', 16, "no-current, or"),
    ("same-heat R1 R2 R=1K/W", 17, "write R_th"),
    ("set R1", 1, "say what changes"),
    ("set R1 1:A", 8, "not pins"),
    ("only mode", 6, "only modes"),
    ("mode normal", 6, 'write: mode "name"'),
    ("include a.netlist", 9, 'write: include "file"'),
    ("parts a.toml", 7, 'parts "a.toml"'),
    ("ground", 6, "write: ground NET"),
    ("ambient 25degC 60degC", 16, "0degC..50degC"),
    ("netlist 1", 1, "a second netlist"),
    ("end", 1, "without a mode or block"),
    ('mode "a"', 1, "has no end"),
    ("block A B", 1, "has no end"),
    ('mode "a"\nend\nmode "a"\nend', 6, "defined twice"),
    ("block A B\nend\nblock A B\nend", 7, "defined twice"),
    ('block A B\nmode "a"', 1, "of line 2"),
    ('mode "a"\nonly modes', 1, "close it with"),
    ("R1 a\nR1 a", 1, "stands twice (first at t:2)"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "column", "words"), MISTAKES)
def test_a_mistake_is_named_where_it_stands(text: str, column: int, words: str) -> None:
    with pytest.raises(InputError) as caught:
        read_netlist_text(f"netlist 1\n{text}\n", "t")
    error = caught.value
    assert words in str(error)
    assert "\n" not in str(error)
    assert error.mend
    assert error.place is not None
    assert error.place.file == "t"
    assert error.place.line >= 2
    assert error.place.column == column


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "empty"), ("# nothing\n\n", "empty"), ("R1 resistor 1k\n", "begin"), ("netlist 2\n", "netlist 1"),
        ("netlist 1.0\n", "netlist 1"), ("netlist\n", "netlist 1"), ("[PART]\n", "begin it with: netlist 1"),
        ('{"a": 1}\n', "begin it with: netlist 1"), ("title\n", "netlist 1"), ("Netlist 1\n", "netlist 1"),
    ],
)  # fmt: skip
def test_the_first_statement_is_the_version(text: str, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        read_netlist_text(text, "t")
    assert str(caught.value).startswith("t:1")


# each took seconds to hours while messages were looked for with backtracking
@pytest.mark.parametrize(
    "line",
    [
        "R1 r " + '"' * 150_000, "R1 r " + '"' * 150_001, 'R1 r "' + '\\"' * 75_000, "R1 r " + "a:" * 75_000,
        "R1 r " + "a" * 150_000 + "=:", "R1 r " + " " * 150_000 + "!:", "R1 r " + "x:y=z " * 25_000 + "=",
        "R1 r " + "," * 150_000, "R1 r " + "(" * 150_000 + "=", "R1 r " + "1:A" * 50_000, "R1 r " + "=" * 150_000,
        "R1 r " + '"a":' * 37_000, "R1 r " + "1:A \\\n" * 30_000,
    ],
)  # fmt: skip
def test_a_long_wrong_line_is_refused_without_backtracking(line: str) -> None:
    with pytest.raises(InputError) as caught:
        read_netlist_text(f"netlist 1\n{line}\n", "t")
    assert len(str(caught.value)) < 400


def test_what_is_no_mistake() -> None:
    lines = (
        '"end" resistor 1k 1:end 2:mode',
        'R2 resistor 1k 1:"a:b = c, d" 2:"\u201cx\u201d"',
        'U1 opamp IN+:a IN-:b OUT:c V+:d V-:e part="A B"',
        "R.3/x resistor 1k 1:a.b 2:-5V~",
        "S1 switch open 1:NC 2:nc",
    )
    found = read_netlist_text("netlist 1\n" + "\n".join(lines), "t").statements
    assert len(found) == len(lines)
    assert all(isinstance(s, DeviceStatement) for s in found)


def test_the_closest_word() -> None:
    assert closest("rezistor", ["resistor", "capacitor"]) == "resistor"
    assert closest("LED", ["diode", "led"]) == "led"
    assert closest("qqq", ["resistor", "capacitor"]) is None
    assert closest("x" * 1000, ["resistor"]) is None
