"""Specimen codes as file names."""

from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from panelview.output.file_names import page_names, safe_name


def test_a_code_cannot_leave_the_folder() -> None:
    for code in ("../../etc/passwd", "/abs", "a\\b", "C:\\x", "..", ".", "", "a\0b", "x/.."):
        name = safe_name(code)
        assert name
        assert not set(name) & set('/\\:\0*?"<>|')
        assert not name.startswith(".")


def test_names_that_windows_keeps_for_devices_are_avoided() -> None:
    assert [safe_name(c) for c in ("CON", "nul", "com1.x", "control")] == [
        "_CON",
        "_nul",
        "_com1.x",
        "control",
    ]


def test_codes_that_would_collide_are_numbered() -> None:
    assert page_names(["P/1", "P_1", "p_1", "P 2"]) == ["P_1.pdf", "P_1-2.pdf", "p_1-3.pdf", "P_2.pdf"]


def test_no_page_takes_the_name_of_the_overview() -> None:
    assert page_names(["Cohort", "cohort"]) == ["Cohort-2.pdf", "cohort-3.pdf"]


@given(codes=st.lists(st.text(max_size=300), max_size=8))
def test_every_code_has_a_name_of_its_own_that_any_system_takes(codes: list[str]) -> None:
    names = page_names(codes)
    assert len(names) == len(codes)
    assert len({n.casefold() for n in names}) == len(names)
    for name in names:
        assert len(name.encode()) <= 150
        assert all(c.isalnum() or c in "._-" for c in name)
