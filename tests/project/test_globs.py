"""Patterns of boards and tables."""

from __future__ import annotations

from pathlib import Path

import pytest

from netaudit.failure import InputError
from netaudit.project.globs import matching, named_files
from netaudit.project.project import Project

TREE = ["a.netlist", "b.netlist", "old/a.netlist", "old/x/c.netlist", ".git/d.netlist", "old/.e.netlist", "[f].netlist"]


@pytest.mark.parametrize(
    ("patterns", "expected"),
    [
        (["*.netlist"], ["[f].netlist", "a.netlist", "b.netlist"]),
        (["**/*.netlist"], ["[f].netlist", "a.netlist", "b.netlist", "old/a.netlist", "old/x/c.netlist"]),
        (["**"], ["[f].netlist", "a.netlist", "b.netlist", "old/a.netlist", "old/x/c.netlist"]),
        (["old/**/c.netlist"], ["old/x/c.netlist"]),
        (["old/**/a.netlist"], ["old/a.netlist"]),
        (["*/*.netlist"], ["old/a.netlist"]),
        (["?.netlist", "!b*"], ["a.netlist"]),
        (["[ab].netlist"], ["a.netlist", "b.netlist"]),
        (["[!b].netlist"], ["a.netlist"]),
        (["[a-b].netlist"], ["a.netlist", "b.netlist"]),
        (["./a.netlist"], ["a.netlist"]),
        ([".git/*"], [".git/d.netlist"]),
        (["A.netlist"], []),
    ],
)
def test_what_a_pattern_names(patterns: list[str], expected: list[str]) -> None:
    assert list(matching(TREE, patterns)) == expected


@pytest.fixture
def project(tmp_path: Path) -> Project:
    for name in TREE:
        (tmp_path / name).parent.mkdir(parents=True, exist_ok=True)
        (tmp_path / name).write_text("netlist 1\n", encoding="utf-8")
    return Project(str(tmp_path / "netaudit.toml"), str(tmp_path))


@pytest.mark.parametrize(
    "patterns",
    [["*.netlist"], ["**/*.netlist"], ["old/**/*.netlist", "a.netlist"], ["*/*.netlist"], [".git/*"], ["a.netlist"]],
)
def test_files_on_disk_are_those_of_a_listing(project: Project, patterns: list[str]) -> None:
    assert sorted(named_files(project, "boards", patterns)) == list(matching(TREE, patterns))


def test_tables_keep_the_order_in_which_they_are_named(project: Project) -> None:
    assert named_files(project, "parts", ["b.netlist", "a.netlist"]) == ("b.netlist", "a.netlist")


@pytest.mark.parametrize(
    ("pattern", "said"), [("../*.netlist", "outside"), ("/etc/*", "outside"), ("*.edf", "no file matches '*.edf'")]
)
def test_what_names_nothing_or_leads_out_is_refused(project: Project, pattern: str, said: str) -> None:
    with pytest.raises(InputError, match="boards: ") as refused:
        named_files(project, "boards", [pattern])
    assert said in str(refused.value)


def test_a_link_that_leads_out_is_refused(project: Project, tmp_path_factory: pytest.TempPathFactory) -> None:
    outside = tmp_path_factory.mktemp("outside") / "secret.netlist"
    outside.write_text("netlist 1\n", encoding="utf-8")
    (Path(project.folder) / "link.netlist").symlink_to(outside)
    with pytest.raises(InputError, match="leads out"):
        named_files(project, "boards", ["*.netlist"])
