"""The printed page: what is on it, that it is whole, and that it is the same each time."""

from __future__ import annotations

import io
import os
import re
import subprocess
import sys
from collections.abc import Iterator
from dataclasses import replace
from datetime import datetime
from hashlib import sha256
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from pypdf import PdfReader

from panelview.assess.calls import Assessability
from panelview.assess.evidence import evidence
from panelview.assess.review import Review
from panelview.assess.sentences import call_words
from panelview.output.cohort import cell_mark, write_cohort
from panelview.output.labels import step_title
from panelview.output.page_calls import highlighted_columns
from panelview.output.page_end import SIGNATURE
from panelview.output.pages import write_page
from panelview.output.text import CAUTION, CAUTIONS, concentration


def _row(review: Review, code: str) -> int:
    return next(k for k, s in enumerate(review.specimens) if s.code == code)


def _page(review: Review, code: str, when: datetime | None) -> bytes:
    stream = io.BytesIO()
    write_page(review, _row(review, code), stream, when=when)
    return stream.getvalue()


def _texts(data: bytes) -> list[str]:
    return [page.extract_text() for page in PdfReader(io.BytesIO(data)).pages]


def _flat(text: str) -> str:
    """Text without any blanks, as lines wrap where they like."""
    return "".join(text.split())


def _fonts(data: bytes) -> Iterator[tuple[str, Any]]:
    for page in PdfReader(io.BytesIO(data)).pages:
        for font in page["/Resources"]["/Font"].values():  # type: ignore[index]
            yield font.get_object()["/BaseFont"], font.get_object()


@pytest.fixture(scope="session")
def held_back(red_cells: Review, when: datetime) -> bytes:
    return _page(red_cells, "P1-a", when)


@pytest.fixture(scope="session")
def overview(red_cells: Review, when: datetime) -> bytes:
    stream = io.BytesIO()
    write_cohort(red_cells, stream, when=when)
    return stream.getvalue()


def test_the_caution_and_the_page_number_stand_on_every_page(held_back: bytes, overview: bytes) -> None:
    for data in (held_back, overview):
        texts = _texts(data)
        assert len(texts) > 1
        for number, text in enumerate(texts, start=1):
            assert CAUTION in text
            assert f"Page {number} of {len(texts)}" in text


def test_every_font_is_embedded_and_none_is_foreign(held_back: bytes, overview: bytes) -> None:
    for data in (held_back, overview):
        fonts = list(_fonts(data))
        assert fonts
        for name, font in fonts:
            assert "DejaVuSans" in name
            assert "/FontFile2" in font["/FontDescriptor"]
            assert "/ToUnicode" in font
        assert b"Helvetica" not in data


def test_the_text_can_be_searched_with_its_greek_primes_and_units(held_back: bytes) -> None:
    text = "\n".join(_texts(held_back))
    for words in ("ΔG′", "ΔrG′°", "K′eq", "Γ", "µmol/L", "mmol/L", "kJ/mol", "⇌", "−", "±", "NAD⁺/NADH"):
        assert words in text


def test_the_call_and_the_evidence_of_a_highlighted_step_are_printed(
    held_back: bytes, red_cells: Review
) -> None:
    row = _row(red_cells, "P1-a")
    columns = highlighted_columns(red_cells, row)
    text = _flat("".join(_texts(held_back)))
    assert columns
    for column in columns:
        found = evidence(red_cells, row, column)
        for words in (step_title(red_cells, column), found.call, found.sentence, found.equation_numbers):
            assert _flat(words) in text


def test_every_readable_step_is_in_the_table_with_its_numbers(held_back: bytes, red_cells: Review) -> None:
    row = _row(red_cells, "P1-a")
    text = _flat("".join(_texts(held_back)))
    levels = red_cells.findings.assessability[row]
    readable = [c for c in range(len(red_cells.columns)) if levels[c] <= Assessability.PROXY]
    assert len(readable) > 8
    for column in readable:
        assert _flat(red_cells.columns[column].step.short) in text
        assert _flat(call_words(red_cells, row, column)) in text


def test_every_step_not_read_is_listed_with_its_reason(red_cells: Review, when: datetime) -> None:
    row = _row(red_cells, "P4")
    text = _flat("".join(_texts(_page(red_cells, "P4", when))))
    for column, entry in enumerate(red_cells.columns[: len(red_cells.catalogue.steps)]):
        if red_cells.findings.assessability[row, column] > Assessability.PROXY:
            assert _flat(entry.step.short) in text
            reason = red_cells.reason(row, column).removeprefix("not measured: ")
            assert _flat(reason) in text


def test_reported_and_used_values_and_their_place_are_printed(held_back: bytes, red_cells: Review) -> None:
    text = _flat("".join(_texts(held_back)))
    readings = red_cells.panel.readings
    for k in np.flatnonzero(readings.specimen == _row(red_cells, "P1-a")):
        assert _flat(f"{readings.value[k]} {readings.unit[k]}") in text
        if np.isfinite(readings.mol_per_l[k]):
            assert _flat(concentration(float(readings.mol_per_l[k]))) in text
    assert _flat("study.csv, row 26") in text


def test_what_was_left_out_and_what_was_assumed_are_told(held_back: bytes) -> None:
    text = _flat("".join(_texts(held_back)))
    assert _flat("“Odd” is no analyte we know; rename the column") in text
    assert _flat("Of an unknown name: odd.") in text
    assert _flat("no CV in the file; 5 % was taken for each assay") in text


def test_a_problem_of_one_specimen_is_not_told_of_another(red_cells: Review, when: datetime) -> None:
    assert "is no analyte we know" not in "".join(_texts(_page(red_cells, "P4", when)))


def test_conditions_are_printed_with_uncertainty_and_origin(held_back: bytes) -> None:
    text = _flat(_texts(held_back)[0])
    for words in (
        "7.20 ± 0.05, default of the matrix",
        "37.0 ± 0.5 °C, default of the matrix",
        "not recorded",
    ):
        assert _flat(words) in text


def test_cautions_signatures_and_provenance_are_printed(held_back: bytes, red_cells: Review) -> None:
    text = _flat("".join(_texts(held_back)))
    assert _flat(SIGNATURE) in text
    for words in (*CAUTIONS, "Question asked", "Agreed next step", "Laboratory reviewer"):
        assert _flat(words) in text
    assert red_cells.panel.sources[0].sha256 in text
    assert red_cells.catalogue.sha256 in text


def test_signs_that_mark_up_text_are_printed_as_they_are(red_cells: Review, when: datetime) -> None:
    text = "".join(_texts(_page(red_cells, "P3 <ß & µ>", when)))
    assert "P3 <ß & µ>" in text


def test_a_value_below_its_limit_is_printed_as_a_bound(red_cells: Review, when: datetime) -> None:
    text = "".join(_texts(_page(red_cells, "P3 <ß & µ>", when)))
    assert "below 10.0 µmol/L" in text
    assert "at least" in text


def test_the_file_tells_title_language_and_time(held_back: bytes) -> None:
    reader = PdfReader(io.BytesIO(held_back))
    assert reader.metadata is not None
    assert reader.metadata.title == "Metabolite panel review of specimen P1-a"
    assert "Research use only" in str(reader.metadata.subject)
    assert reader.metadata.creation_date == datetime.fromisoformat("2026-05-04T14:30:00+00:00")
    assert reader.trailer["/Root"]["/Lang"] == "en"  # type: ignore[index]
    assert {"Steps that are off", "Cautions"} <= {item.title for item in reader.outline}  # type: ignore[union-attr]


def test_without_a_stated_time_no_date_is_in_the_file(red_cells: Review) -> None:
    data = _page(red_cells, "P4", None)
    assert b"CreationDate" not in data
    assert "time of printing not stated" in _texts(data)[0]


def test_the_same_review_and_time_give_the_same_bytes(
    red_cells: Review, held_back: bytes, when: datetime
) -> None:
    assert _page(red_cells, "P1-a", when) == held_back


def test_another_time_gives_other_bytes(red_cells: Review, held_back: bytes, when: datetime) -> None:
    assert _page(red_cells, "P1-a", when.replace(hour=15)) != held_back


_SCRIPT = """
import io, sys
sys.path.insert(0, {tests!r})
from datetime import UTC, datetime
from panels import RED_CELL, Specimen, panel_of
from panelview.assess.assess import assess
from panelview.catalogue.load import load_catalogue
from panelview.output.pages import write_page
from hashlib import sha256
review = assess(panel_of([Specimen("A", RED_CELL)]), load_catalogue())
stream = io.BytesIO()
write_page(review, 0, stream, when=datetime(2026, 5, 4, tzinfo=UTC))
print(sha256(stream.getvalue()).hexdigest())
"""


def test_the_bytes_do_not_depend_on_hash_seed_time_zone_or_folder(tmp_path: Path) -> None:
    script = _SCRIPT.format(tests=str(Path(__file__).parents[1]))
    root = str(Path(__file__).parents[2])
    digests = set()
    for seed, zone, epoch in (("0", "UTC", "315532800"), ("77", "Asia/Tokyo", "1000000000")):
        environment = os.environ | {
            "PYTHONHASHSEED": seed,
            "TZ": zone,
            "SOURCE_DATE_EPOCH": epoch,
            "PYTHONPATH": root,
        }
        done = subprocess.run(
            [sys.executable, "-c", script],
            cwd=tmp_path,
            env=environment,
            capture_output=True,
            check=True,
            text=True,
        )
        digests.add(done.stdout.strip())
    assert len(digests) == 1
    assert len(digests.pop()) == len(sha256().hexdigest())


def test_long_texts_wrap_and_none_is_lost(red_cells: Review, when: datetime) -> None:
    code = "X" * 150 + " " + "long code " * 6
    note = " ".join(f"word{k}" for k in range(1500))
    row = _row(red_cells, "P4")
    specimens = tuple(replace(s, code=code) if k == row else s for k, s in enumerate(red_cells.specimens))
    notes = red_cells.panel.readings.note.copy()
    notes[int(np.flatnonzero(red_cells.panel.readings.specimen == row)[0])] = note
    readings = replace(red_cells.panel.readings, note=notes)
    review = replace(red_cells, specimens=specimens, panel=replace(red_cells.panel, readings=readings))
    stream = io.BytesIO()
    write_page(review, row, stream, when=when)
    texts = _texts(stream.getvalue())
    assert _flat(code) in _flat(texts[0])
    found = re.findall(r"word(\d+)", "".join(texts))
    assert {int(k) for k in found} == set(range(1500))


def test_the_text_of_a_page_lies_within_its_margins(held_back: bytes) -> None:
    for page in PdfReader(io.BytesIO(held_back)).pages:
        places: list[tuple[float, float]] = []

        def note(text: str, _cm: Any, tm: Any, _font: Any, _size: Any, places: Any = places) -> None:
            if text.strip():
                places.append((tm[4], tm[5]))

        page.extract_text(visitor_text=note)
        width, height = float(page.mediabox.width), float(page.mediabox.height)
        assert all(0 <= x <= width and 0 <= y <= height for x, y in places)


def test_the_overview_holds_every_specimen_and_every_highlight(overview: bytes, red_cells: Review) -> None:
    text = _flat("".join(_texts(overview)))
    for facts in red_cells.specimens:
        assert _flat(facts.code) in text
    for i in range(len(red_cells.specimens)):
        for c in highlighted_columns(red_cells, i):
            assert _flat(call_words(red_cells, i, c)) in text


def test_the_overview_s_marks_tell_states_apart_without_colour(red_cells: Review) -> None:
    column = {e.step.id: c for c, e in reversed(list(enumerate(red_cells.columns)))}
    held, censored, lacking = (_row(red_cells, code) for code in ("P1-a", "P3 <ß & µ>", "P4"))
    assert cell_mark(red_cells, held, column["pyruvate_kinase"]).startswith("▼−")
    assert cell_mark(red_cells, held, column["enolase"]) == "•"
    assert cell_mark(red_cells, censored, column["pyruvate_kinase"]).startswith("▼≤−")
    assert cell_mark(red_cells, lacking, column["phosphofructokinase_1"]) == "–"
    assert cell_mark(red_cells, held, column["glucose_6_phosphatase"]) == ""


def test_a_proxy_is_marked_as_one_on_the_page_and_in_the_overview(plasma: Review, when: datetime) -> None:
    column = next(c for c, e in enumerate(plasma.columns) if e.step.id == "lactate_dehydrogenase")
    assert cell_mark(plasma, 0, column).startswith("(")
    assert "(proxy)" in "".join(_texts(_page(plasma, "D1", when)))
    assert "Shift against published values" in "".join(_texts(_page(plasma, "D1", when)))
