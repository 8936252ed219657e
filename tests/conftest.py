"""What all tests share: a screenless Qt and the shipped catalogue."""

from __future__ import annotations

import os

import pytest

from panelview.catalogue.load import Catalogue, load_catalogue

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")


@pytest.fixture(scope="session")
def catalogue() -> Catalogue:
    return load_catalogue()
