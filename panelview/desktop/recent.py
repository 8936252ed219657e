"""Files opened before: ten at most, the last first, kept between runs."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QSettings

MOST = 10
_KEY = "files/recent"


class RecentFiles:
    """The list in the user's settings; files that are gone are left out."""

    def __init__(self, store: QSettings) -> None:
        self._store = store

    def paths(self) -> list[Path]:
        kept = self._store.value(_KEY, [])
        texts = kept if isinstance(kept, list) else [kept]
        return [path for path in map(Path, map(str, texts)) if path.is_file()]

    def add(self, path: Path) -> None:
        whole = path.resolve()
        others = [p for p in self.paths() if p != whole]
        self._store.setValue(_KEY, [str(p) for p in (whole, *others)][:MOST])

    def clear(self) -> None:
        self._store.remove(_KEY)
