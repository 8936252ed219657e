"""Where the data files of the program are, in a checkout and in an installed wheel alike."""

from __future__ import annotations

from pathlib import Path

_PACKAGE = Path(__file__).resolve().parent


def _folder(name: str) -> Path:
    """The data folder `name`: inside the package (wheel) or beside it (checkout)."""
    inside = _PACKAGE / name
    return inside if inside.is_dir() else _PACKAGE.parent / name


def resources() -> Path:
    """Folder of the catalogue tables, fonts, icons, help and schemas."""
    return _folder("resources")


def sample_data() -> Path:
    """Folder of the invented sample studies."""
    return _folder("sample_data")
