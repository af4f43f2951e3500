"""Device kinds: the registry is explicit, one line a kind."""

from netaudit.devices import (
    bridge,
    capacitor,
    connector,
    current_source,
    curve,
    diode,
    fuse,
    inductor,
    led,
    link,
    resistor,
    supply,
    suppressor,
    switch,
    testpoint,
    thermistor,
    trimmer,
    unmodelled,
    zener,
)
from netaudit.devices.base import Kind

_MODULES = (
    resistor,
    link,
    trimmer,
    thermistor,
    capacitor,
    inductor,
    fuse,
    switch,
    supply,
    current_source,
    diode,
    led,
    zener,
    suppressor,
    bridge,
    curve,
    connector,
    testpoint,
    unmodelled,
)

KINDS: dict[str, Kind] = {module.KIND.name: module.KIND for module in _MODULES}
