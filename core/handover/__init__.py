"""The hand-over: the sheet of values, and the forms in which it leaves: aligned text, TSV, CSV, JSON."""

from core.handover.lines import Entry, SheetChoice
from core.handover.sheet import Sheet, Source, sheet_of_assembly, sheet_of_mesh
from core.handover.table import csv_of_block, csv_of_sheet, tsv_of_block, tsv_of_sheet

__all__ = [
    "Entry",
    "Sheet",
    "SheetChoice",
    "Source",
    "csv_of_block",
    "csv_of_sheet",
    "sheet_of_assembly",
    "sheet_of_mesh",
    "tsv_of_block",
    "tsv_of_sheet",
]
