"""Writes a whole review into a folder, all or nothing: no run leaves a half-written folder."""

from __future__ import annotations

import errno
import json
import os
import shutil
import tempfile
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import ProcessPoolExecutor
from contextlib import contextmanager
from datetime import datetime
from multiprocessing import get_context
from pathlib import Path

from panelview.assess.review import Review
from panelview.output.document import FORMAT, write_document
from panelview.output.file_names import page_names
from panelview.output.tables import TABLES, write_table

#: From this many specimens on there is a page over all of them.
LEAST_FOR_COHORT = 3

DOCUMENT = "review.json"
COHORT = "cohort.pdf"

Progress = Callable[[int, int, str], None]


class OutputFailed(Exception):
    """The review could not be written: `path`, `what` is wrong, and `remedy`; nothing was changed."""

    def __init__(self, path: Path, what: str, remedy: str) -> None:
        super().__init__(path, what, remedy)
        self.path = path
        self.what = what
        self.remedy = remedy

    def __str__(self) -> str:
        return f"{self.path}: {self.what}; {self.remedy}"


class OutputCancelled(Exception):
    """The reader stopped the writing; nothing was changed."""


def write_review(
    review: Review,
    out: Path,
    *,
    pdf: bool = True,
    when: datetime | None = None,
    progress: Progress | None = None,
    cancelled: Callable[[], bool] | None = None,
    jobs: int = 1,
) -> tuple[Path, ...]:
    """Write tables, review.json and, with `pdf`, the pages into the folder `out`.

    Everything is written into a new folder beside `out` and renamed at the end. `out` may be absent,
    empty, or hold an earlier review and nothing else, which is then replaced as a whole. progress is
    called with (done, total, file name); cancelled is asked between files; jobs: processes that draw
    pages. Returns the files written. Raises OutputFailed, OutputCancelled.
    """
    out = Path(os.path.abspath(out))  # noqa: PTH100 - resolve() would follow a link and hide it
    with _told(out):
        _check_place(out)
        out.parent.mkdir(parents=True, exist_ok=True)
        # The folder inside gets the usual permissions; mkdtemp's own is private.
        workplace = Path(tempfile.mkdtemp(prefix=f"{out.name}.partial-", dir=out.parent))
    try:
        partial = workplace / out.name
        with _told(out, inside=partial):
            partial.mkdir()
            names = _Writer(review, partial, pdf, when, jobs).run(_teller(progress, cancelled))
            _put_in_place(partial, out)
    finally:
        shutil.rmtree(workplace, ignore_errors=True)
    return tuple(out / name for name in names)


def _teller(progress: Progress | None, cancelled: Callable[[], bool] | None) -> Progress:
    def tell(done: int, total: int, name: str) -> None:
        if cancelled is not None and cancelled():
            raise OutputCancelled
        if progress is not None:
            progress(done, total, name)

    return tell


class _Writer:
    """Writes the files of one review into one folder."""

    def __init__(self, review: Review, folder: Path, pdf: bool, when: datetime | None, jobs: int) -> None:
        self._review = review
        self._folder = folder
        self._when = when
        self._jobs = jobs
        self._pages = page_names(s.code for s in review.specimens) if pdf else []
        self._has_cohort = pdf and len(review.specimens) >= LEAST_FOR_COHORT

    def run(self, tell: Progress) -> list[str]:
        """Write all files, told one by one; returns their names."""
        cohort = [COHORT] if self._has_cohort else []
        names = [*TABLES, DOCUMENT, *cohort, *self._pages]
        for done, name in enumerate(self._each(names)):
            tell(done + 1, len(names), name)
        return names

    def _each(self, names: Sequence[str]) -> Iterator[str]:
        for name in TABLES:
            write_table(self._review, name, self._folder / name)
            yield name
        write_document(self._review, self._folder / DOCUMENT, when=self._when, files=names)
        yield DOCUMENT
        if self._has_cohort:
            from panelview.output.cohort import write_cohort

            write_cohort(self._review, self._folder / COHORT, when=self._when)
            yield COHORT
        yield from self._write_pages()

    def _write_pages(self) -> Iterator[str]:
        tasks = [(i, self._folder / name, self._when) for i, name in enumerate(self._pages)]
        if self._jobs <= 1 or len(tasks) <= 1:
            for task in tasks:
                _draw(self._review, *task)
                yield task[1].name
            return
        # Spawned, not forked: the window has threads, and a fork would copy their locks.
        workers = min(self._jobs, len(tasks))
        pool = ProcessPoolExecutor(workers, get_context("spawn"), _receive, (self._review,))
        try:
            for task, _ in zip(tasks, pool.map(_draw_received, tasks), strict=True):
                yield task[1].name
        finally:
            pool.shutdown(wait=True, cancel_futures=True)


def _draw(review: Review, specimen: int, path: Path, when: datetime | None) -> None:
    from panelview.output.pages import write_page

    write_page(review, specimen, path, when=when)


_received: list[Review] = []


def _receive(review: Review) -> None:
    """Keep the review in a worker process, so that it is sent once and not with every page."""
    _received.append(review)


def _draw_received(task: tuple[int, Path, datetime | None]) -> None:
    _draw(_received[0], *task)


def _check_place(out: Path) -> None:
    """Refuse a place whose present content is not ours to replace. Raises OutputFailed, OSError."""
    if out.is_symlink() or (out.exists() and not out.is_dir()):
        raise OutputFailed(out, "is not a folder", "name a folder that does not exist yet")
    if not out.exists():
        return
    if out == Path.cwd():
        raise OutputFailed(out, "is the folder that the program runs in", "name a folder inside it")
    earlier = _earlier_files(out)
    foreign = sorted(p.name for p in out.iterdir() if p.name not in earlier or not p.is_file())
    if foreign:
        raise OutputFailed(
            out,
            f"the folder holds something that is not part of an earlier review (“{foreign[0]}”)",
            "name a new or an empty folder, or move that file elsewhere",
        )


def _earlier_files(out: Path) -> frozenset[str]:
    """Names of the files that an earlier review wrote into `out`; none where there was no review."""
    try:
        document = json.loads((out / DOCUMENT).read_text(encoding="utf-8"))
        if document["format"] != FORMAT:
            return frozenset()
        return frozenset(str(name) for name in document["files"])
    except (FileNotFoundError, NotADirectoryError, ValueError, KeyError, TypeError):
        return frozenset()


def _put_in_place(partial: Path, out: Path) -> None:
    """Rename `partial` to `out`; an earlier review steps aside first and comes back if that fails."""
    if not out.exists():
        partial.rename(out)
        return
    aside = Path(tempfile.mkdtemp(prefix=f"{out.name}.earlier-", dir=out.parent))
    earlier = aside / out.name
    out.rename(earlier)
    try:
        partial.rename(out)
    except OSError:
        earlier.rename(out)
        aside.rmdir()
        raise
    shutil.rmtree(aside, ignore_errors=True)


#: What to do about the usual ways in which writing fails.
_REMEDIES = {
    errno.ENOSPC: ("the disk is full", "free some space or choose another folder"),
    errno.EDQUOT: ("the disk quota is used up", "free some space or choose another folder"),
    errno.EACCES: ("writing is not allowed here", "check the folder's permissions or choose another folder"),
    errno.EPERM: ("writing is not allowed here", "check the folder's permissions or choose another folder"),
    errno.EROFS: ("the disk is read-only", "choose a folder on another disk"),
    errno.ENAMETOOLONG: ("the name is too long", "choose a folder with a shorter path"),
    errno.ENOTDIR: ("a part of the path is a file, not a folder", "choose another folder"),
    errno.EBUSY: ("the folder is in use", "close what uses it or choose another folder"),
    errno.EEXIST: ("a file of that name is in the way", "choose another folder"),
}


@contextmanager
def _told(out: Path, inside: Path | None = None) -> Iterator[None]:
    """Turn an operating-system error into OutputFailed; files in the folder `inside` are told as in `out`."""
    try:
        yield
    except OSError as error:
        named = Path(error.filename) if isinstance(error.filename, str) else out
        if inside is not None and named.is_relative_to(inside):
            named = out / named.relative_to(inside)
        reason = error.strerror or str(error) or type(error).__name__
        what, remedy = _REMEDIES.get(error.errno or 0, (f"it cannot be written ({reason})", "choose another folder"))
        raise OutputFailed(named, what, remedy) from error
