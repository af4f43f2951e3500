"""Pages of ``explain``: every rule and kind has one that says something."""

from __future__ import annotations

import pytest

from netaudit.audit.rules import RULES
from netaudit.devices import KINDS
from netaudit.report.pages import index_page, kind_page, page, rule_page


@pytest.mark.parametrize("name", RULES)
def test_page_of_a_rule(name: str) -> None:
    text = rule_page(name)
    assert text is not None
    assert text.startswith(f"{name}  ({RULES[name].level})\n\n")
    assert len(text.splitlines()) >= 4
    assert page(name) == text


@pytest.mark.parametrize("name", KINDS)
def test_page_of_a_kind_names_its_keys_and_ratings(name: str) -> None:
    text = kind_page(name)
    assert text is not None
    for word in (*KINDS[name].keys, *KINDS[name].ratings):
        assert f"  {word} " in text or f"  {word}\n" in text


def test_index_lists_all() -> None:
    text = index_page()
    assert [name for name in (*RULES, *KINDS) if f"  {name} " not in text] == []
