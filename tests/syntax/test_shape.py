"""The short way through the grammar says what the grammar says."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st
from lark import UnexpectedInput

from netaudit.syntax.mistakes import STATEMENTS
from netaudit.syntax.reader import read_netlist_text
from netaudit.syntax.shape import Shaped, Shapes, Token, shapes
from netaudit.syntax.words import RESERVED

PIECE = st.sampled_from(
    [
        *STATEMENTS, "R1", "1k", "5%", "10V..12V", "a=b", "a=5V,5%", 'a="x y"', "1:A", '1:"x y"', '"1":"2"', "A:B=5mA", '"s"',
        '"a\\"b"', "1:a:b", "a=b=c", "1=A", '"open', "x,y", "#", ":", "settle", "modes", "1:A,", "é", "$r",
    ]
)  # fmt: skip
LINE = st.builds(
    lambda pieces, blank: blank.join(pieces), st.lists(PIECE, min_size=1, max_size=7), st.sampled_from([" ", "\t  "])
)


def by_lark_alone(text: str) -> Shaped | None:
    """What the grammar says without anything remembered."""
    try:
        statement = shapes().lark.parse(text).children[0]
    except UnexpectedInput:
        return None
    leaves = [c if hasattr(c, "start_pos") else c.children[0] for c in statement.children]
    return Shaped(statement.data, tuple(Token(t.type, str(t), t.start_pos) for t in leaves))


@given(st.lists(LINE, min_size=1, max_size=12))
@settings(max_examples=150, deadline=None, derandomize=True)
def test_remembered_shapes_agree_with_the_grammar(lines: list[str]) -> None:
    fresh = shapes()
    warm = Shapes(fresh.lark, fresh.scanner, fresh.keywords, fresh.refusal)
    for text in [*lines, *lines]:
        try:
            found: Shaped | None = warm.read(text)
        except UnexpectedInput:
            found = None
        assert found == by_lark_alone(text)


def test_a_second_line_of_a_shape_is_not_parsed_again() -> None:
    fresh = shapes()
    warm = Shapes(fresh.lark, fresh.scanner, fresh.keywords, fresh.refusal)
    warm.read("R1 resistor 1k 1:A 2:B")
    warm.lark = None
    assert warm.read('"R 2" resistor 2k 1:C 2:"D E"'.replace('"R 2"', "R2")).tokens[4].text == '2:"D E"'


def test_the_words_of_statements_are_those_of_the_grammar() -> None:
    assert set(shapes().keywords) == set(STATEMENTS) == RESERVED


def test_the_grammar_lists_no_kind() -> None:
    assert not {"resistor", "supply", "led", "capacitor"} & set(shapes().keywords)


def test_a_big_netlist_is_read_whole() -> None:
    text = "netlist 1\n" + "".join(f"R{k} resistor {k}R 5% part=C-0805 1:N{k} 2:N{k + 1}\n" for k in range(5000))
    assert len(read_netlist_text(text).statements) == 5000
