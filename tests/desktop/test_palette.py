"""Colours: readable on their ground in light and dark, and state colours from the published set."""

from __future__ import annotations

import pytest

from panelview.desktop.palette import DARK, LIGHT

#: Okabe and Ito (2008), "Color Universal Design": black, orange, sky blue, bluish green, yellow, blue,
#: vermillion, reddish purple.
OKABE_ITO = {"#000000", "#E69F00", "#56B4E9", "#009E73", "#F0E442", "#0072B2", "#D55E00", "#CC79A7"}


def luminance(colour) -> float:
    """Relative luminance as WCAG 2 defines it."""
    parts = [colour.redF(), colour.greenF(), colour.blueF()]
    r, g, b = (p / 12.92 if p <= 0.04045 else ((p + 0.055) / 1.055) ** 2.4 for p in parts)
    return 0.2126 * r + 0.7152 * g + 0.0722 * b


def contrast(one, other) -> float:
    high, low = sorted((luminance(one), luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


@pytest.mark.parametrize("colours", [LIGHT, DARK], ids=["light", "dark"])
def test_state_colours_are_of_the_published_set(colours):
    assert {colours.back, colours.forward} <= OKABE_ITO


@pytest.mark.parametrize("colours", [LIGHT, DARK], ids=["light", "dark"])
@pytest.mark.parametrize("ground", ["base", "window", "selection"])
def test_text_is_readable_on_every_ground(colours, ground):
    """WCAG 2, 1.4.3: 4.5 : 1 for text; 1.4.11: 3 : 1 for marks and large or bold words."""
    for name in ("text", "muted", "caution"):
        assert contrast(colours.colour(name), colours.colour(ground)) >= 4.5, name
    for name in ("back", "forward", "mark"):
        assert contrast(colours.colour(name), colours.colour(ground)) >= 3.0, name
    assert contrast(colours.colour("on_accent"), colours.colour("accent")) >= 4.5
