"""What this program is, and what its numbers are not."""

from __future__ import annotations

from PySide6.QtWidgets import QMessageBox, QWidget


def about_box(parent: QWidget) -> QMessageBox:
    """Return the box that says it, with the version where that is known."""
    words = f"Masswright {_version()}".strip()
    box = QMessageBox(QMessageBox.Icon.NoIcon, "About Masswright", words, parent=parent)
    box.setInformativeText(
        "Mass, centre of mass and inertia of what a drive has to move.\n\n"
        "Values carry no margin. Rotating and lifted masses hurt people: the applicable machine-safety standards, "
        "local codes and a responsible engineer decide."
    )
    return box


def _version() -> str:
    from importlib.metadata import PackageNotFoundError, version

    try:
        return version("masswright")
    except PackageNotFoundError:  # run from a checkout
        return ""
