"""The glossary of model parameters and ratings: letter symbol (IEC 60747 where it has one), unit, condition, meaning."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from types import MappingProxyType
from typing import Literal

#: which values are physical; ``magnitude``: a data sheet may write a minus (p-type parts) or both signs, the size counts
Sign = Literal["any", "positive", "not negative", "magnitude"]


@dataclass(frozen=True, slots=True)
class Symbol:
    """A symbol with its canonical unit; ``at`` is the unit of the condition in ``"value @ condition"`` (empty: none).

    ``sign`` and ``most`` (in SI) bound what is physical; ``alternatives`` are other units that it may be written in (the
    unit written decides); ``also`` are other spellings seen in data sheets, for suggestions only.
    """

    name: str
    unit: str
    text: str
    at: str = ""
    sign: Sign = "any"
    also: tuple[str, ...] = ()
    most: float = float("inf")
    alternatives: tuple[str, ...] = ()


def _table(*rows: Symbol) -> Mapping[str, Symbol]:
    return MappingProxyType({row.name: row for row in rows})


PARAMETERS = _table(
    Symbol("I_S", "A", "saturation current of a junction at T_0", sign="positive", also=("IS", "I_SAT", "I_0")),
    Symbol("n", "1", "ideality factor", sign="positive", also=("eta",)),
    Symbol("R_S", "ohm", "series resistance", sign="not negative", also=("RS",)),
    Symbol("T_0", "degC", "temperature at which I_S or a resistance is stated", also=("T_NOM",)),
    Symbol("E_g", "eV", "gap or barrier energy that I_S(T) follows", sign="positive", also=("EG",)),
    Symbol("I_R", "A", "leakage at a reverse voltage", "V", sign="not negative", also=("IR",)),
    Symbol("alpha_VF", "V/K", "drift of the forward voltage at a current", "A"),
    Symbol("V_F", "V", "shift of the forward voltage between specimens"),
    Symbol("V_Z", "V", "breakdown voltage at I_Z", sign="positive", also=("V_BR", "BV", "V_ZT")),
    Symbol("I_Z", "A", "current at which V_Z and r_Z are stated", sign="positive", also=("I_ZT",)),
    Symbol("r_Z", "ohm", "slope resistance at I_Z", sign="positive", also=("R_Z", "Z_ZT", "Z_Z")),
    Symbol("r_ZK", "ohm", "slope resistance at I_ZK", sign="positive", also=("Z_ZK", "R_ZK")),
    Symbol("I_ZK", "A", "knee current of a zener", sign="positive"),
    Symbol(
        "alpha_VZ",
        "1/K",
        "temperature coefficient of V_Z (per kelvin or V/K)",
        alternatives=("V/K",),
        also=("TC_VZ", "S_Z"),
    ),
    Symbol("alpha", "1/K", "first temperature coefficient of a resistance", also=("TCR", "TC1", "alpha_1")),
    Symbol("alpha_2", "1/K2", "second temperature coefficient of a resistance", also=("TC2",)),
    Symbol("B", "K", "B value of a thermistor", sign="positive", also=("B_25_85", "beta")),
    Symbol(
        "R", "ohm", "resistance of a winding, trace, contact, fuse or supply", sign="not negative", also=("DCR", "ESR")
    ),
    Symbol("R_on", "ohm", "contact resistance", sign="not negative"),
    Symbol("R_high", "ohm", "on-resistance of a driver towards V", sign="not negative", also=("R_OH",)),
    Symbol("R_low", "ohm", "on-resistance of a driver towards G", sign="not negative", also=("R_OL",)),
    Symbol("leakage", "ohm", "leakage resistance of a capacitor", sign="positive", also=("R_leak",)),
    Symbol("at", "1", "position of a trimmer's wiper", sign="not negative", most=1.0),
    Symbol("beta_F", "1", "forward current gain", sign="positive", also=("BF",)),
    Symbol("beta_R", "1", "reverse current gain", sign="positive", also=("BR",)),
    Symbol("h_FE", "1", "static current gain at a collector current", "A", sign="positive", also=("hfe",)),
    Symbol("V_BE", "V", "base-emitter voltage at a collector current", "A", also=("V_BE_on",)),
    Symbol("V_CE_sat", "V", "saturation voltage at a collector current", "A"),
    Symbol("R_B", "ohm", "ohmic base resistance", sign="not negative"),
    Symbol("R_C", "ohm", "ohmic collector resistance", sign="not negative"),
    Symbol("R_E", "ohm", "ohmic emitter resistance", sign="not negative"),
    Symbol("V_th", "V", "threshold voltage", also=("V_TO",)),
    Symbol("K", "A/V2", "transconductance parameter of the square law", sign="positive", also=("KP",)),
    Symbol("V_GS_th", "V", "threshold voltage at a small drain current", "A"),
    Symbol("R_DS_on", "ohm", "on-resistance at a gate-source voltage", "V", sign="positive"),
    Symbol("I_DSS", "A", "drain current at V_GS = 0"),
    Symbol("V_P", "V", "pinch-off voltage", also=("V_GS_off",)),
    Symbol("CTR", "1", "current transfer ratio at a forward current", "A", sign="positive"),
    Symbol("gain", "1", "open-loop voltage gain", sign="positive", also=("A_VOL",)),
    Symbol("swing", "V", "distance that an output keeps from its rails", sign="not negative"),
    Symbol("limit", "A", "current limit of an output", sign="positive", also=("I_lim", "I_SC")),
    Symbol("V_OS", "V", "input offset voltage", also=("V_IO",)),
    Symbol("I_B", "A", "input bias current", also=("I_IB",)),
    Symbol("I_Q", "A", "quiescent current", sign="not negative", also=("I_GND",)),
    Symbol("V_drop", "V", "drop-out voltage at a current", "A", sign="not negative", also=("V_DO",)),
    Symbol("efficiency", "1", "output power over input power", sign="positive", most=1.0, also=("eff",)),
    Symbol("V_I_min", "V", "least input voltage", sign="not negative", also=("V_IN_min",)),
    Symbol("V_min", "V", "voltage below which a load fades", sign="positive"),
    Symbol("V_ref", "V", "reference voltage", sign="positive"),
    Symbol("I_K_min", "A", "least cathode current", sign="not negative"),
    Symbol("r_K", "ohm", "dynamic impedance of a reference", sign="not negative", also=("Z_KA",)),
    Symbol("compliance", "V", "largest voltage of a current source", sign="positive"),
    Symbol("sinks", "A", "current that a supply can absorb", sign="not negative"),
)

RATINGS = _table(
    Symbol("P_tot", "W", "power dissipation at T_ref", sign="not negative", also=("P_D", "P_max", "P_diss", "P")),
    Symbol("T_ref", "degC", "temperature up to which P_tot holds", also=("T_A", "T_amb")),
    Symbol("T_j", "degC", "largest junction temperature", also=("T_jmax", "T_vj", "T_j_max")),
    Symbol("T_max", "degC", "temperature at which no power is left"),
    Symbol("R_th_ja", "K/W", "thermal resistance, junction to ambient", sign="not negative", also=("theta_JA", "R_th")),
    Symbol("R_th_jc", "K/W", "thermal resistance, junction to case", sign="not negative", also=("theta_JC",)),
    Symbol("V_max", "V", "element voltage", sign="positive", also=("V_el",)),
    Symbol("I_F", "A", "continuous forward current", sign="not negative", also=("I_F_AV", "I_F_max", "I_O_AV")),
    Symbol("V_R", "V", "continuous reverse voltage, rated voltage of a capacitor", sign="positive", also=("V_R_max",)),
    Symbol("V_RRM", "V", "repetitive peak reverse voltage", sign="positive", also=("PIV", "V_RM")),
    Symbol("V_RWM", "V", "stand-off voltage", sign="positive", also=("V_WM",)),
    Symbol("V_rev", "V", "reverse voltage that a polarised capacitor allows", sign="not negative"),
    Symbol("I_ZM", "A", "largest zener current", sign="not negative", also=("I_Z_max",)),
    Symbol("I_ZK", "A", "knee current of a zener", sign="positive"),
    Symbol("I_C", "A", "collector current", sign="magnitude", also=("I_C_max",)),
    Symbol("I_B", "A", "base current", sign="magnitude"),
    Symbol("V_CEO", "V", "collector-emitter voltage, base open", sign="magnitude", also=("V_CE", "V_CE_max")),
    Symbol("V_CBO", "V", "collector-base voltage, emitter open", sign="magnitude", also=("V_CB",)),
    Symbol("V_EBO", "V", "emitter-base voltage, collector open", sign="magnitude", also=("V_EB",)),
    Symbol("h_FE", "1", "least static current gain", "A", sign="positive", also=("hfe",)),
    Symbol("I_D", "A", "drain current", sign="magnitude", also=("I_D_max",)),
    Symbol("V_DS", "V", "drain-source voltage", sign="magnitude", also=("V_DSS",)),
    Symbol("V_GS", "V", "gate-source voltage, both signs", sign="magnitude", also=("V_GSS",)),
    Symbol("V_GS_th", "V", "threshold voltage", "A"),
    Symbol("R_DS_on", "ohm", "on-resistance", "V", sign="positive"),
    Symbol("I_max", "A", "largest current", sign="not negative", also=("I_rated", "I_rms")),
    Symbol("V_I", "V", "input voltage", sign="positive", also=("V_IN", "V_CC", "V_DD")),
    Symbol("I_O", "A", "output current", sign="magnitude", also=("I_OUT",)),
)

#: words a part row may hold beside numbers
WORDS = frozenset({"material", "body", "use"})

#: which words a key without a number takes; a material is checked by ``netaudit.parts.materials``
WORD_CHOICES: Mapping[str, tuple[str, ...]] = MappingProxyType({"body": ("yes", "no"), "use": ("clamp",)})

#: symbols of both glossaries that describe a kind instead of limiting it
_DESCRIBES: Mapping[str, frozenset[str]] = MappingProxyType({"I_B": frozenset({"opamp"})})
#: symbols among the ratings of a data sheet that are values of the model all the same
MODEL_DATA = frozenset({"h_FE", "V_GS_th", "R_DS_on"})


def is_rating(name: str, kind: str | None) -> bool:
    """Whether the symbol limits a part of this kind (``I_B`` limits a transistor and describes an op amp)."""
    return name in RATINGS and name not in MODEL_DATA and kind not in _DESCRIBES.get(name, frozenset())


def is_parameter(name: str, kind: str | None) -> bool:
    """Whether the symbol is a value of the model of this kind."""
    return name in PARAMETERS and (name not in _DESCRIBES or not is_rating(name, kind))


def symbol(name: str, kind: str | None = None) -> Symbol | None:
    """The symbol as this kind uses it, a rating first where it is both; None when neither glossary has it."""
    return RATINGS[name] if is_rating(name, kind) else PARAMETERS.get(name)


def spelling(text: str, names: Iterable[str]) -> str | None:
    """The glossary's name for a spelling found in data sheets (``RthJA``: ``R_th_ja``), among ``names``."""
    plain = _plain(text)
    options = list(names)
    for name in options:
        if _plain(name) == plain:
            return name
    for name in options:
        known = [g[name] for g in (PARAMETERS, RATINGS) if name in g]
        if any(_plain(other) == plain for s in known for other in s.also):
            return name
    return None


def _plain(text: str) -> str:
    return "".join(c for c in text.casefold() if c.isalnum())
