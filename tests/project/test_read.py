"""``netaudit.toml``: what is read, what is refused and where, and that the JSON Schema agrees with the reader."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from netaudit.failure import InputError
from netaudit.project.keys import KEYS, OPEN, schema
from netaudit.project.read import find_project, project_at, read_project
from tests.project.schema import SHIPPED, text

FULL = """\
boards = ["boards/*.netlist", "!boards/old.netlist"]
parts = ["parts.toml"]
policy = "cautious"
fail-on = "warning"
require-complete = true
waivers = ["waivers.toml"]
workers = 0
cache = ".cache"

[corners]
values = "nominal"
samples = 64
seed = 7
sequence = "plain"
distribution = "normal"
together = [["R1", "R2"], ["R3", "R4"]]

[gate]
step = "2.5%"
stress-step = 0.2

[export]
anything = "another room checks it"
"""


def write(folder: Path, text: str) -> str:
    path = folder / "netaudit.toml"
    path.write_text(text, encoding="utf-8")
    return str(path)


def test_every_key_arrives(tmp_path: Path) -> None:
    project = read_project(write(tmp_path, FULL))
    assert project.boards == ("boards/*.netlist", "!boards/old.netlist")
    assert (project.parts, project.policy, project.fail_on) == (("parts.toml",), "cautious", "warning")
    assert (project.require_complete, project.workers, project.cache) == (True, 0, ".cache")
    assert project.waivers == ("waivers.toml",)
    corners = project.corners
    assert (corners.values, corners.samples, corners.seed) == ("nominal", 64, 7)
    assert (corners.sequence, corners.distribution) == ("plain", "normal")
    assert corners.together == (("R1", "R2"), ("R3", "R4"))
    assert (project.gate.step, project.gate.stress_step) == (0.025, 0.2)
    assert project.export is not None
    assert project.export.data == {"anything": "another room checks it"}
    assert project.export.place("anything").line == 23


def test_an_empty_file_is_a_project_with_the_defaults(tmp_path: Path) -> None:
    project = read_project(write(tmp_path, ""))
    assert (project.policy, project.fail_on, project.cache) == ("none", "error", None)
    assert (project.gate.step, project.gate.stress_step) == (0.05, None)


@pytest.mark.parametrize(
    ("written", "line", "said"),
    [
        ("\nbords = []\n", 2, "did you mean boards?"),
        ("[corner]\nvalues = 1\n", 1, "did you mean corners?"),
        ("[gate]\n\nstp = 1\n", 3, "did you mean step?"),
        ("[corners]\npolicy = 'x'\n", 2, "stands at the top"),
        ("seed = 1\n", 1, "belongs below [corners]"),
        ("xyzzy = 1\n", 1, "it knows boards"),
        ("boards = 'a'\n", 1, "a list of texts"),
        ("boards = ['a', 1]\n", 1, "a list of texts"),
        ("boards = ['']\n", 1, "a list of texts"),
        ("policy = ''\n", 1, "a text in quotes"),
        ("fail-on = 'fatal'\n", 1, "note, warning or error"),
        ("require-complete = 1\n", 1, "true or false"),
        ("workers = true\n", 1, "a whole number from 0 to 256"),
        ("workers = -1\n", 1, "a whole number"),
        ("workers = 2.5\n", 1, "a whole number"),
        ("[corners]\ntogether = ['R1']\n", 2, "list of lists"),
        ("[gate]\nstep = '5'\n", 2, '"5%" or 0.05'),
        ("[gate]\nstep = -0.1\n", 2, '"5%" or 0.05'),
        ("[gate]\nstep = 'five%'\n", 2, '"5%" or 0.05'),
        ("[gate]\nstep = nan\n", 2, '"5%" or 0.05'),
        ("gate = 5\n", 1, "write [gate]"),
        ("export = 5\n", 1, "write [export]"),
        ("boards = [\n", 1, "not TOML"),
        ("policy = 'a'\npolicy = 'b'\n", 2, "not TOML"),
    ],
)
def test_what_is_wrong_is_refused_with_its_line(tmp_path: Path, written: str, line: int, said: str) -> None:
    with pytest.raises(InputError) as refused:
        read_project(write(tmp_path, written))
    assert said in str(refused.value)
    assert refused.value.place is not None
    assert refused.value.place.line == line
    assert "\n" not in str(refused.value)


def test_a_file_that_is_not_text_is_refused(tmp_path: Path) -> None:
    (tmp_path / "netaudit.toml").write_bytes(b"policy = '\xff'\n")
    with pytest.raises(InputError, match="UTF-8"):
        project_at(str(tmp_path))
    (tmp_path / "netaudit.toml").unlink()
    (tmp_path / "netaudit.toml").symlink_to("nowhere")
    with pytest.raises(InputError, match="cannot be read"):
        project_at(str(tmp_path))


def test_the_nearest_project_upwards_counts(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    write(tmp_path, 'policy = "own.toml"\n')
    deep = tmp_path / "a" / "b"
    deep.mkdir(parents=True)
    found = find_project(str(deep))
    assert found is not None
    assert found.policy == str(tmp_path / "own.toml")
    monkeypatch.chdir(tmp_path)
    near = find_project(".")
    assert near is not None
    assert (near.file, near.policy) == ("netaudit.toml", "own.toml")


def test_the_shipped_schema_is_the_one_of_the_reader() -> None:
    assert SHIPPED.read_text(encoding="utf-8") == text()
    jsonschema.Draft202012Validator.check_schema(schema())


VALUES: list[Any] = [
    "a", "", "5%", "5", "error", "worst", "sobol", "normal", 0, 1, 300, -1, 0.05, 11.0, True, False, [], ["a"], [""], [1],
    [["a"]], [[1]], {}, {"a": 1},
]  # fmt: skip


def toml(value: Any) -> str:
    if isinstance(value, dict):
        return "{" + ", ".join(f"{k} = {toml(v)}" for k, v in value.items()) + "}"
    return json.dumps(value)


@pytest.mark.parametrize("section", [s for s in KEYS if s not in OPEN])
def test_the_schema_takes_what_the_reader_takes_and_nothing_else(tmp_path: Path, section: str) -> None:
    validator = jsonschema.Draft202012Validator(schema())
    for name in (*KEYS[section], "unheard"):
        for value in VALUES:
            inner = value if not name else {name: value}
            content = {section: inner} if section else inner
            try:
                read_project(write(tmp_path, "".join(f"{k} = {toml(v)}\n" for k, v in content.items())))
                read = True
            except InputError:
                read = False
            assert validator.is_valid(content) == read, (section, name, value)


def test_the_schema_takes_a_full_file() -> None:
    import tomllib

    content = tomllib.loads(FULL)
    # what stands in an open section is checked by the room that reads it
    content["export"] = {"not-fitted": ["DNP"]}
    jsonschema.Draft202012Validator(schema()).validate(content)
