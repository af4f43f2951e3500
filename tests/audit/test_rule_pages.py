"""The boards on the pages of the rules: what fails fails by that rule, what passes does not."""

from __future__ import annotations

import inspect
import textwrap

import pytest

import netaudit
from netaudit.audit.rules import PAGES, RULES
from netaudit.finding import Finding

_HEAD = "netlist 1\nground GND\n"


def example(name: str, which: str) -> str:
    """The netlist below ``fails:`` or ``passes:`` on a rule's page, empty when there is none."""
    page = inspect.cleandoc(PAGES[name])
    if f"    {which}:\n" not in page:
        return ""
    lines = page.split(f"    {which}:\n", 1)[1].splitlines()
    inside = [line for line in lines[: lines.index("")] if line] if "" in lines else lines
    return textwrap.dedent("\n".join(inside)) + "\n"


#: nothing but a fault makes a good circuit unsolvable; the others need a part table or an export beside the netlist
_WITHOUT = {
    "point/none-found",
    "stress/pin-voltage",
    "stress/package-current",
    "part/no-pin-map",
    "graph/clashing-names",
}
_STAGES = ("structure", "stress", "point", "expect")
_WITH = [name for name, rule in RULES.items() if rule.stage in _STAGES and name not in _WITHOUT]


def found(name: str, text: str) -> list[Finding]:
    """The rule's findings on a board: structural rules are asked without solving."""
    board = netaudit.loads(_HEAD + text)
    every = board.lint() if RULES[name].stage == "structure" else board.audit().findings
    return [f for f in every if f.rule == name]


@pytest.mark.parametrize("name", _WITH)
def test_board_that_fails(name: str) -> None:
    findings = found(name, example(name, "fails"))
    assert findings
    assert {f.level for f in findings} == {RULES[name].level}


@pytest.mark.parametrize("name", _WITH)
def test_board_that_passes(name: str) -> None:
    text = example(name, "passes")
    assert text
    assert found(name, text) == []


@pytest.mark.parametrize("name", _WITH)
def test_page_names_its_source_and_what_mends(name: str) -> None:
    assert "Source: " in PAGES[name]
    assert "Mend: " in PAGES[name]
