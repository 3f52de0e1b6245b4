"""Materials to choose from: of the user's own list and of the table, each with its density and where it is from."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QAbstractListModel, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtWidgets import QCompleter

from core.document.own_list.entries import OWN_GROUP
from core.material import with_own

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.material import Material

Index = QModelIndex | QPersistentModelIndex


class MaterialsModel(QAbstractListModel):
    """A row for each material: shown with a word where it is the user's own, typed by its name alone."""

    def __init__(self, own: Sequence[Material], parent: QObject) -> None:
        super().__init__(parent)
        self.materials = with_own(own)

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        """Return how many materials there are."""
        return 0 if parent.isValid() else len(self.materials)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> str | None:
        """Return what is shown of a material, its name, or what is told about it."""
        if not index.isValid():
            return None
        material = self.materials[index.row()]
        if role == Qt.ItemDataRole.DisplayRole:
            return f"{material.name}  ({OWN_GROUP})" if material.group == OWN_GROUP else material.name
        if role == Qt.ItemDataRole.ToolTipRole:
            origin = OWN_GROUP if material.group == OWN_GROUP else "table"
            return (
                f"{material.density:.0f} kg/m³ ({material.low:.0f} to {material.high:.0f}); "
                f"{origin}: {material.source or 'no source given'}"
            )
        return material.name if role in {Qt.ItemDataRole.EditRole, Qt.ItemDataRole.UserRole} else None


def material_completer(own: Sequence[Material], parent: QObject) -> QCompleter:
    """Return what proposes materials, wherever in their name the typed text stands."""
    completer = QCompleter(parent)
    completer.setModel(MaterialsModel(own, completer))
    completer.setCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
    completer.setFilterMode(Qt.MatchFlag.MatchContains)
    return completer
