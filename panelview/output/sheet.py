"""The sheet a page is printed on: A4, running head, caution and "page x of y", the same bytes each time."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from functools import partial
from hashlib import md5
from pathlib import Path
from typing import Any, BinaryIO

from reportlab.lib.pagesizes import A4, landscape
from reportlab.pdfbase.pdfdoc import PDFInfo
from reportlab.pdfbase.pdfmetrics import stringWidth
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus import BaseDocTemplate, Flowable, Frame, PageTemplate

from panelview.output.fonts import BOLD, REGULAR, register_fonts
from panelview.output.text import CAUTION

#: Margins in pt: 15 mm at the sides; head and foot hold the running lines.
SIDE = 42.5
HEAD = 45.0
FOOT = 52.0
WIDTH = A4[0] - 2 * SIDE
HEIGHT = A4[1] - HEAD - FOOT


@dataclass(frozen=True, slots=True)
class Running:
    """What stands on every page and in the file's description.

    title: of the document; left: running head (specimen, participant); foot: versions and date; subject:
    one sentence for the file's properties; identity: text that tells this document from others (hashes).
    """

    title: str
    left: str
    foot: str
    subject: str
    identity: str


def build(
    story: Sequence[Flowable],
    target: Path | BinaryIO,
    running: Running,
    when: datetime | None,
    *,
    wide: bool = False,
) -> None:
    """Lay the story out and write it to `target`; `wide` turns the sheet. Raises OSError."""
    size = landscape(A4) if wide else A4
    template = BaseDocTemplate(
        str(target) if isinstance(target, Path) else target,
        pagesize=size,
        title=running.title,
        author="",
        subject=running.subject,
        creator="Panelview",
        producer="Panelview with reportlab",
        keywords="research use only",
        lang="en",
        initialFontName=REGULAR,
        initialFontSize=8,
    )
    frame = Frame(SIDE, FOOT, size[0] - 2 * SIDE, size[1] - HEAD - FOOT, 0, 0, 0, 0, id="body")
    template.addPageTemplates(PageTemplate(id="sheet", frames=[frame]))
    template.build(list(story), canvasmaker=partial(_Sheets, running=running, when=when))


class SectionMark(Flowable):
    """A place that the file's outline points to; takes no room."""

    def __init__(self, title: str) -> None:
        super().__init__()
        self._title = title

    def wrap(self, _width: float, _height: float) -> tuple[float, float]:
        """Nothing."""
        return 0.0, 0.0

    def draw(self) -> None:
        """Tell the sheet; it makes the outline when the number of pages is known."""
        _, top = self.canv.absolutePosition(0, 0)
        self.canv.mark_section(self._title, top)


class _Sheets(Canvas):
    """Holds all pages back until their number is known, then writes head and foot on each."""

    def __init__(self, *args: Any, running: Running, when: datetime | None, **options: Any) -> None:
        register_fonts()
        super().__init__(*args, **(options | {"invariant": 1}))
        self._running = running
        self._held: list[dict[str, Any]] = []
        self._sections: list[tuple[str, float]] = []
        # reportlab would take time and file id from the clock or the environment; both come from the review.
        self._doc._timeStamp = _Moment(when)
        self._doc.info = _Info(when is not None)
        moment = "" if when is None else when.isoformat()
        self._doc.signature = md5(f"{running.identity} {moment}".encode(), usedforsecurity=False)

    def mark_section(self, title: str, top: float) -> None:
        """Note a section that begins on the page in hand."""
        self._sections.append((title, top))

    def showPage(self) -> None:  # noqa: N802 - reportlab calls it so
        """Keep the page for later."""
        self._held.append(dict(self.__dict__))
        self._startPage()
        self._sections = []

    def save(self) -> None:
        """Write all pages with their numbers, then the file."""
        pages = list(self._held)
        for number, state in enumerate(pages, start=1):
            self.__dict__.update(state)
            self._write_frame(number, len(pages))
            for k, (title, top) in enumerate(self._sections):
                key = f"section-{number}-{k}"
                self.bookmarkHorizontal(key, 0, min(top + 14, self._pagesize[1]))
                self.addOutlineEntry(title, key, level=0, closed=False)
            super().showPage()
        self._doc.info.title = self._running.title
        super().save()

    def _write_frame(self, number: int, count: int) -> None:
        width, height = self._pagesize
        self.saveState()
        self.setFillGray(0)
        self.setStrokeGray(0.45)
        self.setLineWidth(0.5)
        top = height - 30
        self.setFont(REGULAR, 7)
        place = f"Page {number} of {count}"
        self.drawRightString(width - SIDE, top, place)
        room = width - 2 * SIDE - stringWidth(place, REGULAR, 7) - 12
        self.drawString(SIDE, top, fitted(self._running.left, REGULAR, 7, room))
        self.line(SIDE, top - 5, width - SIDE, top - 5)
        self.line(SIDE, FOOT - 8, width - SIDE, FOOT - 8)
        self.setFont(BOLD, 7.6)
        self.drawCentredString(width / 2, FOOT - 18, CAUTION)
        self.setFont(REGULAR, 6)
        self.drawCentredString(width / 2, FOOT - 27, fitted(self._running.foot, REGULAR, 6, width - 2 * SIDE))
        self.restoreState()


def fitted(text: str, font: str, size: float, room: float) -> str:
    """`text`, shortened with “…” where wider than `room` pt; the full text stands elsewhere."""
    if stringWidth(text, font, size) <= room:
        return text
    room -= stringWidth("…", font, size)
    kept = 0
    for character in text:
        room -= stringWidth(character, font, size)
        if room < 0:
            break
        kept += 1
    return f"{text[:kept]}…"


class _Moment:
    """The time stamp that reportlab prints into the file's description."""

    def __init__(self, when: datetime | None) -> None:
        moment = when or datetime(2000, 1, 1, tzinfo=UTC)
        offset = moment.utcoffset()
        minutes = 0 if offset is None else round(offset.total_seconds() / 60)
        self.dhh = int(minutes / 60)
        self.dmm = abs(minutes) % 60
        self.YMDhms = moment.timetuple()[:6]


class _Info(PDFInfo):
    """The file's description; without a stated time it holds no dates at all."""

    def __init__(self, dated: bool) -> None:
        super().__init__()
        self._dated = dated

    def format(self, document: Any) -> Any:
        if self._dated:
            return super().format(document)
        from reportlab.pdfbase.pdfdoc import PDFDictionary, PDFString

        words = {
            "Title": self.title,
            "Author": self.author,
            "Subject": self.subject,
            "Creator": self.creator,
            "Producer": self.producer,
            "Keywords": self.keywords,
        }
        return PDFDictionary({k: PDFString(v) for k, v in words.items()}).format(document)
