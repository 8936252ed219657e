"""Paragraphs and tables in the page's style; every text is escaped here and wraps, none is cut."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any
from xml.sax.saxutils import escape

from reportlab.lib.colors import Color, black
from reportlab.lib.enums import TA_RIGHT
from reportlab.lib.styles import ParagraphStyle
from reportlab.platypus import CondPageBreak, Flowable, LongTable, Paragraph, Spacer, Table, TableStyle

from panelview.output.fonts import BOLD, REGULAR
from panelview.output.sheet import SectionMark

RULE = Color(0.45, 0.45, 0.45)
FAINT_RULE = Color(0.78, 0.78, 0.78)
HEAD_GROUND = Color(0.92, 0.92, 0.92)

#: A row taller than the page is split inside, but never into a piece lower than this, pt.
_LEAST_PIECE = 60


def _style(name: str, size: float, **options: Any) -> ParagraphStyle:
    settings = {
        "fontName": REGULAR,
        "bulletFontName": REGULAR,
        "fontSize": size,
        "leading": size * 1.26,
        "textColor": black,
        "splitLongWords": 1,
    }
    return ParagraphStyle(name, **(settings | options))


TITLE = _style("title", 14, fontName=BOLD)
SUBTITLE = _style("subtitle", 9)
SECTION = _style("section", 10, fontName=BOLD, spaceBefore=9, spaceAfter=3)
BODY = _style("body", 7.8)
STRONG = _style("strong", 7.8, fontName=BOLD)
SMALL = _style("small", 6.6)
SMALL_RIGHT = _style("small right", 6.6, alignment=TA_RIGHT)
SMALL_STRONG = _style("small strong", 6.6, fontName=BOLD)
TINY = _style("tiny", 5.9)
CALL = _style("call", 9, fontName=BOLD)
CALL_RIGHT = _style("call right", 9, fontName=BOLD, alignment=TA_RIGHT)
BOXED = _style(
    "boxed",
    8.4,
    fontName=BOLD,
    borderColor=black,
    borderWidth=0.9,
    borderPadding=(3.5, 5, 4.5, 5),
    leftIndent=5.5,
    rightIndent=5.5,
)


def plain(text: str) -> str:
    """Text as paragraph markup: special signs escaped, control signs and line breaks as blanks."""
    return escape(" ".join("".join(c if c.isprintable() else " " for c in text).split()))


def bold(text: str) -> str:
    """Text as bold paragraph markup."""
    return f"<b>{plain(text)}</b>"


def paragraph(text: str, style: ParagraphStyle = BODY) -> Paragraph:
    """A paragraph of plain text."""
    return Paragraph(plain(text), style)


def marked(markup: str, style: ParagraphStyle = BODY) -> Paragraph:
    """A paragraph of markup that the caller made with `plain` and `bold`."""
    return Paragraph(markup, style)


def section(title: str, least: float = 70) -> list[Flowable]:
    """A section's heading, kept with at least `least` pt of what follows."""
    return [CondPageBreak(least), SectionMark(title), paragraph(title, SECTION)]


def gap(height: float) -> Spacer:
    """Empty room, pt."""
    return Spacer(0, height)


def table(
    rows: Sequence[Sequence[Flowable | str]],
    widths: Sequence[float],
    *,
    head: int = 1,
    extra: Sequence[tuple[Any, ...]] = (),
    padding: float = 1.6,
    rules: bool = True,
) -> LongTable:
    """A table with `head` repeated rows of headings and, with `rules`, a faint rule under each row."""
    style: list[tuple[Any, ...]] = [
        ("FONT", (0, 0), (-1, -1), REGULAR, 6.6, 8.2),
        ("VALIGN", (0, 0), (-1, -1), "TOP"),
        ("LEFTPADDING", (0, 0), (-1, -1), 2.5),
        ("RIGHTPADDING", (0, 0), (-1, -1), 2.5),
        ("TOPPADDING", (0, 0), (-1, -1), padding),
        ("BOTTOMPADDING", (0, 0), (-1, -1), padding),
    ]
    if rules:
        style += [
            ("LINEBELOW", (0, head), (-1, -1), 0.35, FAINT_RULE),
            ("LINEBELOW", (0, -1), (-1, -1), 0.6, RULE),
        ]
    if head:
        style += [
            ("LINEBELOW", (0, head - 1), (-1, head - 1), 0.8, RULE),
            ("VALIGN", (0, 0), (-1, head - 1), "BOTTOM"),
            ("FONT", (0, 0), (-1, head - 1), BOLD, 6.6, 8.2),
        ]
    return LongTable(
        [list(row) for row in rows],
        colWidths=list(widths),
        repeatRows=head,
        splitInRow=_LEAST_PIECE,
        hAlign="LEFT",
        style=TableStyle([*style, *extra]),
    )


def small_table(headings: Sequence[str], rows: Sequence[Sequence[str]], widths: Sequence[float]) -> LongTable:
    """A table of wrapping small text."""
    body = [[paragraph(cell, SMALL) for cell in row] for row in rows]
    return table([[paragraph(h, SMALL_STRONG) for h in headings], *body], widths)


def facts(rows: Sequence[tuple[str, str]], widths: tuple[float, float]) -> LongTable:
    """Label and value pairs without rules."""
    cells = [[paragraph(label, SMALL_STRONG), paragraph(value, SMALL)] for label, value in rows]
    return table(cells, widths, head=0, padding=0.8, rules=False, extra=[("LEFTPADDING", (0, 0), (0, -1), 0)])


def beside(blocks: Sequence[list[Flowable]], widths: Sequence[float]) -> Table:
    """Blocks side by side, without padding or rules."""
    bare = ("LEFTPADDING", "RIGHTPADDING", "TOPPADDING", "BOTTOMPADDING")
    return Table(
        [list(blocks)],
        colWidths=list(widths),
        splitInRow=_LEAST_PIECE,
        hAlign="LEFT",
        style=TableStyle(
            [
                ("FONT", (0, 0), (-1, -1), REGULAR, 6.6, 8.2),
                ("VALIGN", (0, 0), (-1, -1), "TOP"),
                *((side, (0, 0), (-1, -1), 0) for side in bare),
            ]
        ),
    )
