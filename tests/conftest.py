"""What all tests share: a screenless Qt and the shipped catalogue."""

from __future__ import annotations

import os

import pytest
from hypothesis import settings

from panelview.catalogue.load import Catalogue, load_catalogue

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

# Tests time nothing: a busy machine must not fail a law.
settings.register_profile("untimed", deadline=None)
settings.load_profile("untimed")


@pytest.fixture(scope="session")
def catalogue() -> Catalogue:
    return load_catalogue()
