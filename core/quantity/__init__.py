"""Quantities: the units on offer, reading what people type, and writing values for people and spreadsheets.

- Units: `Kind` (what is measured), `Unit`, `UNITS` (by symbol), `UNITS_BY_KIND` and `families` (for menus),
  `unit_named` (any unit text; what is not in the catalogue is looked up with pint, imported only then).
- Sets of units to show values in: `UnitSet`, `UNIT_SETS`, `DEFAULT_UNITS`, `parse_unit_set`.
- Reading: `parse` gives an `Understood` value; `parse_number`, `parse_triple`, `parse_axis`; `measure` reads a quantity
  of whatever kind. A text may use values by name (`Names`); `names_in` and `with_names_changed` find them in it, and
  `check_name` refuses what cannot be one.
- Writing: `significant`, `compact`, `fixed` with `decimals_for`, `for_clipboard`.

Values are floats in the SI unit of their kind everywhere outside of text. Whatever is not understood raises
core.errors.QuantityError.
"""

from core.quantity.coordinates import Triple, parse_axis, parse_triple
from core.quantity.expression import Names, Understood, measure, parse, parse_number
from core.quantity.formatting import MINUS, NO_VALUE, compact, decimals_for, fixed, for_clipboard, significant
from core.quantity.names import check_name, names_in, with_names_changed
from core.quantity.readings import Readings
from core.quantity.unit_sets import DEFAULT_UNITS, UNIT_SETS, UnitSet, parse_unit_set
from core.quantity.unit_text import unit_named
from core.quantity.units import GRAVITY, UNITS, UNITS_BY_KIND, Kind, Unit, families

__all__ = [
    "DEFAULT_UNITS",
    "GRAVITY",
    "MINUS",
    "NO_VALUE",
    "UNITS",
    "UNITS_BY_KIND",
    "UNIT_SETS",
    "Kind",
    "Names",
    "Readings",
    "Triple",
    "Understood",
    "Unit",
    "UnitSet",
    "check_name",
    "compact",
    "decimals_for",
    "families",
    "fixed",
    "for_clipboard",
    "measure",
    "names_in",
    "parse",
    "parse_axis",
    "parse_number",
    "parse_triple",
    "parse_unit_set",
    "significant",
    "unit_named",
    "with_names_changed",
]
