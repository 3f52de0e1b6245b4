"""The assembly: parts with their cuts, groups and known parts on axes; edits, totals, ledger, findings."""

from core.assembly.assembly import Assembly
from core.assembly.axis import DriveAxis
from core.assembly.bodies import Body, KnownAxial, KnownTensor, MeshBody, ShapeBody, six_of_tensor, tensor_of_six
from core.assembly.cuts import MOST_CUT_COPIES, Cut
from core.assembly.cutting import CUT_AT_ONCE, Cutting
from core.assembly.findings import Finding, findings_of, telling_findings
from core.assembly.importing import Change, Import, change_of, imported, taken_anew
from core.assembly.ledger import Ledger, Line, ledger_of
from core.assembly.mesh_part import MeshComparison, compare_mesh
from core.assembly.nodes import DataSheet, Driver, Group, Node, Part, Table, walk

__all__ = [
    "CUT_AT_ONCE",
    "MOST_CUT_COPIES",
    "Assembly",
    "Body",
    "Change",
    "Cut",
    "Cutting",
    "DataSheet",
    "DriveAxis",
    "Driver",
    "Finding",
    "Group",
    "Import",
    "KnownAxial",
    "KnownTensor",
    "Ledger",
    "Line",
    "MeshBody",
    "MeshComparison",
    "Node",
    "Part",
    "ShapeBody",
    "Table",
    "change_of",
    "compare_mesh",
    "findings_of",
    "imported",
    "ledger_of",
    "six_of_tensor",
    "taken_anew",
    "telling_findings",
    "tensor_of_six",
    "walk",
]
