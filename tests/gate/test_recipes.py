"""The hooks and the lines for checks of a merge, run as they stand in a fresh clone."""

from __future__ import annotations

import re
import shlex
import subprocess
import sys
from pathlib import Path

import pytest

from tests.gate.helper import HOT, VENT, commit, git, repository

ROOT = Path(__file__).resolve().parents[2]


def run(line: str, folder: Path) -> subprocess.CompletedProcess[str]:
    """A line of the README, by this interpreter."""
    words = shlex.split(line)
    assert words[0] == "netaudit"
    return subprocess.run(
        [sys.executable, "-m", "netaudit", *words[1:]], cwd=folder, capture_output=True, text=True, check=False
    )


def hooks() -> dict[str, dict[str, str]]:
    """The hooks by their id; the file is simple enough to be read line by line."""
    found: dict[str, dict[str, str]] = {}
    entry: dict[str, str] = {}
    for line in (ROOT / ".pre-commit-hooks.yaml").read_text(encoding="utf-8").splitlines():
        key, _, value = line.lstrip("- ").partition(": ")
        if line.startswith("- id: "):
            entry = found.setdefault(value, {})
        elif not line.startswith("#"):
            entry[key] = value
    return found


@pytest.fixture
def clone(tmp_path: Path) -> Path:
    """A clone whose last commit makes the board worse than the branch it is to be merged into."""
    upstream = repository(tmp_path / "upstream")
    git(tmp_path, "clone", "-q", str(upstream), "clone")
    folder = tmp_path / "clone"
    (folder / "boards" / "vent.netlist").write_text(HOT, encoding="utf-8")
    commit(folder, "a smaller resistor")
    return folder


def test_lines_of_the_readme_for_a_merge(clone: Path) -> None:
    section = (ROOT / "README.md").read_text(encoding="utf-8").split("## Only what a change made worse", 1)[1]
    lines = re.findall(r"```bash\n(.*?)```", section, re.DOTALL)[1].splitlines()
    audit, compare = (run(line, clone) for line in lines)
    assert (audit.returncode, compare.returncode) == (1, 1), audit.stderr + compare.stderr
    for name in ("netaudit.sarif", "netaudit.xml", "merge.md"):
        assert (clone / name).stat().st_size > 100
    assert "stress/power" in (clone / "merge.md").read_text(encoding="utf-8")


def test_hooks_run_on_a_clone(clone: Path) -> None:
    found = hooks()
    assert set(found) == {"netaudit", "netaudit-lint"}
    whole = run(found["netaudit"]["entry"], clone)
    assert (whole.returncode, found["netaudit"]["pass_filenames"]) == (1, "false")
    one = run(found["netaudit-lint"]["entry"] + " boards/vent.netlist", clone)
    assert one.returncode == 0, one.stdout + one.stderr
    assert re.search(found["netaudit-lint"]["files"], "vent.netlist")
    for name in ("a.netlist", "netaudit.toml", "parts.csv", "b.edf"):
        assert re.search(found["netaudit"]["files"], name)


def test_what_init_offers_names_a_hook_that_is_there(tmp_path: Path) -> None:
    (tmp_path / "vent.netlist").write_text(VENT, encoding="utf-8")
    offered = run("netaudit init", tmp_path).stdout
    (name,) = re.findall(r"- id: (\S+)", offered)
    assert name in hooks()
