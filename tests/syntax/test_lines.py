"""Logical lines: what is joined, taken off and refused, and that places stay right."""

from __future__ import annotations

import pytest

from netaudit.failure import InputError
from netaudit.syntax.lines import LONGEST, logical_lines


def texts(text: str) -> list[str]:
    return [line.text for line in logical_lines(text, "t")]


def test_comments_stand_at_a_start_or_after_a_blank_and_not_in_quotes() -> None:
    assert texts('# a\nA B # c\n \t# d\nA "#x" \'\n') == ["A B ", 'A "#x" \'']
    assert texts('title "a \\" # b"') == ['title "a \\" # b"']
    for text in ("A B#c", "A#", '"x"# c'):
        with pytest.raises(InputError, match="# inside a word"):
            texts(text)


def test_a_backslash_joins_and_a_comment_ends_the_joining() -> None:
    assert [t.split() for t in texts("A \\\nB\\\n C\nD \\  \nE")] == [["A", "B", "C"], ["D", "E"]]
    assert [t.split() for t in texts("A # c \\\nB")] == [["A"], ["B"]]
    with pytest.raises(InputError, match="last one"):
        texts("A\nB \\")


def test_places_of_a_joined_line_are_those_of_its_pieces() -> None:
    (line,) = logical_lines("\n  A \\\n\\\n\tB C", "t")
    for word, row, column in (("A", 2, 3), ("B", 4, 2), ("C", 4, 4)):
        place = line.place(line.text.index(word), line.text.index(word) + 1)
        assert (place.line, place.column, place.end_column) == (row, column, column + 1)
        assert place.source[column - 1] == word
        assert place.caret().splitlines()[1].endswith("^")


@pytest.mark.parametrize("c", ["\x00", "\x07", "\x1b", "\x7f", "\x85", "\x0c", "\u2028", "\r"])
def test_control_characters_are_refused_with_their_place(c: str) -> None:
    with pytest.raises(InputError, match="control character") as caught:
        texts(f"A\nB {c} C")
    assert caught.value.place is not None
    assert (caught.value.place.line, caught.value.place.column) == (2, 3)
    assert c not in str(caught.value) + caught.value.place.caret()


def test_carriage_returns_belong_to_line_ends_only() -> None:
    assert texts("A\r\n\r\nB\r\n# c\r\n") == ["A", "B"]


@pytest.mark.parametrize("text", ["x" * (LONGEST + 1), "x \\\n" * LONGEST, '"' * (LONGEST + 1), "\\\n" * (2 * LONGEST)])
def test_an_endless_statement_is_refused(text: str) -> None:
    with pytest.raises(InputError, match=str(LONGEST)) as caught:
        texts(text)
    assert len(str(caught.value)) < 200
