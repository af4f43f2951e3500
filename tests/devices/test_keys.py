"""Every key and inline rating of every kind: alone, with a range, with a tolerance, and changed by ``set`` in a mode."""

from __future__ import annotations

import pytest

import netaudit
from netaudit.devices import KINDS
from netaudit.quantities.units import UNITS
from tests.devices.test_invariants import EXAMPLES

#: values that fit beside the others of a kind's example; the rest takes its unit's example
VALUES = {
    "I_S": "1pA", "n": "1.5", "R_S": "1ohm", "T_0": "25degC", "E_g": "1.1eV", "alpha_VF": '"-2mV/K @ 1mA"', "I_R": '"1nA @ 5V"',
    "V_Z": "6V", "I_Z": "5mA", "r_Z": "10ohm", "r_ZK": "500ohm", "I_ZK": "0.25mA", "alpha_VZ": "0.05%/K", "alpha": "50ppm/K",
    "alpha_2": "-0.6ppm/K2", "at": "0.5", "efficiency": "85%", "CTR": "150%", "h_FE": "200", "V_th": "2V", "V_GS_th": "2V", "K": "0.01",
    "V_P": "-2V", "beta_R": "2", "V_BE": '"0.7V @ 10mA"', "V_CE_sat": '"0.2V @ 10mA"', "R_DS_on": '"50mohm @ 10V"', "gain": "10000",
    "swing": "0.1V", "I_DSS": "5mA", "V_OS": "1mV", "I_B": "1nA", "I_Q": "1mA", "I_K_min": "1mA", "V_ref": "2.5V", "V_drop": "1V",
}  # fmt: skip
P_TYPE = {"pmos": {"V_th": "-2V", "V_GS_th": "-2V", "R_DS_on": '"50mohm @ -10V"'}, "pjfet": {"V_P": "2V"}}
CASES = [(kind, key) for kind in KINDS.values() for key, spec in kind.keys.items() if spec.unit]
#: stated at a condition, or in a unit that takes neither
PLAIN = {"alpha_VF", "I_R", "V_BE", "V_CE_sat", "R_DS_on", "T_0"}
CONSUMED = {"h_FE", "V_BE", "V_CE_sat", "V_GS_th", "R_DS_on"}
NEEDED = {"r_ZK": "I_ZK=0.25mA", "n": "I_S=1pA"}


def load(kind: str, key: str, value: str) -> None:
    """A board with the key on the device line and one with it set in a mode; both must resolve."""
    base = EXAMPLES[kind][0] if kind in EXAMPLES else "+:A -:REF"
    words = [w for w in base.split(" ") if not w.startswith(f"{key}=")]
    extra = NEEDED.get(key, "")
    if extra and (
        extra.split("=")[0] not in KINDS[kind].keys or any(w.startswith(extra.split("=")[0] + "=") for w in words)
    ):
        extra = ""
    head = "netlist 1\nground REF\n"
    line = f"X1 {kind} {' '.join(words)} {extra}".rstrip()
    alone = netaudit.loads(f"{head}{line} {key}={value}\n").board.circuits[0].devices[0]
    changed = netaudit.loads(f'{head}X1 {kind} {base} {extra}\nmode "other"\n  set X1 {key}={value}\nend\n').board
    first, second = (c.devices[0] for c in changed.circuits)
    assert alone.missing == first.missing == second.missing == ""
    # some are turned into other values of the model (h_FE beside beta_F, V_CE(sat) into R_C)
    assert alone.values.get(key) == second.values.get(key)
    assert key in alone.values or key in CONSUMED


@pytest.mark.parametrize(("kind", "key"), [(k.name, key) for k, key in CASES if k.name != "curve"])
def test_a_key_takes_a_value_a_range_and_a_tolerance(kind: str, key: str) -> None:
    spec = KINDS[kind].keys[key]
    value = P_TYPE.get(kind, {}).get(key) or VALUES.get(key) or UNITS[spec.unit].example
    load(kind, key, value)
    if key in PLAIN:
        return
    load(kind, key, f"{value},1%")
    number = value.strip('"')
    load(kind, key, f"{number},{number}..{number}")
    load(kind, key, f"{number},-10%..+5%")
