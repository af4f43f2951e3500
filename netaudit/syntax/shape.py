"""The grammar at speed: a line's shape (the types of its tokens) is parsed once, and its like are taken for granted.

An LALR parser sees token types only, so two lines of the same types have the same tree.  The types are found with the
grammar's own terminals in lark's order of preference; a shape counts as known only after lark has read a line of it
with the same tokens.  Whatever is not known goes to lark, and every error comes from it.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from functools import cache
from typing import Any, NamedTuple

from netaudit.syntax.grammar import grammar_text

#: shapes of more tokens, or beyond this number, are parsed anew each time
_LONGEST_SHAPE, _MOST_SHAPES = 64, 4096
#: lines that are kept with their tokens, since boards repeat themselves (``end``, ``ground GND``, ``set ...``)
_LONGEST_KEPT, _MOST_KEPT = 100, 1024


class Token(NamedTuple):
    """A token: its terminal in the grammar, its text, and where it begins in the line."""

    type: str
    text: str
    start: int


@dataclass(frozen=True)
class Shaped:
    """A parsed line: the grammar's name of the statement, and its tokens without the statement's own word."""

    rule: str
    tokens: tuple[Token, ...]


@dataclass
class Shapes:
    """The grammar with the shapes met so far.  Raises lark's UnexpectedInput for a line that does not fit."""

    lark: Any
    scanner: re.Pattern[str]
    keywords: dict[str, str]
    refusal: type[Exception]
    known: dict[tuple[str, ...], tuple[str, int]] = field(default_factory=dict)
    kept: dict[str, Shaped] = field(default_factory=dict)

    def read(self, text: str) -> Shaped:
        """The statement of a line."""
        shaped = self.kept.get(text)
        if shaped is None:
            shaped = self._read(text)
            if len(self.kept) < _MOST_KEPT and len(text) <= _LONGEST_KEPT:
                self.kept[text] = shaped
        return shaped

    def _read(self, text: str) -> Shaped:
        tokens = self.scan(text)
        shape = tuple([t.type for t in tokens]) if tokens is not None and len(tokens) <= _LONGEST_SHAPE else ()
        found = self.known.get(shape)
        if found is not None and tokens is not None:
            rule, skip = found
            return Shaped(rule, tuple(tokens[skip:]))
        parsed = _flat(self.lark.parse(text))
        if tokens is not None and shape and len(self.known) < _MOST_SHAPES:
            skip = len(tokens) - len(parsed.tokens)
            if skip in (0, 1) and tuple(tokens[skip:]) == parsed.tokens:
                self.known[shape] = parsed.rule, skip
        return parsed

    def scan(self, text: str) -> list[Token] | None:
        """The tokens of a line by the terminals alone; None where none fits."""
        tokens: list[Token] = []
        position, end = 0, len(text.rstrip(" \t"))
        match = self.scanner.match
        while position < end:
            found = match(text, position)
            if found is None or found.lastgroup is None:
                return None
            kind = found.lastgroup
            start = found.start(kind)
            word = text[start : found.end()]
            if not tokens and kind == "WORD":
                kind = self.keywords.get(word, kind)
            tokens.append(Token(kind, word, start))
            position = found.end()
        return tokens


def _flat(tree: Any) -> Shaped:
    """The only statement of a tree, its items opened."""
    statement = tree.children[0]
    leaves = (child if hasattr(child, "start_pos") else child.children[0] for child in statement.children)
    return Shaped(statement.data, tuple([Token(t.type, str(t), t.start_pos) for t in leaves]))


@cache
def shapes() -> Shapes:
    """The netlist grammar, built at its first use."""
    from lark import Lark, UnexpectedInput

    lark = Lark(grammar_text("netlist.lark"), parser="lalr", lexer="contextual", propagate_positions=False)
    kept = [t for t in lark.terminals if t.name not in lark.ignore_tokens]
    keywords = {t.pattern.value: t.name for t in kept if t.pattern.type == "str"}
    # the order in which lark prefers terminals that match at the same place
    kept = sorted(kept, key=lambda t: (-t.priority, -t.pattern.max_width, -len(t.pattern.value), t.name))
    patterns = "|".join(f"(?P<{t.name}>{t.pattern.to_regexp()})" for t in kept if t.pattern.type != "str")
    return Shapes(lark, re.compile(rf"[ \t]*(?:{patterns})"), keywords, UnexpectedInput)
