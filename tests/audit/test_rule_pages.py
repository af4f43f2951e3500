"""The boards on the pages of the rules: what fails fails by that rule, what passes does not."""

from __future__ import annotations

import inspect
import textwrap

import pytest

import netaudit
from netaudit.audit.rules import PAGES, RULES

_HEAD = "netlist 1\nground GND\n"


def example(name: str, which: str) -> str:
    """The netlist below ``fails:`` or ``passes:`` on a rule's page, empty when there is none."""
    page = inspect.cleandoc(PAGES[name])
    if f"    {which}:\n" not in page:
        return ""
    lines = page.split(f"    {which}:\n", 1)[1].splitlines()
    inside = [line for line in lines[: lines.index("")] if line] if "" in lines else lines
    return textwrap.dedent("\n".join(inside)) + "\n"


#: nothing but a fault makes a good circuit unsolvable; pin limits need a part table; packages are not opened yet
_WITHOUT = {"point/none-found", "stress/pin-voltage", "stress/package-current"}
_WITH = [name for name, rule in RULES.items() if rule.stage in ("stress", "point", "expect") and name not in _WITHOUT]


@pytest.mark.parametrize("name", _WITH)
def test_board_that_fails(name: str) -> None:
    findings = [f for f in netaudit.loads(_HEAD + example(name, "fails")).audit().findings if f.rule == name]
    assert findings
    assert {f.level for f in findings} == {RULES[name].level}


@pytest.mark.parametrize("name", _WITH)
def test_board_that_passes(name: str) -> None:
    text = example(name, "passes")
    assert text
    assert [f for f in netaudit.loads(_HEAD + text).audit().findings if f.rule == name] == []


@pytest.mark.parametrize("name", _WITH)
def test_page_names_its_source_and_what_mends(name: str) -> None:
    assert "Source: " in PAGES[name]
    assert "Mend: " in PAGES[name]
