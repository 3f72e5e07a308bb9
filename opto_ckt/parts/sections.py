"""The sections of a part file, and the records that each may hold; loaded on use."""

from __future__ import annotations

from collections.abc import Mapping
from importlib import import_module
from types import MappingProxyType
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from opto_ckt.parts.record import Record

SECTIONS: Mapping[str, tuple[str, tuple[str, ...]]] = MappingProxyType(
    {
        "photodiode": ("photodiode", ("PhotodiodeData",)),
        "opamp": ("opamp", ("OpAmpData",)),
        "led": ("led", ("LedData",)),
        "laser": ("laser", ("LaserData",)),
        "transistor": ("transistor", ("BipolarData", "MosfetData", "JfetData")),
        "reference": ("reference", ("ReferenceData",)),
        "diode": ("diode", ("DiodeData",)),
        "inductor": ("passives", ("InductorData",)),
        "thermistor": ("passives", ("ThermistorData",)),
        "logic_output": ("logic", ("LogicOutputData",)),
        "fibre": ("fibre", ("FibreData",)),
        "analog_switch": ("analog_switch", ("AnalogSwitchData",)),
        "fixed_tia": ("fixed_tia", ("FixedTiaData",)),
    }
)  #: section to module of this package and the classes in it


def records_of(section: str) -> tuple[type[Record], ...]:
    """The kinds of record that a section holds; KeyError for an unknown section."""
    module_name, classes = SECTIONS[section]
    module = import_module(f"{__package__}.{module_name}")
    return tuple(getattr(module, name) for name in classes)
