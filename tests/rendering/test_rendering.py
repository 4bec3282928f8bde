"""Rendering: widths, rounding and both forms of one page."""

from __future__ import annotations

import pytest

from tenkpc.rendering import (
    Facts,
    Paragraph,
    Row,
    Rule,
    Table,
    columns_of,
    decimals_for,
    html,
    number,
    percent,
    text,
)

PAGE = (
    Paragraph("A sentence. " * 12),
    Table(
        (
            Row(("positron", "1 234", "96 %")),
            Row(("ν̄e + p → e⁺ + n", "1 234", "96 %", "± 0.5 %"), level=1, bar=0.96),
        ),
        ("seen as", "counted", "share", "error"),
    ),
    Rule(),
    Facts((("chance", "between these & those " * 6), ("x", "y"))),
)


def test_no_line_is_wider_than_the_page():
    """78 columns, combining marks not counted."""
    lines = text(PAGE).splitlines()
    assert max(columns_of(line) for line in lines) <= 78


def test_numbers_stand_below_each_other():
    """Columns of numbers end at the same place in every row, marks or no marks."""
    head, first, second = text(PAGE[1:2]).splitlines()
    end = head.index("counted") + len("counted")
    assert first[:end].endswith("1 234")
    assert second[: end + 1].endswith("1 234")  # one combining mark before it


def test_html_is_escaped_and_whole():
    """The same rows, with what could be read as a tag made harmless."""
    page = html(PAGE)
    assert "these &amp; those" in page
    assert page.count("<tr>") == 3
    assert page.startswith("<div")
    assert page.endswith("</div>")


@pytest.mark.parametrize(
    ("value", "decimals", "expected"),
    [(1234567.0, 0, "1 234 567"), (0.126, 2, "0.13"), (float("inf"), 0, "∞")],
)
def test_numbers_have_thin_groups(value, decimals, expected):
    """Groups of three, rounded to the decimals asked for."""
    assert number(value, decimals).replace("\u2009", " ").replace("\u202f", " ") == expected


@pytest.mark.parametrize(("value", "expected"), [(7135, 0), (257, 0), (25.7, 1), (0.03, 4), (0, 0)])
def test_three_digits_are_left(value, expected):
    """Decimals are those of three significant digits."""
    assert decimals_for(value) == expected


@pytest.mark.parametrize(
    ("share", "expected"),
    [(1, "100 %"), (0.961, "96 %"), (0.036, "3.6 %"), (0.0001, "< 0.1 %"), (0, "0 %")],
)
def test_shares_are_short(share, expected):
    """Two digits at most."""
    assert percent(share) == expected
