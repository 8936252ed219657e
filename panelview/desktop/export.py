"""What leaves the window: pages, tables, a figure of the strips, text for the clipboard."""

from __future__ import annotations

import csv
import io
import os
import tempfile
from datetime import datetime
from pathlib import Path

from PySide6.QtCore import QRectF, QSize, Qt
from PySide6.QtGui import QFont, QFontMetricsF, QImage, QPainter

from panelview.assess.review import Review
from panelview.desktop.cells import HEADINGS, Cell, cell_text
from panelview.desktop.palette import LIGHT
from panelview.desktop.strip_painter import StripPainter
from panelview.desktop.work import Token
from panelview.output.labels import call_text, step_name
from panelview.output.scale import Axis, scale_of
from panelview.output.strip import strip_of
from panelview.output.text import CAUTION

#: Sizes of an exported figure, px at scale 1.
_ROW = 24
_NAME_WIDTH = 240
_STRIP_WIDTH = 520
_CALL_WIDTH = 250
_PICTURE_SCALE = 2


def write_page_file(review: Review, specimen: int, path: Path, when: datetime, token: Token) -> Path:
    """Write the page of one specimen; an older file is replaced only by a whole new one. Raises OSError."""
    from panelview.output.pages import write_page

    token.report(0, 0, path.name)
    page = io.BytesIO()
    write_page(review, specimen, page, when=when)
    token.check()
    _write_whole(path, page.getvalue())
    return path


def write_folder(review: Review, folder: Path, when: datetime, token: Token) -> Path:
    """Write tables, pages and review.json of all specimens; a stopped run leaves nothing behind."""
    from panelview.output.batch import write_review

    write_review(review, folder, when=when, progress=token.report, cancelled=lambda: token.cancelled, jobs=1)
    return folder


def _write_whole(path: Path, content: bytes) -> None:
    """Write beside the file and rename, so that nobody ever sees half of it."""
    handle, name = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
        Path(name).replace(path)
    except BaseException:
        Path(name).unlink(missing_ok=True)
        raise


def table_text(review: Review, specimen: int, columns: list[int], axis: Axis, delimiter: str) -> str:
    """The step table as text, one line a step, with a header and the caution."""
    shown = [cell for cell in Cell if cell is not Cell.STRIP]
    out = io.StringIO()
    writer = csv.writer(out, delimiter=delimiter, lineterminator="\n")
    writer.writerow(["Specimen", *(HEADINGS[cell].replace("\n", ", ") for cell in shown), "Reason"])
    code = review.specimens[specimen].code
    for column in columns:
        texts = [cell_text(review, specimen, column, cell, axis) for cell in shown]
        writer.writerow([_safe(t) for t in (code, *texts, review.reason(specimen, column))])
    writer.writerow([CAUTION])
    return out.getvalue()


def _safe(text: str) -> str:
    """Text that a spreadsheet will not take for a formula (OWASP, CSV injection)."""
    is_number = text.replace("+", "").replace("−", "").replace("±", "").replace(" ", "").replace(".", "").isdigit()
    return f"'{text}" if text[:1] in ("=", "+", "-", "@", "\t") and not is_number else text


class StripFigure:
    """The strips of the shown steps as a figure for a report or a slide: always in light colours."""

    def __init__(self, review: Review, specimen: int, columns: list[int], axis: Axis, font: QFont) -> None:
        self._review = review
        self._specimen = specimen
        self._columns = columns
        self._axis = axis
        self._font = QFont(font)
        self._font.setPixelSize(12)
        self._strips = StripPainter(scale_of(review, axis), LIGHT)

    @property
    def size(self) -> QSize:
        """Width and height, px."""
        height = 2 * _ROW + 40 + _ROW * len(self._columns) + _ROW
        return QSize(_NAME_WIDTH + _STRIP_WIDTH + _CALL_WIDTH, height)

    def paint(self, painter: QPainter) -> None:
        """Title, axis, one row a step, caution."""
        painter.setFont(self._font)
        painter.fillRect(QRectF(0, 0, self.size.width(), self.size.height()), Qt.GlobalColor.white)
        facts = self._review.specimens[self._specimen]
        title = f"{facts.code} · compared with {self._review.reference.label}"
        self._text(painter, QRectF(8, 0, self.size.width() - 16, _ROW), title, bold=True)
        top = float(_ROW)
        self._strips.paint_axis(painter, QRectF(_NAME_WIDTH, top, _STRIP_WIDTH, 40), self._axis)
        top += 40
        for column in self._columns:
            self._paint_row(painter, top, column)
            top += _ROW
        self._text(painter, QRectF(8, top + 6, self.size.width() - 16, _ROW), CAUTION)

    def _paint_row(self, painter: QPainter, top: float, column: int) -> None:
        strip = strip_of(self._review, self._specimen, column, self._axis)
        bold = bool(strip.side)
        name = f"{step_name(self._review, column)}  {self._review.columns[column].step.enzyme}"
        self._text(painter, QRectF(8, top, _NAME_WIDTH - 12, _ROW), name, bold)
        area = QRectF(_NAME_WIDTH, top, _STRIP_WIDTH, _ROW)
        if strip.reason:
            self._text(painter, area.adjusted(8, 0, -8, 0), strip.reason)
        else:
            self._strips.paint(painter, area, strip)
        words = call_text(self._review, self._specimen, column)
        self._text(painter, QRectF(area.right() + 8, top, _CALL_WIDTH - 12, _ROW), words, bold)

    def _text(self, painter: QPainter, area: QRectF, text: str, bold: bool = False) -> None:
        font = QFont(self._font)
        font.setBold(bold)
        painter.setFont(font)
        painter.setPen(LIGHT.colour("text"))
        shown = QFontMetricsF(font).elidedText(text, Qt.TextElideMode.ElideRight, area.width())
        painter.drawText(area, Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter, shown)
        painter.setFont(self._font)

    def write(self, path: Path) -> None:
        """Write SVG or PNG by the file's ending. Raises OSError."""
        if path.suffix.lower() == ".svg":
            self._write_svg(path)
            return
        image = QImage(self.size * _PICTURE_SCALE, QImage.Format.Format_ARGB32)
        image.setDevicePixelRatio(_PICTURE_SCALE)
        painter = QPainter(image)
        self.paint(painter)
        painter.end()
        if not image.save(str(path)):
            raise OSError(f"{path} could not be written")

    def _write_svg(self, path: Path) -> None:
        from PySide6.QtCore import QBuffer, QByteArray, QIODevice
        from PySide6.QtSvg import QSvgGenerator

        content = QByteArray()
        buffer = QBuffer(content)
        buffer.open(QIODevice.OpenModeFlag.WriteOnly)
        generator = QSvgGenerator()
        generator.setOutputDevice(buffer)
        generator.setSize(self.size)
        generator.setViewBox(QRectF(0, 0, self.size.width(), self.size.height()))
        generator.setTitle(f"Balance strips of {self._review.specimens[self._specimen].code}")
        generator.setDescription(CAUTION)
        painter = QPainter(generator)
        self.paint(painter)
        painter.end()
        _write_whole(path, bytes(content.data()))
