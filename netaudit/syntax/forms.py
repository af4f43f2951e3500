"""EDIF text to nested forms: keyword, items in order, and the line each form begins on."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import Any

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.collector import collector_paused
from netaudit.syntax.grammar import grammar_text

_PIECES = re.compile(r'\(\s*[^\s()"]+|\)|"[^"]*"|[^\s()"]+|\n')
_BRACKETS = re.compile(r'"[^"]*"|\([A-Za-z]{0,20}|\)|\n|"')
#: forms that stand in few others only, which tells where a closing bracket was forgotten
_INSIDE = {
    "edifversion": ("edif",), "library": ("edif",), "external": ("edif",), "design": ("edif",),
    "cell": ("library", "external"), "view": ("cell",), "contents": ("view",), "interface": ("view",),
    "instance": ("contents", "page", "net"), "net": ("contents", "page", "net", "netbundle", "listofnets"),
    "joined": ("net", "interface"),
}  # fmt: skip
_ESCAPE = re.compile(r"%([^%]*)%")


@dataclass(slots=True)
class Form:
    """``(keyword item ...)``: items are forms or atoms; a string keeps its quotes so that "1" and 1 stay apart."""

    keyword: str
    items: list[Form | str]
    line: int

    def forms(self, *keywords: str) -> Iterator[Form]:
        """The forms directly inside, of these keywords (all when none is named)."""
        for item in self.items:
            if isinstance(item, Form) and (not keywords or item.keyword in keywords):
                yield item

    def first(self, *keywords: str) -> Form | None:
        for item in self.items:
            if isinstance(item, Form) and item.keyword in keywords:
                return item
        return None

    def atoms(self) -> list[str]:
        return [item for item in self.items if isinstance(item, str)]

    def atom(self) -> str:
        """The first atom; empty when there is none."""
        for item in self.items:
            if isinstance(item, str):
                return item
        return ""


def read_forms(text: str, file: str) -> Form:
    """The outermost form.  Raises InputError with the line of the form that was never closed, of a bracket too many, or
    of what stands outside."""
    from lark.exceptions import UnexpectedInput

    try:
        with collector_paused():
            return _parser().parse(text)  # type: ignore[no-any-return]  # lark types a tree; the transformer makes a Form
    except UnexpectedInput as error:
        raise _unbalanced(text, file, error) from None


@cache
def _parser() -> Any:
    from lark import Lark, Transformer

    class Build(Transformer[Any, Form]):
        def whole(self, children: list[Any]) -> Form:
            return _built(str(children[0]), children[0].line)

        def form(self, children: list[Any]) -> Form:
            head = _built(str(children[0]), children[0].line)
            head.items += [c if isinstance(c, Form) else str(c) for c in children[1:]]
            return head

        def start(self, children: list[Any]) -> Form:
            return children[0]  # type: ignore[no-any-return]  # see read_forms

    return Lark(grammar_text("edif.lark"), parser="lalr", lexer="basic", transformer=Build())


def _built(text: str, line: int) -> Form:
    """The form of a token, with the few levels of forms inside it.

    Most of a large file passes through this loop: every keyword is lowered once, and a line is counted where it ends.
    """
    keywords = _KEYWORDS
    outermost: Form | None = None
    above: list[list[Form | str]] = []
    items: list[Form | str] = []
    for piece in _PIECES.findall(text):
        first = piece[0]
        if first == "(":
            keyword = keywords.get(piece)
            if keyword is None:
                keyword = _keyword(piece)
            form = Form(keyword, [], line)
            if outermost is None:
                outermost = form
            items.append(form)
            above.append(items)
            items = form.items
            if "\n" in piece:
                line += piece.count("\n")
        elif first == ")":
            items = above.pop()
        elif first == "\n":
            line += 1
        else:
            items.append(piece)
            if first == '"' and "\n" in piece:
                line += piece.count("\n")
    assert outermost is not None  # every token begins with a bracket and a keyword
    return outermost


#: keywords as written, with their bracket, to keywords in lower case
_KEYWORDS: dict[str, str] = {}


def _keyword(piece: str) -> str:
    keyword = piece[1:].strip().lower()
    if len(_KEYWORDS) < 1000:
        _KEYWORDS[piece] = keyword
    return keyword


def _unbalanced(text: str, file: str, error: Exception) -> InputError:
    """What is wrong with the brackets or quotes, found by one walk over them."""
    opened: list[tuple[str, int]] = []
    suspect: tuple[str, int] | None = None
    line = 1
    for match in _BRACKETS.finditer(text):
        token = match.group()
        if token[0] == "(":
            keyword = token[1:].lower()
            if suspect is None and opened and keyword in _INSIDE and opened[-1][0] not in _INSIDE[keyword]:
                # a net inside an instance: the instance was not closed
                suspect = opened[-1]
            opened.append((keyword, line))
        elif token == ")":
            if not opened:
                return InputError("a closing bracket too many", place=Place(file, line), mend="remove it")
            opened.pop()
            if not opened and text[match.end() :].strip():
                return InputError("text after the end of the outermost form", place=Place(file, line), mend="remove it")
        elif token == '"':
            return InputError("a string that is never closed", place=Place(file, line), mend='add the closing "')
        line += token.count("\n")
    if opened:
        return _unclosed(suspect or opened[-1], len(opened), file, cut=suspect is None)
    where = max(int(getattr(error, "line", 1) or 1), 1)
    if text.lstrip()[:5].lower() == "(edif":
        return InputError("a form without a keyword", place=Place(file, where), mend="a bracket begins with a word")
    return InputError("this is not an EDIF file", place=Place(file, where), mend="it must begin with (edif ...)")


def _unclosed(form: tuple[str, int], count: int, file: str, cut: bool) -> InputError:
    keyword, line = form
    lacking = f"{count} closing bracket{'s are' if count > 1 else ' is'} missing at the end"
    mend = (
        "the file is cut short: export it again" if cut else "close it before the next form, or export the file again"
    )
    said = f"the form ({keyword[:40]} that begins here is never closed ({lacking})"
    return InputError(said, place=Place(file, line), mend=mend)


def string(item: str) -> str:
    """The text of a string token: quotes off, line breaks dropped, ``%…%`` decimal codes replaced by characters."""
    body = item[1:-1] if item.startswith('"') else item
    body = body.replace("\r", "").replace("\n", "")

    def codes(match: re.Match[str]) -> str:
        numbers = match.group(1).split()
        if not all(n.isdigit() and int(n) < 0x110000 for n in numbers):
            return match.group()
        return "".join(chr(int(n)) for n in numbers)

    return _ESCAPE.sub(codes, body) if "%" in body else body


def identifier(atom: str) -> str:
    """The key of an identifier: case-insensitive, a leading & taken off."""
    return atom.removeprefix("&").lower()


def plain(atom: str) -> str:
    """The identifier as written, a leading & taken off."""
    return atom.removeprefix("&")
