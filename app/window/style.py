"""The look of the window: one grid, two type sizes, the Okabe–Ito colours, icons that follow the theme."""

from __future__ import annotations

from dataclasses import asdict, dataclass
from pathlib import Path
from string import Template

from PySide6.QtCore import QByteArray, QEvent, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QGuiApplication, QIcon, QPainter, QPalette, QPixmap
from PySide6.QtSvg import QSvgRenderer
from PySide6.QtWidgets import QApplication, QLabel, QWidget

GRID = 8
ICONS = Path(__file__).parent / "icons"


@dataclass(frozen=True)
class Colours:
    """The marks of the window in one theme; each has at least the contrast its use needs on the ground.

    Okabe & Ito, "Color Universal Design" (2008): blue, vermilion, orange and bluish green, darkened or lightened
    where they set text, so that it reads at 4.5:1.
    """

    ground: str
    raised: str
    text: str
    quiet: str
    hairline: str
    selection: str
    blue: str
    failed: str
    estimate: str
    sound: str


LIGHT = Colours(
    ground="#ffffff", raised="#f3f3f0", text="#1a1c1e", quiet="#5c6066", hairline="#c9cac6", selection="#d6e5f0",
    blue="#0072b2", failed="#b34700", estimate="#8f5f00", sound="#00714f",
)
DARK = Colours(
    ground="#1d1f21", raised="#292b2e", text="#e8e8e6", quiet="#a4a8ad", hairline="#4a4d51", selection="#1f4257",
    blue="#56b4e9", failed="#f08040", estimate="#e69f00", sound="#2fbf95",
)


def colours() -> Colours:
    """Return the colours for the theme that the system has now."""
    return DARK if is_dark() else LIGHT


def is_dark() -> bool:
    """Tell whether the system's theme is a dark one."""
    return QGuiApplication.styleHints().colorScheme() == Qt.ColorScheme.Dark


def dress(application: QApplication) -> None:
    """Give the application its style, palette and fonts, and again whenever the system's theme changes."""
    application.setStyle("Fusion")
    font = application.font()
    font.setPointSizeF(max(font.pointSizeF(), 9.5))
    # Tabular figures, so that columns of numbers line up in any system font.
    font.setFeature(QFont.Tag("tnum"), 1)
    application.setFont(font)
    _repaint(application)
    application.styleHints().colorSchemeChanged.connect(lambda _scheme: _repaint(application))


def _repaint(application: QApplication) -> None:
    c = colours()
    role = QPalette.ColorRole
    palette = QPalette()
    for roles, colour in (
        ((role.Window, role.Button), c.raised),
        ((role.Base, role.ToolTipBase), c.ground),
        ((role.AlternateBase,), c.raised),
        ((role.WindowText, role.Text, role.ButtonText, role.ToolTipText), c.text),
        ((role.PlaceholderText,), c.quiet),
        ((role.Highlight,), c.selection),
        ((role.HighlightedText,), c.text),
        ((role.Link, role.Accent), c.blue),
        ((role.Mid, role.Dark), c.hairline),
    ):
        for each in roles:
            palette.setColor(each, QColor(colour))
    for each in (role.WindowText, role.Text, role.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, each, QColor(c.quiet))
    application.setPalette(palette)
    application.setStyleSheet(_sheet(c))


def _sheet(c: Colours) -> str:
    template = Template((Path(__file__).parent / "look.qss").read_text(encoding="utf-8"))
    return template.substitute(asdict(c), icons=ICONS.as_posix())


def heading_font(widget: QWidget) -> QFont:
    """Return the one larger type size, for headings."""
    font = widget.font()
    font.setPointSizeF(font.pointSizeF() * 1.2)
    font.setBold(True)
    return font


class Words(QLabel):
    """A label in one of the roles of text; it keeps its colour through a change of theme."""

    def __init__(self, text: str = "", role: str = "text", parent: QWidget | None = None) -> None:
        super().__init__(text, parent)
        self.setTextFormat(Qt.TextFormat.PlainText)
        self.set_role(role)

    def set_role(self, role: str) -> None:
        """Set the text in a role of `Colours`: text, quiet, failed, estimate, sound, blue."""
        self._role = role
        sheet = f"color: {getattr(colours(), role)};"
        if sheet != self.styleSheet():
            self.setStyleSheet(sheet)

    def changeEvent(self, event: QEvent) -> None:
        """Follow a change of theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and hasattr(self, "_role"):
            self.set_role(self._role)


_icon_cache: dict[tuple[str, str, bool], QIcon] = {}


def icon(name: str, role: str = "text") -> QIcon:
    """Return one of our line drawings in a colour of the theme, sharp at any scale up to three."""
    key = (name, role, is_dark())
    if key not in _icon_cache:
        drawing = (ICONS / f"{name}.svg").read_text(encoding="utf-8").replace("currentColor", getattr(colours(), role))
        renderer = QSvgRenderer(QByteArray(drawing.encode()))
        made = QIcon()
        for scale in (1, 2, 3):
            pixmap = QPixmap(QSize(24, 24) * scale)
            pixmap.fill(Qt.GlobalColor.transparent)
            painter = QPainter(pixmap)
            renderer.render(painter, QRectF(0, 0, 24 * scale, 24 * scale))
            painter.end()
            pixmap.setDevicePixelRatio(scale)
            made.addPixmap(pixmap)
        _icon_cache[key] = made
    return _icon_cache[key]
