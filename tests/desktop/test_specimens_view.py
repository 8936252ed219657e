"""The list of specimens: participants with their specimens, controls apart, how many steps are off."""

from __future__ import annotations

from panelview.desktop.specimens_view import entries_of


def test_serial_specimens_stand_under_their_participant(review):
    entries = entries_of(review)
    heading = next(k for k, e in enumerate(entries) if e.text.startswith("P1 · 2 specimens"))
    assert entries[heading].specimen == -1
    assert [e.text for e in entries[heading + 1 : heading + 3]] == ["P1-a", "P1-b"]
    assert all(e.indented for e in entries[heading + 1 : heading + 3])


def test_controls_come_last_and_are_told_apart(review):
    entries = [e for e in entries_of(review) if e.specimen >= 0]
    kinds = [e.is_control for e in entries]
    assert kinds == sorted(kinds)
    assert sum(kinds) == 24
    assert all(e.spoken.startswith("control specimen") for e in entries if e.is_control)


def test_each_specimen_says_how_many_steps_are_off(review, specimen):
    entry = next(e for e in entries_of(review) if e.text == "P1-a")
    off = int(review.findings.highlighted[specimen("P1-a")].sum())
    assert off > 0
    assert entry.off_words == f"{off} off"
    assert f"{off} of {entry.read} steps off" in entry.spoken


def test_the_list_can_be_searched(review):
    found = [e.text for e in entries_of(review, "p1") if e.specimen >= 0]
    assert found == ["P1-a", "P1-b"]
    assert entries_of(review, "nobody") == []
