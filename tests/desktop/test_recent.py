"""Files opened before."""

from __future__ import annotations

from PySide6.QtCore import QSettings

from panelview.desktop.recent import MOST, RecentFiles


def files_in(folder, count):
    paths = [folder / f"{k}.csv" for k in range(count)]
    for path in paths:
        path.write_text("", encoding="utf-8")
    return paths


def test_the_last_file_stands_first_once_and_the_list_is_bounded(tmp_path):
    store = QSettings(str(tmp_path / "s.ini"), QSettings.Format.IniFormat)
    recent = RecentFiles(store)
    paths = files_in(tmp_path, MOST + 3)
    for path in [*paths, paths[5]]:
        recent.add(path)
    assert recent.paths()[0] == paths[5].resolve()
    assert len(recent.paths()) == MOST
    assert len(set(recent.paths())) == MOST


def test_it_is_kept_between_runs_and_forgets_files_that_are_gone(tmp_path):
    ini = str(tmp_path / "s.ini")
    (only,) = files_in(tmp_path, 1)
    store = QSettings(ini, QSettings.Format.IniFormat)
    RecentFiles(store).add(only)
    store.sync()
    again = RecentFiles(QSettings(ini, QSettings.Format.IniFormat))
    assert again.paths() == [only.resolve()]
    only.unlink()
    assert again.paths() == []
