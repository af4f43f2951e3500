"""Files: encoding, includes below the project's root, chains, hashes."""

from __future__ import annotations

import gc
import hashlib
import os
from pathlib import Path

import pytest

from netaudit.failure import InputError
from netaudit.syntax.reader import read_netlist
from netaudit.syntax.statements import DeviceStatement, PartsStatement


def write(path: Path, text: str) -> str:
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(text, encoding="utf-8", newline="")
    return str(path)


def refused(path: str, **options: str) -> str:
    with pytest.raises(InputError) as caught:
        read_netlist(path, **options)
    assert "\n" not in str(caught.value)
    return str(caught.value)


def test_a_byte_order_mark_and_windows_line_ends(tmp_path: Path) -> None:
    path = tmp_path / "a.netlist"
    path.write_bytes(b"\xef\xbb\xbfnetlist 1\r\nground GND\r\n")
    assert len(read_netlist(str(path)).statements) == 1


@pytest.mark.parametrize(
    ("data", "words"),
    [
        (b"netlist 1\nground \xff\n", "a.netlist:2:1: this is not UTF-8"), (b"\x7fELF\x02\x01\x00\x00", "control character"),
        (b"\xff\xfen\x00e\x00", "not UTF-8"), (b"", "empty"), (b"netlist 1\nR1 \x1b[2J", "control character (code 27)"),
        (b"\x89PNG\r\n\x1a\n", "not UTF-8"),
    ],
)  # fmt: skip
def test_bytes_that_are_no_netlist(tmp_path: Path, data: bytes, words: str) -> None:
    path = tmp_path / "a.netlist"
    path.write_bytes(data)
    said = refused(str(path))
    assert words in said
    assert "\x1b" not in said


def test_missing_files_and_folders(tmp_path: Path) -> None:
    assert "nothing.netlist cannot be read" in refused(str(tmp_path / "nothing.netlist"))
    assert "is a folder" in refused(str(tmp_path))
    assert "cannot be read" in refused("a" * 5000)
    assert "no name of a file" in refused("a\0b")
    os.symlink("loop", tmp_path / "loop")
    assert "cannot be read" in refused(write(tmp_path / "a.netlist", 'netlist 1\ninclude "loop"\n'))
    assert "cannot be read" in refused(write(tmp_path / "a.netlist", f'netlist 1\ninclude "{"b" * 5000}"\n'))


def test_included_statements_stand_in_their_place_with_hashes(tmp_path: Path) -> None:
    top = write(tmp_path / "top.netlist", 'netlist 1\nground A\ninclude "sub/one.netlist"\nground C\n')
    one = write(tmp_path / "sub" / "one.netlist", 'netlist 1\nparts "p.toml"\ninclude "two.netlist"\n')
    two = write(tmp_path / "sub" / "two.netlist", "netlist 1\nR1 resistor 1k 1:A 2:C\n")
    netlist = read_netlist(top)
    kinds = [type(s).__name__ for s in netlist.statements]
    assert kinds == ["GroundStatement", "PartsStatement", "DeviceStatement", "GroundStatement"]
    parts, device = netlist.statements[1], netlist.statements[2]
    assert isinstance(parts, PartsStatement)
    assert Path(parts.path).resolve() == (tmp_path / "sub" / "p.toml").resolve()
    assert isinstance(device, DeviceStatement)
    assert [(Path(p.file).name, p.line) for p in device.place.chain] == [("top.netlist", 3), ("one.netlist", 3)]
    read = {Path(name).resolve(): digest for name, digest in netlist.files.items()}
    assert read == {Path(p).resolve(): hashlib.sha256(Path(p).read_bytes()).hexdigest() for p in (top, one, two)}


def test_an_error_inside_an_include_names_the_chain(tmp_path: Path) -> None:
    top = write(tmp_path / "top.netlist", 'netlist 1\ninclude "one.netlist"\n')
    write(tmp_path / "one.netlist", 'netlist 1\n\ninclude "two.netlist"\n')
    for text, line in (("netlist 1\nR1\n", 2), ("ground A\n", 1), ("netlist 1\nblock A B\n", 2)):
        write(tmp_path / "two.netlist", text)
        said = refused(top)
        assert f"two.netlist:{line}:" in said
        assert said.index("one.netlist:3") < said.index("top.netlist:2")
    (tmp_path / "two.netlist").unlink()
    said = refused(top)
    assert "one.netlist:3:9" in said
    assert "two.netlist cannot be read" in said
    assert "top.netlist:2" in said


def test_cycles_and_files_included_twice(tmp_path: Path) -> None:
    a = write(tmp_path / "a.netlist", 'netlist 1\ninclude "b.netlist"\n')
    write(tmp_path / "b.netlist", 'netlist 1\ninclude "./a.netlist"\n')
    said = refused(a)
    assert "includes itself" in said
    assert "b.netlist:2" in said
    write(tmp_path / "b.netlist", "netlist 1\nground GND\n")
    twice = write(tmp_path / "c.netlist", 'netlist 1\ninclude "b.netlist"\ninclude "b.netlist"\n')
    assert len(read_netlist(twice).statements) == 2


def test_a_designator_stands_once_across_files(tmp_path: Path) -> None:
    top = write(tmp_path / "top.netlist", 'netlist 1\nR1 resistor 1k 1:A 2:B\ninclude "one.netlist"\n')
    write(tmp_path / "one.netlist", "netlist 1\nR1 resistor 1k 1:A 2:B\n")
    said = refused(top)
    assert "one.netlist:2" in said
    assert "stands twice (first at" in said


def test_a_block_is_closed_in_its_own_file(tmp_path: Path) -> None:
    top = write(tmp_path / "top.netlist", 'netlist 1\nblock A B\ninclude "one.netlist"\nend\n')
    write(tmp_path / "one.netlist", "netlist 1\nend\n")
    assert "include inside the block" in refused(top)
    write(tmp_path / "top.netlist", 'netlist 1\ninclude "one.netlist"\n')
    assert "end without" in refused(top)


def outside(tmp_path: Path) -> tuple[Path, Path]:
    """A project folder and, beside it, a file that nothing of must be shown."""
    write(tmp_path / "secret.netlist", "netlist 1\nhidden text\n")
    (tmp_path / "project" / "deep").mkdir(parents=True)
    return tmp_path / "project", tmp_path / "secret.netlist"


@pytest.mark.parametrize("statement", ["include", "parts"])
def test_files_outside_the_root_are_not_shown(tmp_path: Path, statement: str) -> None:
    project, secret = outside(tmp_path)
    os.symlink(secret, project / "link.netlist")
    os.symlink(tmp_path, project / "up")
    names = [
        "../secret.netlist",
        str(secret),
        "link.netlist",
        "up/secret.netlist",
        "deep/../../secret.netlist",
        "../none",
    ]
    for name in names:
        said = refused(write(project / "a.netlist", f'netlist 1\n{statement} "{name}"\n'))
        assert "outside the project" in said, name
        assert "--root" in said
        assert "hidden" not in said


def test_the_root_is_the_nearest_configuration_or_the_work_tree(tmp_path: Path) -> None:
    project, _ = outside(tmp_path)
    top = write(project / "deep" / "a.netlist", 'netlist 1\ninclude "../b.netlist"\n')
    write(project / "b.netlist", "netlist 1\nground GND\n")
    assert "outside" in refused(top)
    assert read_netlist(top, root=str(project)).root == str(project.resolve())
    (project / ".git").mkdir()
    assert len(read_netlist(top).statements) == 1
    write(project / "deep" / "netlist.toml", "")
    assert len(read_netlist(top).statements) == 1
    # the nearest netaudit.toml is asked for before any work tree
    write(project / "deep" / "netaudit.toml", "")
    assert "outside" in refused(top)


def test_a_root_that_does_not_hold_the_netlist_refuses_its_includes(tmp_path: Path) -> None:
    top = write(tmp_path / "x" / "a.netlist", 'netlist 1\ninclude "b.netlist"\n')
    write(tmp_path / "x" / "b.netlist", "netlist 1\n")
    (tmp_path / "y").mkdir()
    assert "outside" in refused(top, root=str(tmp_path / "y"))


def test_the_collector_runs_again_after_an_error(tmp_path: Path) -> None:
    assert gc.isenabled()
    refused(write(tmp_path / "a.netlist", "netlist 1\nR1\n"))
    assert gc.isenabled()
