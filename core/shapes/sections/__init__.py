"""Standard sections by dimensions, fillets included, and the EN sizes by name.

- `Section`: every family is one, a registered shape that also gives its `plane` moments.
- `section_named("IPE 200")`, `section_sizes()`, `SectionSize`: the table of EN sizes, as data with its source.
"""

from core.shapes.sections.bars import FlatBar, RoundBar, SquareBar
from core.shapes.sections.hollow_sections import (
    CircularHollowSection,
    RectangularHollowSection,
    SquareHollowSection,
)
from core.shapes.sections.i_sections import ISection, TaperedISection
from core.shapes.sections.open_sections import AngleSection, ChannelSection, TSection
from core.shapes.sections.section import Section
from core.shapes.sections.sizes import SectionSize, section_named, section_sizes

__all__ = [
    "AngleSection",
    "ChannelSection",
    "CircularHollowSection",
    "FlatBar",
    "ISection",
    "RectangularHollowSection",
    "RoundBar",
    "Section",
    "SectionSize",
    "SquareBar",
    "SquareHollowSection",
    "TSection",
    "TaperedISection",
    "section_named",
    "section_sizes",
]
