"""The house: imports go one way, files stay small, heavy libraries are imported where they are needed only."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
PACKAGE = ROOT / "netaudit"
ROOMS = [
    "quantities",
    "syntax",
    "project",
    "parts",
    "devices",
    "circuit",
    "solve",
    "audit",
    "report",
    "interface",
    "gate",
    "cli",
]
HEAVY = {"scipy", "networkx", "rich", "distributed"}
TOP = {"README.md", "DEVELOPERS.md", "pyproject.toml", "netaudit", "grammar", "tests", "sample_netlists", "LICENSE"}
FILES = sorted(PACKAGE.rglob("*.py"))


def room(module: str) -> int:
    """The floor of a module: place, failure and finding stand above all rooms."""
    part = module.split(".")[1] if "." in module else ""
    return ROOMS.index(part) if part in ROOMS else -1


def imports(path: Path) -> list[tuple[str, int]]:
    """Imported modules with the nesting depth of the import (0: at the top of the file)."""
    tree = ast.parse(path.read_text(encoding="utf-8"))
    found = []
    for node in ast.walk(tree):
        if isinstance(node, ast.ImportFrom) and node.module:
            found.append((node.module, node.col_offset))
        elif isinstance(node, ast.Import):
            found += [(a.name, node.col_offset) for a in node.names]
    return found


@pytest.mark.parametrize("path", FILES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_imports_go_one_way(path: Path) -> None:
    relative = path.relative_to(PACKAGE)
    if relative.name in ("__init__.py", "__main__.py") and len(relative.parts) == 1:
        return
    own = room("netaudit." + ".".join(relative.with_suffix("").parts))
    for module, _ in imports(path):
        if module.startswith("netaudit."):
            assert room(module) <= own, f"{relative} imports {module}"


@pytest.mark.parametrize("path", FILES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_heavy_libraries_are_imported_inside_functions(path: Path) -> None:
    for module, depth in imports(path):
        assert module.split(".")[0] not in HEAVY or depth > 0, f"{path.name}: {module}"


@pytest.mark.parametrize("path", FILES, ids=lambda p: str(p.relative_to(PACKAGE)))
def test_files_stay_readable(path: Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 420


def test_the_top_level_holds_what_is_prescribed_and_nothing_else() -> None:
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=False)
    if listed.returncode != 0:
        pytest.skip("not a git checkout")
    top = {line.split("/")[0] for line in listed.stdout.splitlines()}
    assert {name for name in top if not name.startswith(".")} <= TOP


def test_lint_starts_without_the_heavy_libraries_and_the_solver() -> None:
    code = (
        "import sys; from netaudit.cli.main import main; "
        f"main(['lint', {str(ROOT / 'sample_netlists' / 'power_entry.netlist')!r}]); "
        "solver = {m for m in sys.modules if m.startswith('netaudit.solve.')}; "
        f"print(sorted(({HEAVY!r} & set(sys.modules)) | solver), file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stderr.strip() == "[]"


def test_every_rule_file_is_registered_and_has_a_page() -> None:
    from netaudit.audit.rules import PAGES, RULES

    files = {p.stem for p in (PACKAGE / "audit" / "rules").glob("*.py")} - {"__init__"}
    assert files == {name.replace("/", "_").replace("-", "_") for name in RULES}
    assert all(len(page) > 80 for page in PAGES.values())
