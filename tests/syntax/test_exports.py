"""EDIF 2 0 0 and connection tables, each trait with a small file of its own."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from netaudit.failure import InputError
from netaudit.place import Place
from netaudit.syntax.edif import read_edif
from netaudit.syntax.tables import designators, merged, read_table

PARTS = (
    '(cell RES (cellType GENERIC) (view N (viewType NETLIST) (interface (port (rename &1 "1")) (port (rename &2 "2"))'
    ' (designator "R?"))))'
)


def file(contents: str, cells: str = PARTS, extra: str = "") -> bytes:
    return (
        f'(edif board (EDIFVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0)) (comment "hello")\n'
        f"(Library LIB (edifLevel 0) (technology (numberDefinition (scale 1 (e 1 -3) (unit RESISTANCE))))\n{cells}\n"
        f"(cell TOP (celltype GENERIC) (view V (viewType NETLIST) (interface) (contents\n{contents}\n))))\n{extra}"
        "(design board (cellRef top (libraryRef lib))))\n"
    ).encode()


def instance(name: str, more: str = "") -> str:
    return f"(instance {name} (viewRef n (cellRef res)) {more})"


def net(name: str, *pins: tuple[str, str]) -> str:
    joined = " ".join(f"(portRef {p} (instanceRef {i}))" for i, p in pins)
    return f"(net {name} (joined {joined}))"


def test_identifiers_and_keywords_without_case_names_by_rename() -> None:
    text = instance("r1") + net('(rename N_1 "N-1+")', ("R1", "&1")) + net("GND", ("r1", "&2"))
    export = read_edif(file(text), "b.edf")
    (part,) = export.instances
    assert part.name == "r1"
    assert dict(part.pins) == {"1": "N-1+", "2": "GND"}


def test_same_identifier_for_two_nets_keeps_them_apart() -> None:
    text = instance("R1") + net('(rename V_ "V-")', ("R1", "&1")) + net('(rename V_ "V+")', ("R1", "&2"))
    (part,) = read_edif(file(text), "b.edf").instances
    assert dict(part.pins) == {"1": "V-", "2": "V+"}


def test_names_that_differ_only_in_case_stay_apart_with_a_remark() -> None:
    text = instance("R1") + net('(rename a1 "clk")', ("R1", "&1")) + net('(rename a2 "CLK")', ("R1", "&2"))
    export = read_edif(file(text), "b.edf")
    assert set(export.nets) == {"clk", "CLK"}
    assert [(first, second) for first, second, _ in export.clashes] == [("clk", "CLK")]


def test_properties_of_every_type() -> None:
    text = instance(
        "R1",
        '(property Value (string "4,7к")) (property Big (integer 2397562737)) (property R (number (e 47 2)) (unit RESISTANCE))'
        ' (property Fit (boolean (true))) (property Max (string "")) (property Note (string "say %34%hi%34%"))'
        ' (userData x (y 1 (z)) "q") (unknownThing (a (b)))',
    )
    (part,) = read_edif(file(text), "b.edf").instances
    found = {p.name: p for p in part.properties}
    assert found["Value"].text == "4,7к"
    assert found["Big"].number == 2397562737
    assert found["R"].number == pytest.approx(4.7)
    assert found["R"].unit == "ohm"
    assert found["Fit"].text == "true"
    assert found["Note"].text == 'say "hi"'
    assert part.value(("max",)) is None


def test_a_repeated_property_is_harmless_when_equal_and_a_remark_when_not() -> None:
    twice = '(property Value (string "1k")) (property value (string "{}"))'
    assert not read_edif(file(instance("R1", twice.format("1k"))), "b").remarks
    assert any("twice" in r for r in read_edif(file(instance("R1", twice.format("2k"))), "b").remarks)


def test_designators_arrays_members_and_nested_nets() -> None:
    cells = (
        PARTS
        + '(cell BUS (cellType GENERIC) (view N (viewType NETLIST) (interface (port (array (rename D "D[1:0]") 2)))))'
    )
    text = (
        '(instance &0428 (viewRef N (cellRef RES)) (designator (stringDisplay "R7")))'
        "(instance U1 (viewRef N (cellRef BUS)))"
        "(net A (joined (portRef &1 (instanceRef &0428))) (net A_sub (joined (portRef (member D 1) (instanceRef U1)))))"
    )
    first, second = read_edif(file(text, cells), "b.edf").instances
    assert first.name == "R7"
    assert dict(second.pins) == {"D[0]": "A"}


def test_hierarchy_is_flattened_to_paths() -> None:
    block = (
        "(cell HALF (cellType GENERIC) (view V (viewType NETLIST) (interface (port IN) (port OUT)) (contents"
        + instance("R1")
        + instance("R2")
        + "(net IN (joined (portRef IN) (portRef &1 (instanceRef R1))))"
        + net("M", ("R1", "&2"), ("R2", "&1"))
        + "(net OUT (joined (portRef OUT) (portRef &2 (instanceRef R2)))))))"
    )
    text = (
        "(instance A1 (viewRef V (cellRef HALF))) (instance A2 (viewRef V (cellRef HALF)))"
        "(net VIN (joined (portRef IN (instanceRef A1)))) (net GND (joined (portRef OUT (instanceRef A2))))"
        "(net X (joined (portRef OUT (instanceRef A1)) (portRef IN (instanceRef A2))))"
    )
    export = read_edif(file(text, PARTS + block), "b.edf")
    pins = {i.name: dict(i.pins) for i in export.instances}
    assert pins["A1/R1"] == {"1": "VIN", "2": "A1/M"}
    assert pins["A1/R2"]["2"] == "X" == pins["A2/R1"]["1"]
    assert pins["A2/R2"] == {"1": "A2/M", "2": "GND"}


def test_eight_bit_files_are_decoded_and_said() -> None:
    data = file(instance("R1", '(property Value (string "47 кОм"))')).decode().encode("cp1251")
    export = read_edif(data, "b.edf")
    assert export.instances[0].properties[0].text == "47 кОм"
    assert any("cp1251" in r for r in export.remarks)


BROKEN = [
    (b"(edif a (library", "never closed"),
    (b"(edif a) )", "after the end|too many"),
    (b'(edif a (comment "x)', "never closed"),
    (b"PK\x03\x04\x00\x00", "EDIF"),
    (b"", "EDIF"),
    (b"(" * 10_000, "never closed"),
    (file(instance("R1").replace("res", "nothing")), "not there"),
    (file(net("N", ("R9", "&1"))), "no instance"),
    (file(instance("R1") + net("N", ("R1", "&3"))), "no port"),
    (file(instance("R1") + net("N", ("R1", "&1")) + net("M", ("R1", "&1"))), "joined to net"),
]


@pytest.mark.parametrize(("data", "words"), BROKEN)
def test_broken_files_are_one_line(data: bytes, words: str) -> None:
    with pytest.raises(InputError, match=words) as caught:
        read_edif(data, "b.edf")
    assert "b.edf:" in str(caught.value)


def test_a_cell_inside_itself() -> None:
    loop = (
        "(cell LOOP (cellType GENERIC) (view V (viewType NETLIST) (interface) (contents"
        " (instance A (viewRef V (cellRef LOOP))))))"
    )
    with pytest.raises(InputError, match="contains itself"):
        read_edif(file("(instance A (viewRef V (cellRef LOOP)))", PARTS + loop), "b.edf")


def test_unknown_forms_nested_ten_thousand_deep_are_skipped() -> None:
    deep = "(x " * 10_000 + ")" * 10_000
    assert len(read_edif(file(instance("R1") + deep), "b.edf").instances) == 1


@given(name=st.text(st.characters(min_codepoint=32, max_codepoint=126), min_size=1, max_size=20))
@settings(max_examples=60, deadline=None, derandomize=True)
def test_every_printable_name_survives(name: str) -> None:
    escaped = "".join(c if c not in '"%' else f"%{ord(c)}%" for c in name)
    (part,) = read_edif(file(instance("R1") + net(f'(rename n "{escaped}")', ("R1", "&1"))), "b.edf").instances
    assert dict(part.pins) == {"1": name}


@pytest.mark.parametrize("separator", [",", ";", "\t"])
def test_connection_tables(separator: str) -> None:
    rows = ["RefDes|Pin No.|Net Name", "R1|1|VIN", 'R1|2|"A\nB"', "D1|A|GND"]
    data = "\ufeff" + "\r\n".join(rows).replace("|", separator)
    export = read_table(data.encode(), "c.csv")
    assert {i.name: dict(i.pins) for i in export.instances} == {"R1": {"1": "VIN", "2": "A\nB"}, "D1": {"A": "GND"}}
    assert export.instances[1].place.line == 5


def test_lists_of_parts_join_the_connections() -> None:
    connections = read_table(b"designator,pin,net\nR1,1,A\nR1,2,B\nR3,1,B\nR3,2,C\n", "c.csv")
    listed = read_table(b"Reference;Value;Part Number\nR1, R3-R4;4k7;CHIP-0805\n", "l.csv")
    parts = {i.name: i for i in merged([connections, listed]).instances}
    assert set(parts) == {"R1", "R3", "R4"}
    assert parts["R3"].value(("value",)).text == "4k7"  # type: ignore[union-attr]  # the list gives it a value
    assert dict(parts["R3"].pins) == {"1": "B", "2": "C"}


def test_grouped_designators() -> None:
    assert designators("R1, R3-R5; C2", Place("x", 1)) == ["R1", "R3", "R4", "R5", "C2"]
    with pytest.raises(InputError, match="rise"):
        designators("R5-R1", Place("x", 1))


@pytest.mark.parametrize(
    ("data", "words"),
    [
        (b"", "empty"),
        (b"a,b\n1,2\n", "designators"),
        (b"designator,pin\nR1,1\n", "net"),
        (b"designator,pin,net\nR1,1,A\nR1,1,B\n", "on net A and on net B"),
        (b"designator,pin,net\n,1,A\n", "without a designator"),
        (b'designator,value\nR1,"4k7\n', "cannot be read"),
        (b"designator,value\nR1,1k\nR1,2k\n", "twice"),
    ],
)
def test_broken_tables(data: bytes, words: str) -> None:
    with pytest.raises(InputError, match=words):
        read_table(data, "c.csv")
