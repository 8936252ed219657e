"""The window's own font, so that it looks the same on every machine."""

from __future__ import annotations

from PySide6.QtGui import QFont, QFontDatabase

from panelview.resource_files import resources

#: DejaVu Sans in its condensed width: has every sign the window needs (Δ Γ ′ ⇌ ± − µ and sub- and
#: superscripts), and a table of numbers stays readable beside the strips.
FACES = ("DejaVuSansCondensed.ttf", "DejaVuSansCondensed-Bold.ttf")
FAMILY = "DejaVu Sans Condensed"
POINT_SIZE = 9.5


def register_fonts() -> QFont:
    """Register the shipped faces and give back the window's font (the system's own if they are gone)."""
    for face in FACES:
        QFontDatabase.addApplicationFont(str(resources() / "fonts" / face))
    font = QFont(FAMILY)
    font.setPointSizeF(POINT_SIZE)
    return font
