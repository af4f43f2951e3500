"""What each kind takes, by the language's tables, and small facts of the linear kinds."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.devices import KINDS
from netaudit.solve.point import Point

JUNCTION = {
    "I_S",
    "n",
    "R_S",
    "T_0",
    "I_R",
    "V_Z",
    "I_Z",
    "r_Z",
    "material",
    "use",
    "E_g",
    "alpha_VF",
    "alpha_VZ",
    "r_ZK",
}
HEAT = {"P_tot", "T_ref", "T_j", "R_th_ja", "R_th_jc"}
#: kind: pin sets, states, keys, ratings that the tables of the language name
TABLE: dict[str, tuple[set[tuple[str, ...]], set[str], set[str], set[str]]] = {
    "resistor": ({("1", "2")}, set(), {"alpha", "alpha_2", "T_0"}, {"P_tot", "T_ref", "T_max", "V_max"}),
    "link": ({("1", "2")}, set(), {"R"}, {"I_max", "V_max"}),
    "trimmer": ({("1", "W", "2")}, set(), {"at"}, {"P_tot", "T_ref", "T_max", "V_max", "I_max"}),
    "thermistor": ({("1", "2")}, set(), {"B"}, {"P_tot", "T_ref", "T_max", "V_max"}),
    "capacitor": ({("+", "-"), ("1", "2")}, set(), {"leakage"}, {"V_R", "V_rev"}),
    "inductor": ({("1", "2")}, set(), {"R", "alpha"}, {"I_max", "V_max"}),
    "fuse": ({("1", "2")}, {"open"}, {"R"}, set()),
    "switch": ({("1", "2")}, {"open", "closed"}, {"R_on"}, {"I_max", "V_max"}),
    "supply": ({("+", "-")}, {"off"}, {"limit", "limiting", "R", "sinks"}, {"I_max", "V_max"}),
    "current-source": ({("+", "-")}, set(), {"compliance"}, set()),
    "diode": ({("A", "K")}, set(), JUNCTION, {"I_F", "V_R", "V_RRM", *HEAT}),
    "led": ({("A", "K")}, set(), JUNCTION, {"I_F", "V_R", "V_RRM", *HEAT}),
    "zener": ({("A", "K")}, set(), JUNCTION, {"I_ZM", "I_ZK", *HEAT}),
    "suppressor": ({("A", "K"), ("1", "2")}, set(), JUNCTION, {"V_RWM", *HEAT}),
    "bridge": ({("AC1", "AC2", "+", "-")}, set(), set(), {"I_F", "V_R", "V_RRM", *HEAT}),
    "curve": ({("+", "-")}, set(), {"points"}, set()),
    "connector": (set(), set(), set(), set()),
    "testpoint": (set(), set(), set(), set()),
    "unmodelled": (set(), set(), set(), set()),
}
#: what must be known for a part to count as audited (any one of a group)
REQUIRED: dict[str, set[tuple[str, ...]]] = {
    "resistor": {("P_tot",)},
    "trimmer": {("P_tot",)},
    "zener": {("P_tot",)},
    "diode": {("I_F",), ("V_R", "V_RRM")},
    "led": {("I_F",), ("V_R", "V_RRM")},
    "bridge": {("I_F",), ("V_R", "V_RRM")},
    "suppressor": {("V_RWM",)},
    "capacitor": {("V_R",)},
    "inductor": {("I_max",)},
    "switch": {("I_max",)},
    "fuse": {("value",)},
}
PINS = {
    "resistor": "1k 1:A 2:B",
    "trimmer": "1k 1:A W:B 2:C",
    "zener": "V_Z=5.1V A:A K:B",
    "diode": "I_S=1nA A:A K:B",
    "led": "material=red A:A K:B",
    "bridge": "I_S=1nA AC1:A AC2:B +:C -:D",
    "suppressor": "V_Z=9V A:A K:B",
    "capacitor": "1u +:A -:B",
    "inductor": "1mH 1:A 2:B",
    "switch": "closed 1:A 2:B",
    "fuse": "1A 1:A 2:B",
    "link": "1:A 2:B",
    "supply": "5V +:A -:B",
    "current-source": "1mA +:A -:B",
    "thermistor": "10k B=3950K 1:A 2:B",
}


@pytest.mark.parametrize("kind", TABLE)
def test_kind_takes_what_the_language_names(kind: str) -> None:
    pins, states, keys, ratings = TABLE[kind]
    found = KINDS[kind]
    assert set(found.pin_sets) == pins
    assert set(found.states) == states
    assert keys <= set(found.keys)
    # a symbol may be a key as well as a rating (I_ZK): either way it is taken
    assert ratings <= set(found.ratings) | set(found.keys)


@pytest.mark.parametrize("kind", REQUIRED)
def test_required_checks_are_those_of_the_language(kind: str) -> None:
    device = netaudit.loads(f"netlist 1\nground A\nX1 {kind} {PINS[kind]}\n").board.circuits[0].device("X1")
    required = {c.symbols for c in KINDS[kind].checks(device) if c.required}
    # two checks on one rating count once
    assert required == REQUIRED[kind]


@pytest.mark.parametrize("kind", sorted(set(PINS) - {"bridge"}))
def test_every_rating_that_is_taken_is_used(kind: str) -> None:
    """A rating is checked, or a condition of one that is; none is taken and dropped."""
    conditions = {"T_ref", "T_max", "T_j", "R_th_ja", "R_th_jc", "I_ZK", "V_rev"}
    units = {"I": "1A", "V": "9V", "P": "1W", "T": "99degC", "R": "9K/W"}
    for symbol in set(KINDS[kind].ratings) - conditions - set(KINDS[kind].keys):
        text = f"netlist 1\nground A\nX1 {kind} {PINS[kind]} {symbol}={units[symbol[0]]}\n"
        device = netaudit.loads(text).board.circuits[0].device("X1")
        assert symbol in {s for c in KINDS[kind].checks(device) for s in c.symbols}, symbol


def solve(text: str, celsius: float = 25.0) -> Point:
    result = netaudit.loads(f"netlist 1\nground GND\nambient {celsius}degC\n{text}").solve()[0]
    assert len(result.points) == 1, result.failure
    return result.points[0]


@pytest.mark.parametrize(
    ("ohms", "volts", "amperes"),
    [
        (24.0, 12.0, 0.5),  # within its limit
        (12.0, 12.0, 1.0),  # exactly at it
        (6.0, 6.0, 1.0),  # beyond it: constant current
        (1e-3, 1e-3, 1.0),  # shorted
    ],
)
@pytest.mark.parametrize("sign", [1, -1])
def test_supply_goes_to_constant_current_at_its_limit(sign: int, ohms: float, volts: float, amperes: float) -> None:
    p = solve(f"PS1 supply {sign * 12}V limit=1A +:A -:GND\nR1 resistor {ohms}ohm 1:A 2:GND\n")
    assert p.nets["A"] == pytest.approx(sign * volts, rel=1e-9)
    assert -float(p.view("PS1").i("+")) == pytest.approx(sign * amperes, rel=1e-9)


def test_limited_supply_with_output_resistance_and_back_feed() -> None:
    p = solve("PS1 supply 12V R=2ohm limit=1A +:A -:GND\nR1 resistor 22ohm 1:A 2:GND\n")
    assert p.nets["A"] == pytest.approx(11.0, rel=1e-9)
    p = solve("PS1 supply 12V R=2ohm limit=1A +:A -:GND\nR1 resistor 8ohm 1:A 2:B\nPS2 supply 22V +:B -:GND\n")
    assert float(p.view("PS1").i("+")) == pytest.approx(1.0, rel=1e-9)


def test_supply_that_is_off_leaves_its_output_open() -> None:
    p = solve("PS1 supply off +:A -:GND\nPS2 supply 5V +:B -:GND\nR1 resistor 1k 1:A 2:B\n")
    assert p.nets["A"] == pytest.approx(5.0)
    assert float(p.view("PS1").i("+")) == 0.0


def test_resistance_stays_positive_beyond_its_polynomial() -> None:
    """1 - 0.01 (T - 25) is negative above 125 degC: the part stays passive, and the point the only one."""
    p = solve("I1 current-source 1mA +:A -:GND\nR1 resistor 1k alpha=-1%/K 1:A 2:GND\n", 150.0)
    assert p.nets["A"] == pytest.approx(1e-3 * 1e3 * 1e-3, rel=1e-9)


def test_winding_warms_with_its_coefficient() -> None:
    """Copper, 0.39 %/K (common practice)."""
    p = solve("I1 current-source 1A +:A -:GND\nL1 inductor 1mH R=2ohm alpha=0.39%/K 1:A 2:GND\n", 75.0)
    assert p.nets["A"] == pytest.approx(2 * (1 + 0.0039 * 50), rel=1e-9)


def test_open_fuse_carries_nothing_and_asks_for_no_rating() -> None:
    board = netaudit.loads(
        "netlist 1\nground GND\nPS1 supply 5V +:A -:GND\nF1 fuse open 1:A 2:B\nR1 resistor 1k 1:B 2:GND\n"
    )
    assert board.solve()[0].points[0].nets["B"] == 0.0
    assert KINDS["fuse"].checks(board.board.circuits[0].device("F1")) == ()


def test_link_resistor_needs_no_power_rating() -> None:
    device = netaudit.loads("netlist 1\nground A\nR1 resistor 0R 1:A 2:B\n").board.circuits[0].device("R1")
    assert not any(check.required for check in KINDS["resistor"].checks(device))


def test_trimmer_is_judged_by_the_part_of_its_track_in_use() -> None:
    """10 mA through a fifth of a 1 kohm track: 20 mW there, as hot as 100 mW in the whole."""
    board = netaudit.loads(
        "netlist 1\nground GND\nambient 25degC\nI1 current-source 10mA +:A -:GND\n"
        "RV1 trimmer 1k at=0.2 P_tot=90mW 1:A W:GND 2:nc\n"
    )
    power = next(s for s in board.audit().stresses if (s.device, s.quantity) == ("RV1", "power"))
    assert power.worst == pytest.approx(0.1, rel=1e-9)
    assert power.limit == pytest.approx(0.09)


def test_capacitor_is_judged_by_its_pins() -> None:
    text = "netlist 1\nground GND\nambient 25degC\nPS1 supply -5V sinks=yes +:A -:GND\nC1 capacitor 1u V_R=16V {} \n"
    polar = {s.quantity: s.worst for s in netaudit.loads(text.format("+:A -:GND")).audit().stresses if s.device == "C1"}
    assert polar["reverse-polarity"] == pytest.approx(5.0)
    film = {s.quantity: s.worst for s in netaudit.loads(text.format("1:A 2:GND")).audit().stresses if s.device == "C1"}
    assert film == {"voltage": pytest.approx(5.0)}


@pytest.mark.parametrize(("volts", "amperes"), [(5.0, 0.1), (1.0, 0.1), (0.25, 0.025)])
def test_covered_part_draws_what_its_line_says_and_fades_below_a_volt(volts: float, amperes: float) -> None:
    p = solve(f'PS1 supply {volts}V +:A -:GND\nU1 unmodelled V:A G:GND\ncovered U1 "bench" draws V:G=100mA\n')
    assert float(p.view("U1").i("V")) == pytest.approx(amperes, rel=1e-9)
