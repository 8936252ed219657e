"""README and DEVELOPERS: what they point to exists, and what they say of the program holds."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from panelview.arguments import CAUTION, COMMANDS, parser_for
from panelview.resource_files import resources

ROOT = Path(__file__).resolve().parents[1]
DOCUMENTS = ("README.md", "DEVELOPERS.md", "sample_data/README.md", "resources/README.md")


@pytest.mark.parametrize("name", DOCUMENTS)
def test_every_link_leads_to_a_file(name):
    text = (ROOT / name).read_text(encoding="utf-8")
    for target in re.findall(r"\]\((?!https?:)([^)#]+)\)", text):
        assert ((ROOT / name).parent / target).exists(), target


@pytest.mark.parametrize("name", ["README.md", "DEVELOPERS.md", "sample_data/README.md"])
def test_every_file_named_in_code_marks_exists(name):
    text = (ROOT / name).read_text(encoding="utf-8")
    named = re.findall(r"(?<!/)\b((?:packaging|panelview|resources|tests|sample_data)/[\w./]+\.\w+)", text)
    for path in named:
        assert (ROOT / path).exists(), path


def test_the_caution_stands_in_the_readme():
    assert CAUTION in " ".join((ROOT / "README.md").read_text(encoding="utf-8").split())


def test_every_option_the_readme_names_exists():
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    offered = " ".join(parser_for(command).format_help() for command in ("", *COMMANDS))
    section = text.split("## On the command line")[1].split("## Panels")[0]
    options = set(re.findall(r"--[a-z][a-z-]*[a-z]", section)) - {"--help"}
    assert len(options) > 8
    for option in options:
        assert option in offered, option


def test_the_number_of_steps_in_the_readme_is_the_catalogues(catalogue):
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    assert f"each of {len(catalogue.steps)}\ncatalogued steps" in text or f"{len(catalogue.steps)} catalogued" in text


def test_the_picture_is_small_enough_to_look_at():
    picture = resources() / "screenshots" / "red_cells.png"
    assert picture.stat().st_size < 300_000
