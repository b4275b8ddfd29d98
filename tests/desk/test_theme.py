"""Contrast of every pair of colours that meet (WCAG 2.2, relative luminance as defined there)."""

from __future__ import annotations

import pytest

from rescue_planner.desk import theme
from rescue_planner.projection.marks import mark


def _luminance(colour: str) -> float:
    parts = [int(colour[i : i + 2], 16) / 255 for i in (1, 3, 5)]
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def _contrast(one: str, other: str) -> float:
    high, low = sorted((_luminance(one), _luminance(other)), reverse=True)
    return (high + 0.05) / (low + 0.05)


SCHEMES = ("light", "dark")
GROUNDS = ("paper", "raised", "accent_ground")


def test_that_the_measure_of_contrast_is_right() -> None:
    assert _contrast("#000000", "#ffffff") == pytest.approx(21.0)
    assert _contrast("#777777", "#ffffff") == pytest.approx(4.48, abs=0.01)  # known from the rules


@pytest.mark.parametrize("scheme", SCHEMES)
@pytest.mark.parametrize("ground", GROUNDS)
@pytest.mark.parametrize("ink", ["ink", "soft", "accent", "problem", "caution", "good"])
def test_that_text_holds_four_and_a_half_to_one(scheme, ground, ink) -> None:
    colours = theme.palette(scheme)
    assert _contrast(getattr(colours, ink), getattr(colours, ground)) >= 4.5


@pytest.mark.parametrize("scheme", SCHEMES)
def test_that_text_on_the_accent_can_be_read(scheme) -> None:
    colours = theme.palette(scheme)
    assert _contrast(colours.accent_ink, colours.accent) >= 4.5


@pytest.mark.parametrize("scheme", SCHEMES)
@pytest.mark.parametrize("ground", ["paper", "raised"])
def test_that_edges_of_controls_hold_three_to_one(scheme, ground) -> None:
    colours = theme.palette(scheme)
    assert _contrast(colours.line, getattr(colours, ground)) >= 3.0


@pytest.mark.parametrize("scheme", SCHEMES)
@pytest.mark.parametrize("index", range(12))
def test_that_every_plan_holds_three_to_one_on_paper_and_strip(scheme, index) -> None:
    colour = theme.plan_colour(mark(index), scheme).name()
    for ground in ("paper", "raised"):
        assert _contrast(colour, getattr(theme.palette(scheme), ground)) >= 3.0


def test_that_a_plan_is_drawn_with_its_own_dash(qapp) -> None:
    pen = theme.plan_pen(mark(1), "light", 3.0)
    assert pen.widthF() == 3.0
    assert tuple(pen.dashPattern()) == mark(1).dash


@pytest.mark.parametrize("scheme", SCHEMES)
def test_that_the_style_sheet_is_filled_in(qapp, scheme) -> None:
    sheet = theme.style_sheet(theme.palette(scheme), 2.0)
    assert "$" not in sheet
    assert "font-size: 28px" in sheet
