"""What a change made of findings: their identity, the steps, parts and nets, what counts."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import jsonschema
import pytest

import netaudit.report.json_text as json_text
from netaudit.audit.batch import Batch, BoardResult
from netaudit.audit.compared import STATES, Comparison
from netaudit.finding import Finding
from netaudit.gate.compare import Sides, compare, state_of
from netaudit.project.project import Steps
from netaudit.report.compare_json import compare_record
from netaudit.report.json_text import dumps
from tests.gate.helper import HOT, HOTTER, HOTTEST, VENT, result, waived

SHIPPED = json.loads(
    (Path(json_text.__file__).parent / "schemas" / "compare-1.schema.json").read_text(encoding="utf-8")
)


def between(base: str | BoardResult, head: str | BoardResult, steps: Steps | None = None) -> Comparison:
    sides = [result(s) if isinstance(s, str) else s for s in (base, head)]
    return compare(Sides("base", [sides[0]], "head", [sides[1]]), steps or Steps())


def counts(comparison: Comparison) -> dict[str, int]:
    """Findings above notes by what became of them."""
    return {state: n for state in STATES if (n := sum(1 for c in comparison.of(state) if c.finding.level != "note"))}


def blocks(comparison: Comparison) -> bool:
    return bool(comparison.findings)


class TestStates:
    def test_the_same_board_has_nothing_new(self) -> None:
        comparison = between(HOT, HOT)
        assert counts(comparison) == {"unchanged": 2}
        assert not blocks(comparison)
        assert not comparison.difference.parts

    def test_a_finding_that_was_not_there_is_new_and_blocks(self) -> None:
        comparison = between(VENT, HOT)
        assert counts(comparison) == {"new": 2}
        assert {f.rule for f in comparison.findings} == {"gate/worse"}
        assert {f.device for f in comparison.findings} == {"R1", "D1"}
        assert all(f.message.startswith("stress/") and "(was not there)" in f.message for f in comparison.findings)

    def test_a_finding_that_is_gone_is_mended(self) -> None:
        comparison = between(HOT, VENT)
        assert counts(comparison) == {"mended": 2}
        assert not blocks(comparison)

    def test_a_small_rise_is_unchanged_and_a_large_one_worse(self) -> None:
        assert counts(between(HOT, HOTTER)) == {"unchanged": 2}
        comparison = between(HOT, HOTTEST)
        assert counts(comparison)["worse"] == 2
        assert blocks(comparison)
        assert counts(between(HOT, HOTTER, Steps(step=0.0))) == {"worse": 2}
        assert counts(between(HOTTEST, HOT))["better"] == 2

    @pytest.mark.parametrize(
        ("before", "now", "state"),
        [
            ({"ratio": 1.2}, {"ratio": 1.26}, "unchanged"),
            ({"ratio": 1.2}, {"ratio": 1.2601}, "worse"),
            ({"ratio": 1.2}, {"ratio": 1.19}, "better"),
            ({"ratio": 1.2}, {"ratio": 1.1999}, "unchanged"),
            ({"ratio": 1.2}, {"ratio": 1.0, "level": "warning"}, "better"),
            ({"ratio": 1.2, "level": "warning"}, {"ratio": 1.2}, "worse"),
            ({"ratio": 1.2}, {"ratio": None, "value": 1.0, "limit": 0.0}, "worse"),
            ({"value": 1.0, "limit": 0.0}, {"value": 1.06, "limit": 0.0}, "worse"),
            ({"value": 1.0, "limit": 0.0}, {"value": 0.9, "limit": 0.0}, "better"),
            ({"value": 5.6, "limit": 5.5}, {"value": 5.65, "limit": 5.5}, "unchanged"),
            ({"value": 5.6, "limit": 5.5}, {"value": 6.0, "limit": 5.5}, "worse"),
            ({"value": 4.4, "limit": 4.5}, {"value": 4.0, "limit": 4.5}, "worse"),
            ({}, {}, "unchanged"),
        ],
    )
    def test_steps(self, before: dict[str, object], now: dict[str, object], state: str) -> None:
        def finding(fields: dict[str, object]) -> Finding:
            return Finding(**{"rule": "stress/power", "level": "error", "message": "", **fields})  # type: ignore[arg-type]

        assert state_of(finding(before), finding(now), 0.05) == state

    def test_only_levels_that_fail_count(self) -> None:
        lost = VENT.replace("1:VIN 2:GND\n", "1:VIN 2:LOST\n")
        assert not blocks(between(VENT, lost))
        strict = replace(result(lost), fail_on="warning")
        assert blocks(between(VENT, strict))

    def test_waived_findings_do_not_count_and_count_again_without_their_waiver(self) -> None:
        assert not blocks(between(VENT, waived(result(HOT))))
        comparison = between(waived(result(HOT)), HOT)
        assert counts(comparison) == {"worse": 2}
        assert blocks(comparison)


class TestIdentity:
    @pytest.mark.parametrize(
        "head",
        [
            HOT.replace("ground GND", "# moved\n\n\nground GND"),
            HOT.replace("R1 ", "R101 ").replace("D1 ", "D7 "),
            HOT.replace("R1 ", "R9 ").replace("R2 ", "R1 ").replace("R9 ", "R2 "),
            HOT.replace('title "Greenhouse vent, indicator"\n', ""),
            HOT.replace(":A ", ":LED_A ").replace(":A\n", ":LED_A\n"),
            HOT + 'mode "off"\n  set PS1 off\nend\n',
            HOT.replace("R2 resistor 10k", "R2 resistor 12k"),
        ],
    )
    def test_findings_survive(self, head: str) -> None:
        comparison = between(HOT, head)
        # a mode more brings no finding of its own here
        assert counts(comparison) == {"unchanged": 2}
        assert not blocks(comparison)

    def test_a_renamed_file_is_the_same_board(self) -> None:
        old, new = result(HOT, "boards/old.netlist"), result(HOT, "boards/new.netlist")
        comparison = compare(Sides("a", [old], "b", [new]), Steps())
        assert comparison.renamed == (("boards/old.netlist", "boards/new.netlist"),)
        assert counts(comparison) == {"unchanged": 2}

    def test_another_board_is_another_one(self) -> None:
        other = "netlist 1\nground G\nPS1 supply 5V +:V -:G\nR1 resistor 10R P_tot=1W 1:V 2:G\n"
        comparison = compare(Sides("a", [result(HOT, "a.n")], "b", [result(other, "b.n")]), Steps())
        assert (comparison.added, comparison.removed) == (("b.n",), ("a.n",))
        assert counts(comparison) == {"new": 1, "mended": 2}

    def test_parallel_parts_that_look_alike_are_told_apart(self) -> None:
        twins = HOT + "R3 resistor 10R P_tot=125mW 1:VIN 2:GND\nR4 resistor 10R P_tot=125mW 1:VIN 2:GND\n"
        one = twins.replace("R4 resistor 10R P_tot=125mW", "R4 resistor 10R P_tot=100W")
        comparison = between(one, twins)
        assert [c.finding.device for c in comparison.of("new") if c.finding.level == "error"] == ["R4"]


class TestPartsAndNets:
    def test_parts_that_came_went_and_changed(self) -> None:
        head = VENT.replace("R1 resistor 1k", "R1 resistor 1k2").replace("R2 resistor 10k 5%", "C1 capacitor 1u")
        head = head.replace("C1 capacitor 1u P_tot=125mW V_max=200V 1:VIN 2:GND", "C1 capacitor 1u V_R=25V 1:VIN 2:NEW")
        comparison = between(VENT, head)
        change = {(c.after or c.before).name: c for c in comparison.difference.parts}  # type: ignore[union-attr]  # one is there
        assert change["C1"].before is None
        assert change["R2"].after is None
        assert change["R1"].items == (("value", "1000 ohm (950..1050)", "1200 ohm (1140..1260)"),)
        (nets,) = comparison.difference.nets
        assert (nets.added, nets.removed) == (("NEW",), ())

    def test_a_new_designator_is_a_change_and_nothing_more(self) -> None:
        (change,) = between(VENT, VENT.replace("R2 ", "R22 ")).difference.parts
        assert change.items == (("designator", "R2", "R22"),)

    def test_a_part_number_and_a_pin(self) -> None:
        (change,) = between(VENT, VENT.replace("2:GND\n", "2:A\n")).difference.parts
        assert change.items == (("pin 2", "GND", "A"),)


class TestStresses:
    def test_a_rise_inside_the_limits_is_listed_and_blocks_only_by_a_step(self) -> None:
        head = VENT.replace("R1 resistor 1k", "R1 resistor 820R")
        listed = between(VENT, head)
        assert {r.stress.device for r in listed.difference.risen} >= {"R1", "D1"}
        assert not blocks(listed)
        assert not blocks(between(VENT, head, Steps(stress_step=0.5)))
        blocked = between(VENT, head, Steps(stress_step=0.1))
        assert {f.rule for f in blocked.findings} == {"gate/worse"}
        assert "by more than the 10 % that the project lets pass" in blocked.findings[0].message


class TestBroken:
    BROKEN = BoardResult("vent.netlist", None, True, "vent.netlist:1: no")

    def test_a_base_that_cannot_be_read_makes_everything_new(self) -> None:
        comparison = between(self.BROKEN, HOT)
        assert counts(comparison) == {"new": 2}
        assert "could not be read in base" in comparison.remarks[0]

    def test_a_head_that_cannot_be_read_is_not_taken_for_mended(self) -> None:
        comparison = between(HOT, self.BROKEN)
        assert counts(comparison) == {}
        assert Batch((self.BROKEN,), "1", comparison=comparison).failed


def test_completeness_that_was_lost_counts_where_it_is_required() -> None:
    head = result(VENT + "U1 unmodelled VCC:VIN GND:GND\n")
    sides = Sides("a", [result(VENT)], "b", [head])
    assert not blocks(compare(sides, Steps()))
    comparison = compare(sides, Steps(), require_complete=True)
    assert "can no longer be audited completely" in comparison.findings[0].message
    assert Batch((head,), "1", comparison=comparison).failed
    assert not blocks(compare(Sides("a", [head], "b", [head]), Steps(), require_complete=True))


@pytest.mark.parametrize(("base", "head"), [(VENT, HOT), (HOT, VENT), (HOT, HOTTEST), (HOT, HOT.replace("R2 ", "R3 "))])
def test_the_record_is_valid_by_the_shipped_schema(base: str, head: str) -> None:
    comparison = between(base, head, Steps(stress_step=0.1))
    record = json.loads(dumps(compare_record(Batch((result(head),), "1", comparison=comparison))))
    jsonschema.Draft202012Validator.check_schema(SHIPPED)
    jsonschema.Draft202012Validator(SHIPPED).validate(record)
    assert record["verdict"] == ("fail" if comparison.findings else "pass")
    assert set(record) <= set(SHIPPED["properties"])
