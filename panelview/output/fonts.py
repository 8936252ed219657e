"""The page's typeface: DejaVu Sans Condensed, shipped in resources/fonts and embedded in every page."""

from __future__ import annotations

from functools import cache
from pathlib import Path

from panelview.resource_files import resources

#: The family has every sign the page needs (Δ Γ ′ ⇌ ± − µ, sub- and superscripts); the condensed width
#: keeps a table of numbers readable beside its strips. The window uses the same faces.
REGULAR = "DejaVuSansCondensed"
BOLD = "DejaVuSansCondensed-Bold"


@cache
def register_fonts() -> None:
    """Make the faces known to reportlab, once. Raises RuntimeError where the installation lacks one."""
    from reportlab.pdfbase import pdfmetrics
    from reportlab.pdfbase.ttfonts import TTFont

    for name in (REGULAR, BOLD):
        path = face_path(name)
        if not path.is_file():
            raise RuntimeError(f"the font {path.name} is missing from the installation")
        pdfmetrics.registerFont(TTFont(name, str(path)))
    # Bold inside a paragraph picks the bold face; there is no slanted one, so italics stay upright.
    pdfmetrics.registerFontFamily(REGULAR, normal=REGULAR, bold=BOLD, italic=REGULAR, boldItalic=BOLD)


def face_path(name: str) -> Path:
    """File of one face."""
    return resources() / "fonts" / f"{name}.ttf"
