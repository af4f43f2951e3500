"""The glossary of model parameters and ratings: letter symbol (IEC 60747 where it has one), unit, condition, meaning."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType


@dataclass(frozen=True, slots=True)
class Symbol:
    """A symbol with its canonical unit; ``at`` is the unit of the condition in ``"value @ condition"`` (empty: none)."""

    name: str
    unit: str
    text: str
    at: str = ""


def _table(*rows: Symbol) -> Mapping[str, Symbol]:
    return MappingProxyType({row.name: row for row in rows})


PARAMETERS = _table(
    Symbol("I_S", "A", "saturation current of a junction at T_0"),
    Symbol("n", "1", "ideality factor"),
    Symbol("R_S", "ohm", "series resistance"),
    Symbol("T_0", "degC", "temperature at which I_S or a resistance is stated"),
    Symbol("E_g", "eV", "gap or barrier energy that I_S(T) follows"),
    Symbol("I_R", "A", "leakage at a reverse voltage", "V"),
    Symbol("alpha_VF", "V/K", "drift of the forward voltage at a current", "A"),
    Symbol("V_F", "V", "shift of the forward voltage between specimens"),
    Symbol("V_Z", "V", "breakdown voltage at I_Z"),
    Symbol("I_Z", "A", "current at which V_Z and r_Z are stated"),
    Symbol("r_Z", "ohm", "slope resistance at I_Z"),
    Symbol("r_ZK", "ohm", "slope resistance at I_ZK"),
    Symbol("I_ZK", "A", "knee current of a zener"),
    Symbol("alpha_VZ", "1/K", "temperature coefficient of V_Z (per kelvin or V/K)"),
    Symbol("alpha", "1/K", "first temperature coefficient of a resistance"),
    Symbol("alpha_2", "1/K2", "second temperature coefficient of a resistance"),
    Symbol("B", "K", "B value of a thermistor"),
    Symbol("R", "ohm", "resistance of a winding, trace, contact, fuse or supply"),
    Symbol("R_on", "ohm", "contact resistance"),
    Symbol("R_high", "ohm", "on-resistance of a driver towards V"),
    Symbol("R_low", "ohm", "on-resistance of a driver towards G"),
    Symbol("leakage", "ohm", "leakage resistance of a capacitor"),
    Symbol("at", "1", "position of a trimmer's wiper"),
    Symbol("beta_F", "1", "forward current gain"),
    Symbol("beta_R", "1", "reverse current gain"),
    Symbol("h_FE", "1", "static current gain at a collector current", "A"),
    Symbol("V_BE", "V", "base-emitter voltage at a collector current", "A"),
    Symbol("V_CE_sat", "V", "saturation voltage at a collector current", "A"),
    Symbol("R_B", "ohm", "ohmic base resistance"),
    Symbol("R_C", "ohm", "ohmic collector resistance"),
    Symbol("R_E", "ohm", "ohmic emitter resistance"),
    Symbol("V_th", "V", "threshold voltage"),
    Symbol("K", "A/V2", "transconductance parameter of the square law"),
    Symbol("V_GS_th", "V", "threshold voltage at a small drain current", "A"),
    Symbol("R_DS_on", "ohm", "on-resistance at a gate-source voltage", "V"),
    Symbol("I_DSS", "A", "drain current at V_GS = 0"),
    Symbol("V_P", "V", "pinch-off voltage"),
    Symbol("CTR", "1", "current transfer ratio at a forward current", "A"),
    Symbol("gain", "1", "open-loop voltage gain"),
    Symbol("swing", "V", "distance that an output keeps from its rails"),
    Symbol("limit", "A", "current limit of an output"),
    Symbol("V_OS", "V", "input offset voltage"),
    Symbol("I_B", "A", "input bias current"),
    Symbol("I_Q", "A", "quiescent current"),
    Symbol("V_drop", "V", "drop-out voltage at a current", "A"),
    Symbol("efficiency", "1", "output power over input power"),
    Symbol("V_I_min", "V", "least input voltage"),
    Symbol("V_min", "V", "voltage below which a load fades"),
    Symbol("V_ref", "V", "reference voltage"),
    Symbol("I_K_min", "A", "least cathode current"),
    Symbol("r_K", "ohm", "dynamic impedance of a reference"),
    Symbol("compliance", "V", "largest voltage of a current source"),
    Symbol("sinks", "A", "current that a supply can absorb"),
)

RATINGS = _table(
    Symbol("P_tot", "W", "power dissipation at T_ref"),
    Symbol("T_ref", "degC", "temperature up to which P_tot holds"),
    Symbol("T_j", "degC", "largest junction temperature"),
    Symbol("T_max", "degC", "temperature at which no power is left"),
    Symbol("R_th_ja", "K/W", "thermal resistance, junction to ambient"),
    Symbol("R_th_jc", "K/W", "thermal resistance, junction to case"),
    Symbol("V_max", "V", "element voltage"),
    Symbol("I_F", "A", "continuous forward current"),
    Symbol("V_R", "V", "continuous reverse voltage, rated voltage of a capacitor"),
    Symbol("V_RRM", "V", "repetitive peak reverse voltage"),
    Symbol("V_RWM", "V", "stand-off voltage"),
    Symbol("V_rev", "V", "reverse voltage that a polarised capacitor allows"),
    Symbol("I_ZM", "A", "largest zener current"),
    Symbol("I_ZK", "A", "knee current of a zener"),
    Symbol("I_C", "A", "collector current"),
    Symbol("I_B", "A", "base current"),
    Symbol("V_CEO", "V", "collector-emitter voltage, base open"),
    Symbol("V_CBO", "V", "collector-base voltage, emitter open"),
    Symbol("V_EBO", "V", "emitter-base voltage, collector open"),
    Symbol("h_FE", "1", "least static current gain", "A"),
    Symbol("I_D", "A", "drain current"),
    Symbol("V_DS", "V", "drain-source voltage"),
    Symbol("V_GS", "V", "gate-source voltage, both signs"),
    Symbol("V_GS_th", "V", "threshold voltage", "A"),
    Symbol("R_DS_on", "ohm", "on-resistance", "V"),
    Symbol("I_max", "A", "largest current"),
    Symbol("V_I", "V", "input voltage"),
    Symbol("I_O", "A", "output current"),
)

#: words a part row may hold beside numbers
WORDS = frozenset({"material", "body", "use"})
