"""Machine-readable reports: against their standards, their golden files, and hostile content."""

from __future__ import annotations

import csv
import io
import json
import xml.etree.ElementTree as ET
from dataclasses import replace
from pathlib import Path
from typing import Any

import jsonschema
import pytest

import netaudit.report.json_text as json_text
from netaudit.audit.batch import Batch, BoardResult
from netaudit.finding import Finding
from netaudit.report import sarif
from netaudit.report.csv_text import COLUMNS
from netaudit.report.formats import FORMATS
from netaudit.report.markdown import plain
from netaudit.report.provenance import uri
from tests.report.machine import ENDINGS, HERE, VENT, batch, board, golden, report, same_text

#: the OASIS schema (SARIF 2.1.0 with errata 01, see data/README.md) is a draft-04 schema
OASIS = json.loads((HERE / "data" / "sarif-2.1.0.json").read_text(encoding="utf-8"))
SHIPPED = json.loads((Path(json_text.__file__).parent / "schemas" / "audit-1.schema.json").read_text(encoding="utf-8"))
CAUTION = "no qualified review"


@pytest.fixture(scope="module")
def made() -> Batch:
    return batch()


def hostile(text: str) -> Batch:
    """A board whose every name is the text."""
    finding = Finding("part/unknown", "error", text, device=text, net=text, mode=text, file=text, line=0)
    plain_board = board("x.netlist", VENT)
    assert plain_board.audit is not None
    rows = tuple(replace(p, name=text, part=text) for p in plain_board.audit.parts[:1])
    stresses = tuple(replace(s, device=text, mode=text) for s in plain_board.audit.stresses[:1])
    audit = replace(plain_board.audit, findings=(finding,), parts=rows, stresses=stresses)
    return Batch((BoardResult(text, audit, True), BoardResult(text, None, True, text)), "1")


HOSTILE = [
    '"><script>&',
    "=1+1",
    "a|b`c`*d*",
    "\x00\x1b[31m\ud7ff",
    "@someone #12 https://x.invalid",
    "Ω µ",
    "]]>",
    "a\nb",
]


@pytest.mark.parametrize("name", ENDINGS)
def test_report_is_the_golden_one(name: str, made: Batch) -> None:
    same_text(report(name, made), golden(name).read_bytes().decode("utf-8"))


@pytest.mark.parametrize("name", FORMATS)
def test_every_registered_format_renders_even_an_empty_batch(name: str, made: Batch) -> None:
    assert FORMATS[name].render(Batch((), "1")) is not None
    assert FORMATS[name].text


@pytest.mark.parametrize("name", ENDINGS)
def test_every_report_says_by_what_and_from_what_it_was_made(name: str, made: Batch) -> None:
    text = report(name, made)
    assert "VERSION" in text
    assert "cautious" in text
    assert CAUTION in text


@pytest.mark.parametrize("name", ENDINGS)
def test_every_report_names_the_files_that_were_read(
    name: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    import hashlib

    from netaudit.gate.job import Job
    from netaudit.gate.run import run_jobs

    monkeypatch.chdir(tmp_path)
    Path("vent.netlist").write_text(VENT + 'parts "t.csv"\n', encoding="utf-8")
    Path("t.csv").write_text("name,kind\nX,resistor\n", encoding="utf-8")
    text = report(name, Batch(tuple(run_jobs([Job("vent.netlist")])), "1"))
    for file in ("vent.netlist", "t.csv"):
        assert file in text
        assert hashlib.sha256(Path(file).read_bytes()).hexdigest() in text


class TestSarif:
    def log(self, made: Batch) -> dict[str, Any]:
        read: dict[str, Any] = json.loads(report("sarif", made))
        jsonschema.Draft4Validator(OASIS, format_checker=jsonschema.Draft4Validator.FORMAT_CHECKER).validate(read)
        return read

    def test_it_is_valid_by_the_schema_of_the_standard(self, made: Batch) -> None:
        (run,) = self.log(made)["runs"]
        assert run["tool"]["driver"]["name"] == "netaudit"
        assert run["properties"]["policy"] == "cautious"

    def test_rules_have_help_and_results_point_at_them(self, made: Batch) -> None:
        (run,) = self.log(made)["runs"]
        rules = run["tool"]["driver"]["rules"]
        assert all(r["help"]["text"] and r["shortDescription"]["text"] for r in rules)
        assert all(rules[r["ruleIndex"]]["id"] == r["ruleId"] for r in run["results"])

    def test_places_parts_and_nets(self, made: Batch) -> None:
        (run,) = self.log(made)["runs"]
        power = next(r for r in run["results"] if r["ruleId"] == "stress/power")
        (location,) = power["locations"]
        place = location["physicalLocation"]
        assert place["artifactLocation"] == {"uri": "boards/vent.netlist", "uriBaseId": "%SRCROOT%"}
        assert place["region"]["startLine"] == 6
        assert location["logicalLocations"][0]["fullyQualifiedName"] == "boards/vent.netlist/R1"
        dangling = next(r for r in run["results"] if r["ruleId"] == "graph/single-pin-net")
        assert {"name": "DANGLING", "fullyQualifiedName": "boards/vent.netlist/DANGLING", "kind": "net"} in dangling[
            "locations"
        ][0]["logicalLocations"]

    def test_waivers_are_suppressions(self, made: Batch) -> None:
        (run,) = self.log(made)["runs"]
        suppressed = [r for r in run["results"] if r["suppressions"]]
        assert {r["ruleId"] for r in suppressed} == {"stress/forward-current"}
        (how,) = suppressed[0]["suppressions"]
        assert (how["kind"], how["status"]) == ("external", "accepted")
        assert how["justification"] == "measured on ten boards, 21 mA at most; TEST-17; until 2031-01-01"

    def test_a_broken_board_is_a_notification(self, made: Batch) -> None:
        (run,) = self.log(made)["runs"]
        (invocation,) = run["invocations"]
        assert not invocation["executionSuccessful"]
        assert invocation["toolExecutionNotifications"][0]["message"]["text"].startswith("boards/door.netlist:3:4")

    def test_fingerprints_survive_lines_files_values_and_designators(self) -> None:
        def marks(text: str, name: str) -> set[tuple[str, str]]:
            (run,) = self.log(Batch((board(name, text),), "1"))["runs"]
            return {(r["ruleId"], r["partialFingerprints"]["finding/v1"]) for r in run["results"]}

        moved = (
            VENT.replace("ground GND", "# a line more\n\nground GND").replace("R1 ", "R101 ").replace("330R", "335R")
        )
        before, after = marks(VENT, "a.netlist"), marks(moved, "b.netlist")
        assert before == after
        assert len(before) == len({mark for _, mark in before})

    def test_a_run_is_cut_at_the_limit_worst_first(self, made: Batch, monkeypatch: pytest.MonkeyPatch) -> None:
        monkeypatch.setattr(sarif, "MOST_RESULTS", 3)
        (run,) = self.log(made)["runs"]
        assert [r["level"] for r in run["results"]] == ["error", "error", "error"]
        assert "more findings are left out" in json.dumps(run["invocations"])
        assert {r["id"] for r in run["tool"]["driver"]["rules"]} == {r["ruleId"] for r in run["results"]}

    @pytest.mark.parametrize("text", HOSTILE)
    def test_hostile_names_stay_data(self, text: str) -> None:
        (run,) = self.log(hostile(text))["runs"]
        assert run["results"][0]["message"]["text"] == text

    def test_names_become_uri_references(self) -> None:
        assert uri("boards/a b#1.netlist") == "boards/a%20b%231.netlist"
        assert uri("./x.netlist") == "x.netlist"
        assert uri("C:x.netlist") == "C%3Ax.netlist"
        assert uri("/tmp/ä.netlist") == "file:///tmp/%C3%A4.netlist"


#: what the schema families of JUnit XML have in common, as far as the fields that are written go: from memory of the Ant
#: and xUnit plug-in schemas, no schema file was at hand
ORDER = ["properties", "testcase", "system-out", "system-err"]
SUITE = {"name", "package", "id", "timestamp", "hostname", "tests", "failures", "errors", "skipped", "time"}


class TestJunit:
    def suites(self, made: Batch) -> list[ET.Element]:
        root = ET.fromstring(report("junit", made))
        assert root.tag == "testsuites"
        suites = list(root)
        for suite in suites:
            assert suite.tag == "testsuite"
            assert set(suite.attrib) == SUITE
            order = [ORDER.index(child.tag) for child in suite]
            assert order == sorted(order)
            cases = suite.findall("testcase")
            assert all({"name", "classname", "time"} == set(c.attrib) for c in cases)
            assert all(len(c) <= 1 and all(i.tag in ("failure", "error", "skipped") for i in c) for c in cases)
            counted = {"failures": "failure", "errors": "error", "skipped": "skipped"}
            assert int(suite.attrib["tests"]) == len(cases)
            assert all(int(suite.attrib[n]) == len(suite.findall(f"testcase/{tag}")) for n, tag in counted.items())
        for name in ("tests", "failures", "errors"):
            assert int(root.attrib[name]) == sum(int(s.attrib[name]) for s in suites)
        return suites

    def test_a_case_is_a_part_or_an_expectation(self, made: Batch) -> None:
        vent, pump, door = self.suites(made)
        cases = {c.attrib["name"]: c for c in vent.findall("testcase")}
        assert {name.split()[0] for name in cases} == {"PS1", "R1", "D1", "R2", "U1", "expect", "board"}
        assert cases["R1 resistor"].find("failure") is not None
        assert cases["U1 unmodelled"].find("skipped") is not None
        assert cases["expect current D1 1 mA..20 mA, line 10"].find("failure") is not None
        assert len(cases["expect voltage A 1 V..3 V, line 11"]) == 0
        assert pump.attrib["failures"] == "0"
        assert door.attrib["errors"] == "1"

    def test_waived_findings_do_not_fail_but_stay_visible(self, made: Batch) -> None:
        vent = self.suites(made)[0]
        assert "(waived: measured on ten boards" in (vent.findtext("system-out") or "")
        assert not any("forward-current" in (f.text or "") for f in vent.iter("failure"))

    @pytest.mark.parametrize("text", HOSTILE)
    def test_hostile_names_stay_data(self, text: str) -> None:
        assert len(self.suites(hostile(text))) == 2


class TestCsv:
    def rows(self, made: Batch) -> list[dict[str, str]]:
        text = report("csv", made)
        assert text.count("\n") == text.count("\r\n")
        rows = list(csv.reader(io.StringIO(text, newline=""), strict=True))
        assert tuple(rows[0]) == COLUMNS
        assert all(len(row) == len(COLUMNS) for row in rows)
        return [dict(zip(COLUMNS, row, strict=True)) for row in rows[1:]]

    def test_a_row_is_what_a_reviewer_signs(self, made: Batch) -> None:
        row = next(r for r in self.rows(made) if r["designator"].endswith(":R1") and r["quantity"] == "power (W)")
        assert float(row["worst"]) > float(row["nominal"]) > 0
        # 125 mW up to 70 degC, 60 % by the policy
        assert (float(row["rating"]), row["policy share"]) == (0.125, "60 %")
        assert row["policy document"] == "cautious: common practice"
        assert row["policy row"] == "60 % of the rating"
        assert float(row["ratio"]) == pytest.approx(float(row["worst"]) / 0.075, rel=1e-4)
        assert "PS1=13.2 V" in row["corner"]
        assert row["mode"] == "normal"
        assert row["proof"].split()[0].rstrip(",") in ("proven", "bounded", "checked")
        assert float(row["temperature"]) in (-20.0, 25.0, 60.0)

    @pytest.mark.parametrize("text", ["=1+1", "+1", "-1", "@sum", "\t=1", "\r=1", *HOSTILE])
    def test_formulas_are_defused(self, text: str) -> None:
        for row in self.rows(hostile(text)):
            for cell in row.values():
                assert not cell.startswith(("=", "+", "-", "@", "\t", "\r"))

    def test_negative_numbers_stay_numbers(self, made: Batch) -> None:
        first = made.boards[0]
        assert first.audit is not None
        stresses = (replace(first.audit.stresses[0], nominal=-0.25),)
        changed = Batch((replace(first, audit=replace(first.audit, stresses=stresses)),), "1")
        assert float(self.rows(changed)[0]["nominal"]) == -0.25


class TestMarkdown:
    def test_worst_first_short_and_folded(self, made: Batch) -> None:
        text = report("markdown", made)
        assert text.startswith("### netaudit: FAIL: 2 of 3 boards fail\n")
        lines = [line for line in text.split("<details>")[0].splitlines() if line.startswith("| ")]
        levels = [line.split(" | ")[0].strip("| ") for line in lines[2:]]
        assert levels == sorted(levels, key=["error", "warning", "note"].index)
        assert "note" not in levels
        assert text.count("<details>") == text.count("</details>") == 2
        assert "**boards/door.netlist could not be read:**" in text
        assert "1 waived" in text

    def test_it_fits_what_hosts_take(self, made: Batch) -> None:
        first = made.boards[0]
        assert first.audit is not None
        many = replace(first.audit, findings=first.audit.findings * 500)
        long = Batch((replace(first, audit=many),) * 3, "1")
        assert len(report("markdown", long)) < 65_536

    def test_nothing_becomes_markup(self) -> None:
        assert plain("a|b") == r"a\|b"
        assert plain("<b>") == "&lt;b&gt;"
        assert plain("@all #12") == "@\u200dall #\u200d12"
        assert plain("[x](https://y.invalid)") == r"\[x\](https://" + "\u200d" + "y.invalid)"
        assert "\n" not in plain("a\nb")

    @pytest.mark.parametrize("text", HOSTILE)
    def test_hostile_names_keep_the_table_whole(self, text: str) -> None:
        made = report("markdown", hostile(text))
        rows = [line for line in made.splitlines() if line.startswith("| error")]
        assert len(rows) == 1
        assert len([c for c in rows[0].replace(r"\|", "").split("|") if c]) == 4
        assert "<script>" not in made


class TestJson:
    @pytest.mark.parametrize("count", [1, 3])
    def test_it_is_valid_by_the_shipped_schema(self, made: Batch, count: int) -> None:
        jsonschema.Draft202012Validator.check_schema(SHIPPED)
        read = json.loads(report("json", replace(made, boards=made.boards[:count])))
        jsonschema.Draft202012Validator(SHIPPED).validate(read)

    def test_the_schema_knows_every_field_of_findings_and_stresses(self, made: Batch) -> None:
        record = json.loads(report("json", replace(made, boards=made.boards[:1])))
        for field, definition in (("findings", "finding"), ("stress", "stress"), ("parts", "part")):
            known = set(SHIPPED["$defs"][definition]["properties"])
            assert set(record[field][0]) <= known, f"add the new fields to the schema: {definition}"
