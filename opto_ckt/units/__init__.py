"""Text to SI numbers when a file is read, SI numbers to text when one is written, and the codes of IEC 60062."""

from __future__ import annotations

from opto_ckt.units.reading import read
from opto_ckt.units.rkm import read_rkm, write_rkm
from opto_ckt.units.table import known, si_unit
from opto_ckt.units.unit import UnitError
from opto_ckt.units.writing import dbm, percent, write

__all__ = ["UnitError", "dbm", "known", "percent", "read", "read_rkm", "si_unit", "write", "write_rkm"]
