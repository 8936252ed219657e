"""Every colour of the window, for light and for dark, and nothing but colours.

State colours are from the set of Okabe and Ito (2008, "Color Universal Design"), which readers with any
of the common colour deficiencies can tell apart; words, marks and weight always say the same.
"""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtGui import QColor, QPalette

_BLACK = "#000000"
_ORANGE = "#E69F00"
_SKY_BLUE = "#56B4E9"
_BLUE = "#0072B2"
_VERMILLION = "#D55E00"


@dataclass(frozen=True, slots=True)
class Colours:
    """Named by what they mean. back: pushed back or reversed; forward: pushed forward; band: reference
    interval; hairline: near-equilibrium limits and the highlight floor; caution: notes and refusals."""

    is_dark: bool
    window: str
    base: str
    alternate: str
    text: str
    muted: str
    line: str
    faint_line: str
    accent: str
    on_accent: str
    selection: str
    back: str
    forward: str
    mark: str
    band: str
    hairline: str
    compressed: str
    caution: str
    caution_back: str

    def colour(self, name: str) -> QColor:
        return QColor(getattr(self, name))


LIGHT = Colours(
    is_dark=False,
    window="#F1F2F0",
    base="#FFFFFF",
    alternate="#F8F8F6",
    text="#1B1E20",
    muted="#596066",
    line="#B9BFC3",
    faint_line="#E1E4E4",
    accent=_BLUE,
    on_accent="#FFFFFF",
    selection="#DCEAF3",
    back=_VERMILLION,
    forward=_BLUE,
    mark=_BLACK,
    band="#D3DAD9",
    hairline="#8B9499",
    compressed="#0F1B2A33",
    caution="#8A4B00",
    caution_back="#FFF3DC",
)

DARK = Colours(
    is_dark=True,
    window="#202427",
    base="#171A1C",
    alternate="#1B1F21",
    text="#E8EAEA",
    muted="#A3ACB1",
    line="#4B5359",
    faint_line="#2C3236",
    accent=_SKY_BLUE,
    on_accent="#10181D",
    selection="#26404F",
    back=_ORANGE,
    forward=_SKY_BLUE,
    mark="#F2F4F4",
    band="#39434A",
    hairline="#727D84",
    compressed="#12FFFFFF",
    caution="#F0C36B",
    caution_back="#3A3120",
)


def colours_of(dark: bool) -> Colours:
    return DARK if dark else LIGHT


def qt_palette(colours: Colours) -> QPalette:
    """The application palette made of `colours`."""
    palette = QPalette()
    role, group = QPalette.ColorRole, QPalette.ColorGroup
    named = {
        role.Window: "window",
        role.WindowText: "text",
        role.Base: "base",
        role.AlternateBase: "alternate",
        role.Text: "text",
        role.Button: "window",
        role.ButtonText: "text",
        role.BrightText: "back",
        role.ToolTipBase: "base",
        role.ToolTipText: "text",
        role.PlaceholderText: "muted",
        role.Highlight: "accent",
        role.HighlightedText: "on_accent",
        role.Link: "accent",
        role.LinkVisited: "accent",
        role.Mid: "line",
        role.Midlight: "faint_line",
        role.Light: "base",
        role.Dark: "line",
        role.Shadow: "line",
        role.Accent: "accent",
    }
    for which, name in named.items():
        palette.setColor(which, colours.colour(name))
    for which in (role.WindowText, role.Text, role.ButtonText):
        faded = colours.colour("muted")
        faded.setAlpha(150)
        palette.setColor(group.Disabled, which, faded)
    return palette
