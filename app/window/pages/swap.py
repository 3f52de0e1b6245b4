"""One form of fields in the place of another, the keyboard staying where it was."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, Qt
from PySide6.QtWidgets import QApplication, QWidget

if TYPE_CHECKING:
    from PySide6.QtWidgets import QScrollArea


def swap(area: QScrollArea, page: QWidget) -> None:
    """Show another page of fields, the keyboard in the field of the same name where it was in one."""
    focused = QApplication.focusWidget()
    old = area.takeWidget()
    name = focused.accessibleName() if old is not None and focused is not None and old.isAncestorOf(focused) else ""
    area.setWidget(page)
    if name:
        same = (field for field in page.findChildren(QWidget) if field.accessibleName() == name)
        next(same, area).setFocus(Qt.FocusReason.OtherFocusReason)
    if old is not None:
        # Not at once: one of its fields may be telling about the edit that brought us here.
        old.hide()
        old.deleteLater()


def swap_in_place(area: QScrollArea, page: QWidget) -> None:
    """Show another page of fields about the same thing, scrolled as far as the one that it takes the place of."""
    bar = area.verticalScrollBar()
    scrolled = bar.value()
    swap(area, page)
    # How far it can be scrolled is known once the new page is laid out.
    QApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest)
    bar.setValue(scrolled)
