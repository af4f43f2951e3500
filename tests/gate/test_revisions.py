"""Comparisons of folders, saved reports and git revisions, and all that can be wrong with them."""

from __future__ import annotations

import hashlib
import json
import os
import shutil
from pathlib import Path

import pytest

from netaudit.cli.main import main
from netaudit.gate.checkout import Revision
from netaudit.gate.git import Repository
from tests.gate.helper import HOT, VENT, commit, git, repository

TABLE = '[CHIP]\nkind = "resistor"\n[CHIP.ratings]\nP_tot = "250mW"\n'


@pytest.fixture
def repo(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    made = repository(tmp_path / "repo")
    monkeypatch.chdir(made)
    return made


def record(capsys: pytest.CaptureFixture[str], *arguments: str) -> tuple[int, dict[str, list[dict[str, object]]]]:
    status = main(["compare", "--format", "json", *arguments])
    out, err = capsys.readouterr()
    assert err == ""
    found: dict[str, list[dict[str, object]]] = json.loads(out)
    return status, found


def refused(capsys: pytest.CaptureFixture[str], *arguments: str) -> str:
    """The one line with which a comparison is refused."""
    assert main(["compare", *arguments]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert len(err.splitlines()) == 1
    return err


def snapshot(folder: Path) -> dict[str, tuple[str, int]]:
    """Every file of a work tree and of its git folder, with the time of its last change."""
    return {
        str(p.relative_to(folder)): (hashlib.sha256(p.read_bytes()).hexdigest(), p.stat().st_mtime_ns)
        for p in folder.rglob("*")
        if p.is_file()
    }


def board(text: str, name: str = "vent") -> None:
    Path("boards", f"{name}.netlist").write_text(text, encoding="utf-8")


class TestSides:
    def test_a_revision_against_the_work_tree_and_against_another(
        self, repo: Path, capsys: pytest.CaptureFixture[str]
    ) -> None:
        board(HOT)
        status, found = record(capsys, "HEAD", ".")
        assert status == 1
        assert {f["device"] for f in found["new"] if f["level"] == "error"} == {"R1", "D1"}
        assert {f["file"] for f in found["new"]} == {"boards/vent.netlist"}
        commit(repo, "hot")
        assert record(capsys, "HEAD~1", "HEAD")[0] == 1
        status, found = record(capsys, "HEAD", "HEAD~1")
        assert (status, len([f for f in found["mended"] if f["level"] == "error"])) == (0, 2)

    def test_nothing_of_the_repository_is_touched(self, repo: Path, capsys: pytest.CaptureFixture[str]) -> None:
        board(HOT)
        before = snapshot(repo)
        record(capsys, "main", ".")
        record(capsys, "main", "HEAD")
        assert snapshot(repo) == before

    @pytest.mark.usefixtures("repo")
    def test_no_report_names_the_folder_of_the_revision(self, capsys: pytest.CaptureFixture[str]) -> None:
        board("netlist 1\nground GND\nR1 resistor 5V 1:A 2:B\n")
        git(Path(), "commit", "-qam", "broken")
        assert main(["compare", "HEAD~1", "HEAD", "--format", "json"]) == 2
        out, err = capsys.readouterr()
        assert err.startswith("boards/vent.netlist:3:")
        assert "/tmp" not in out + err
        assert json.loads(out)["boards"]["broken"][0]["error"] in err

    def test_folders_and_saved_reports(
        self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        monkeypatch.chdir(tmp_path)
        for name, text in (("old", VENT), ("new", HOT)):
            Path(name).mkdir()
            Path(name, "vent.netlist").write_text(text, encoding="utf-8")
        assert record(capsys, "old", "new")[0] == 1
        monkeypatch.chdir(tmp_path / "old")
        main(["audit", "vent.netlist", "--format", "json", "-o", "../old.json"])
        monkeypatch.chdir(tmp_path)
        status, by_report = record(capsys, "old.json", "new")
        assert status == 1
        _, by_folder = record(capsys, "old", "new")
        assert by_report["new"] == by_folder["new"]
        assert by_report["parts"] == by_folder["parts"]
        monkeypatch.chdir(tmp_path / "new")
        main(["audit", "vent.netlist", "--format", "json", "-o", "../new.json"])
        monkeypatch.chdir(tmp_path)
        status, both = record(capsys, "old.json", "new.json")
        assert status == 1
        assert both["new"] == by_folder["new"]
        assert both["stress"] == by_folder["stress"]

    @pytest.mark.usefixtures("repo")
    def test_part_tables_and_includes_come_along(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("parts").mkdir()
        Path("parts", "own parts.toml").write_text(TABLE, encoding="utf-8")
        Path("boards", "supply.inc").write_text(
            "netlist 1\nPS1 supply 12V 10.8V..13.2V +:VIN -:GND\n", encoding="utf-8"
        )
        text = VENT.replace("PS1 supply 12V 10.8V..13.2V I_max=1A +:VIN -:GND\n", 'include "supply.inc"\n')
        board(text.replace("P_tot=250mW", "part=CHIP") + 'parts "../parts/own parts.toml"\n')
        Path("big.bin").write_bytes(bytes(100_000))
        git(Path(), "add", "-A")
        git(Path(), "commit", "-qm", "split")
        Path("parts", "own parts.toml").write_text(TABLE.replace("250mW", "100mW"), encoding="utf-8")
        status, found = record(capsys, "HEAD", ".")
        assert status == 1
        assert {f["rule"] for f in found["new"] if f["level"] == "error"} == {"stress/power"}
        changes = found["parts"]["changed"][0]["changes"]  # type: ignore[call-overload]  # an object
        assert changes == {"rating P_tot": {"from": "0.25", "to": "0.1"}}
        files = Revision.read(Repository("."), "HEAD").closure(["boards/vent.netlist"])
        assert set(files) == {"boards/vent.netlist", "boards/supply.inc", "parts/own parts.toml"}

    def test_the_project_may_lie_in_a_folder(self, repo: Path, capsys: pytest.CaptureFixture[str]) -> None:
        git(repo, "rm", "-q", "-r", "--cached", ".")
        (repo / "hardware").mkdir()
        shutil.move("boards", "hardware/boards")
        shutil.move("netaudit.toml", "hardware/netaudit.toml")
        commit(repo, "moved")
        os.chdir("hardware")
        board(HOT)
        status, found = record(capsys, "HEAD", ".")
        assert (status, {f["file"] for f in found["new"]}) == (1, {"boards/vent.netlist"})
        os.chdir("boards")
        status, again = record(capsys, "HEAD", ".")
        assert status == 1
        assert [f["message"] for f in again["new"]] == [f["message"] for f in found["new"]]

    @pytest.mark.usefixtures("repo")
    def test_without_a_project_file_every_netlist_is_a_board(self, capsys: pytest.CaptureFixture[str]) -> None:
        git(Path(), "rm", "-q", "netaudit.toml")
        git(Path(), "commit", "-qm", "none")
        board(HOT)
        status, found = record(capsys, "HEAD", ".")
        assert (status, {f["board"] for f in found["new"]}) == (1, {"boards/vent.netlist"})

    @pytest.mark.usefixtures("repo")
    def test_settings_of_the_head_and_of_the_command_line(self, capsys: pytest.CaptureFixture[str]) -> None:
        board(HOT.replace("430R", "820R"))
        assert record(capsys, "HEAD", ".")[0] == 0
        assert record(capsys, "HEAD", ".", "--stress-step", "10%")[0] == 1
        Path("netaudit.toml").write_text(
            'boards = ["boards/*.netlist"]\n[gate]\nstress-step = "10%"\n', encoding="utf-8"
        )
        assert record(capsys, "HEAD", ".")[0] == 1
        assert record(capsys, "HEAD", ".", "--stress-step", "500%")[0] == 0
        assert "--step 9" in refused(capsys, "HEAD", ".", "--step", "9V")
        assert (
            record(capsys, "HEAD", ".", "--stress-step", "500%", "--policy", "cautious", "--fail-on", "warning")[0] == 1
        )

    @pytest.mark.usefixtures("repo")
    def test_a_stale_waiver_that_was_there_before_does_not_block(self, capsys: pytest.CaptureFixture[str]) -> None:
        waiver = 'format = 1\n[[waiver]]\nrule = "stress/power"\nboard = "boards/vent.netlist"\nparts = ["R9"]\nreason = "r"\n'
        Path("w.toml").write_text(waiver, encoding="utf-8")
        Path("netaudit.toml").write_text('boards = ["boards/*.netlist"]\nwaivers = ["w.toml"]\n', encoding="utf-8")
        status, found = record(capsys, "HEAD", ".", "--fail-on", "warning")
        assert (status, [f["rule"] for f in found["new"]]) == (1, ["gate/stale-waiver"])
        git(Path(), "add", "-A")
        git(Path(), "commit", "-qm", "waiver")
        board(VENT + "# touched\n")
        status, found = record(capsys, "HEAD", ".", "--fail-on", "warning")
        assert (status, found["new"]) == (0, [])

    @pytest.mark.usefixtures("repo")
    def test_reports_of_a_comparison(self, capsys: pytest.CaptureFixture[str]) -> None:
        board(HOT)
        formats = ("sarif", "junit", "markdown", "csv", "json")
        assert main(["compare", "HEAD", ".", *[f"--report={name}=../out.{name}" for name in formats]]) == 1
        assert capsys.readouterr().out.startswith("FAIL")
        texts = {name: Path(f"../out.{name}").read_text(encoding="utf-8") for name in formats}
        (run,) = json.loads(texts["sarif"])["runs"]
        assert {r["baselineState"] for r in run["results"] if r["level"] == "error"} == {"new"}
        assert {r["baselineState"] for r in run["results"]} <= {"new", "unchanged"}
        assert texts["junit"].count("<failure") == 2
        assert texts["markdown"].startswith("### netaudit: FAIL: ")
        assert json.loads(texts["json"])["schema"] == "netaudit/compare/1"
        assert main(["compare", ".", "HEAD", "--report=sarif=../out.sarif"]) == 0
        (run,) = json.loads(Path("../out.sarif").read_text(encoding="utf-8"))["runs"]
        assert {r["baselineState"] for r in run["results"] if r["level"] == "error"} == {"absent"}


class TestWorkersAndCache:
    @pytest.mark.usefixtures("repo")
    def test_same_findings_with_workers_and_with_a_cache(self, capsys: pytest.CaptureFixture[str]) -> None:
        board(HOT)
        board(VENT, "second")
        plain = record(capsys, "HEAD", ".")
        assert record(capsys, "HEAD", ".", "--workers", "2") == plain
        assert record(capsys, "HEAD", ".", "--cache", "../cache") == plain
        assert record(capsys, "HEAD", ".", "--cache", "../cache") == plain
        # the cache of a comparison serves audits and the other way round
        assert len(list(Path("../cache").glob("*-*.json"))) == 3
        main(["audit", "--cache", "../cache", "--format", "json"])
        assert len(list(Path("../cache").glob("*-*.json"))) == 3


class TestRefused:
    """One line each."""

    @pytest.mark.usefixtures("repo")
    def test_a_revision_that_does_not_exist(self, capsys: pytest.CaptureFixture[str]) -> None:
        assert "no revision, folder or report mian; did you mean main?" in refused(capsys, "mian", ".")
        assert "no revision, folder or report HEAD~7" in refused(capsys, "HEAD~7", ".")
        assert "there is no revision" in refused(capsys, "main:boards", ".")
        assert "there is no revision" in refused(capsys, "", ".")

    def test_an_option_is_no_revision(self, repo: Path, capsys: pytest.CaptureFixture[str]) -> None:
        assert "there is no revision" in refused(capsys, "--", "--all", ".")

    def test_no_repository(
        self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        monkeypatch.chdir(tmp_path)
        monkeypatch.setenv("GIT_CEILING_DIRECTORIES", str(tmp_path.parent))
        assert "no folder or file, and there are no revisions here: not a git repository" in refused(
            capsys, "HEAD", "."
        )
        monkeypatch.setenv("PATH", "")
        assert "git cannot be run" in refused(capsys, "HEAD", ".")

    def test_a_repository_without_commits(
        self, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        git(tmp_path, "init", "-q")
        monkeypatch.chdir(tmp_path)
        assert "this repository has no commits; commit first" in refused(capsys, "HEAD", ".")

    def test_a_shallow_clone(
        self, repo: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        first = git(repo, "rev-parse", "HEAD")
        board(HOT)
        commit(repo, "second")
        git(tmp_path, "clone", "-q", "--depth=1", f"file://{repo}", "shallow")
        monkeypatch.chdir(tmp_path / "shallow")
        assert "not in this shallow clone; fetch it first (git fetch --depth=1" in refused(capsys, "HEAD~1", ".")
        assert "not in this shallow clone" in refused(capsys, first, ".")
        assert record(capsys, "HEAD", ".")[0] == 0

    def test_work_trees(
        self, repo: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        git(repo, "worktree", "add", "-q", "--detach", str(tmp_path / "second"))
        monkeypatch.chdir(tmp_path / "second")
        board(HOT)
        assert record(capsys, "HEAD", ".")[0] == 1
        assert record(capsys, "main", ".")[0] == 1
        shutil.move(repo, tmp_path / "elsewhere")
        said = refused(capsys, "main", ".")
        assert "there are no revisions here: not a git repository" in said

    def test_objects_that_are_missing(self, repo: Path, capsys: pytest.CaptureFixture[str]) -> None:
        oid = git(repo, "rev-parse", "HEAD:boards/vent.netlist")
        (repo / ".git" / "objects" / oid[:2] / oid[2:]).unlink()
        assert f"object {oid} is not in this repository" in refused(capsys, "HEAD", ".")

    @pytest.mark.parametrize(
        ("text", "said"),
        [
            (
                '{"schema": "netaudit/audit/2"}',
                "a report of a newer netaudit (schema netaudit/audit/2); update netaudit",
            ),
            ('{"schema": "netaudit/audit-set/7"}', "a report of a newer netaudit"),
            ('{"schema": "netaudit/lint/1"}', "no audit report: its schema is netaudit/lint/1"),
            ("{}", "it states no schema"),
            ("[1]", "it states no schema"),
            ("{", "no JSON"),
            ("[" * 100_000, "no JSON"),
            ('{"schema": "netaudit/audit/1", "netlist": "x"}', "no whole report: the field 'policy'"),
            ('{"schema": "netaudit/audit-set/1", "boards": [{"netlist": "x", "schema": "netaudit/audit/2"}]}', "newer"),
            ('{"schema": "netaudit/audit-set/1", "boards": 5}', "no whole report"),
        ],
    )
    @pytest.mark.usefixtures("repo")
    def test_reports(self, text: str, said: str, capsys: pytest.CaptureFixture[str]) -> None:
        Path("old.json").write_text(text, encoding="utf-8")
        assert said in refused(capsys, "old.json", ".")

    @pytest.mark.usefixtures("repo")
    def test_a_wrong_project_file_in_a_revision(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("netaudit.toml").write_text("bords = []\n", encoding="utf-8")
        git(Path(), "commit", "-qam", "wrong")
        Path("netaudit.toml").write_text('boards = ["boards/*.netlist"]\n', encoding="utf-8")
        assert refused(capsys, "HEAD", ".").startswith("HEAD:netaudit.toml:1:1: ")


class TestLargeFilesAndSubmodules:
    @pytest.mark.usefixtures("repo")
    def test_pointers_to_large_files(self, repo: Path, capsys: pytest.CaptureFixture[str]) -> None:
        oid = hashlib.sha256(HOT.encode()).hexdigest()
        pointer = f"version https://git-lfs.github.com/spec/v1\noid sha256:{oid}\nsize {len(HOT)}\n"
        board(pointer)
        git(repo, "commit", "-qam", "pointer")
        board(HOT)
        assert main(["compare", "HEAD", ".", "--format", "json"]) == 1
        out = capsys.readouterr().out
        assert "boards/vent.netlist could not be read in HEAD: all of it counts as new" in out
        assert main(["compare", "HEAD~1", "HEAD"]) == 2
        err = capsys.readouterr().err
        assert err == (
            "boards/vent.netlist only points at a large file kept elsewhere; fetch its content first: git lfs pull\n"
        )
        store = repo / ".git" / "lfs" / "objects" / oid[:2] / oid[2:4]
        store.mkdir(parents=True)
        (store / oid).write_text(HOT, encoding="utf-8")
        status, found = record(capsys, "HEAD", ".")
        assert (status, [f for f in found["new"] if f["level"] == "error"]) == (0, [])

    def test_submodules(
        self, repo: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
    ) -> None:
        library = tmp_path / "library"
        library.mkdir()
        git(library, "init", "-q")
        (library / "parts.toml").write_text(TABLE, encoding="utf-8")
        first = commit(library, "parts")
        git(repo, "submodule", "add", "-q", str(library), "lib")
        board(VENT.replace("P_tot=250mW", "part=CHIP") + 'parts "../lib/parts.toml"\n')
        commit(repo, "library")
        (library / "parts.toml").write_text(TABLE.replace("250mW", "100mW"), encoding="utf-8")
        commit(library, "weaker parts")
        git(repo / "lib", "pull", "-q", "origin", "main")
        status, found = record(capsys, "HEAD", ".")
        assert status == 1
        assert {f["rule"] for f in found["new"] if f["level"] == "error"} == {"stress/power"}
        git(tmp_path, "clone", "-q", str(repo), "copy")
        monkeypatch.chdir(tmp_path / "copy")
        assert main(["compare", "HEAD~1", "HEAD"]) == 2
        err = capsys.readouterr().err
        assert len(err.splitlines()) == 1
        assert f"reads lib/parts.toml, but commit {first[:12]} of the submodule lib is not here" in err

    @pytest.mark.usefixtures("repo")
    def test_a_link_leads_to_what_it_names_and_never_out(self, capsys: pytest.CaptureFixture[str]) -> None:
        Path("boards", "link.netlist").symlink_to("vent.netlist")
        Path("boards", "secret.netlist").symlink_to("/etc/hostname")
        git(Path(), "add", "-A")
        git(Path(), "commit", "-qm", "links")
        files = Revision.read(Repository("."), "HEAD").closure(["boards/link.netlist", "boards/secret.netlist"])
        assert files["boards/link.netlist"] == VENT.encode()
        assert files["boards/secret.netlist"] == b"/etc/hostname"
