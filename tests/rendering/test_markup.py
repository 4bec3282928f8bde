"""Markdown and LaTeX: the same rows and numbers, with every sign written out."""

from __future__ import annotations

import re

import pytest

from tenkpc import Burst, Detector, Forecast
from tenkpc.forecast import page
from tenkpc.rendering import Facts, Paragraph, Row, Rule, Table, markup

PAGE = [
    Paragraph("50 % of “a_b” & <c> at 10\u202f000 → σ ± 2"),
    Table(
        (Row(("ν̄e + p → e⁺ + n", "12", "80 %")), Row(("part", "3"), level=1, bar=0.2)), ("x", "n")
    ),
    Rule(),
    Facts((("chance", "± 2"),)),
    Paragraph("small", small=True),
]


def test_latex_escapes_and_writes_signs():
    """Per cent, underscores, blanks in numbers, arrows, neutrinos and raised signs."""
    words = markup.latex(PAGE)
    assert r"50 \% of ``a\_b'' \& $<$c$>$ at 10\,000 $\rightarrow$ $\sigma$ $\pm$ 2" in words
    assert r"$\bar{\nu}_e$ + p $\rightarrow$ e\textsuperscript{+} + n & 12 & 80 \% \\" in words
    assert r"\quad part & 3 \\" in words
    assert r"\begin{tabular}{lrr}" in words
    assert words.count(r"\begin{") == words.count(r"\end{")
    assert words.isascii()


def test_markdown_has_pipe_tables():
    """Every row has as many cells as the head, and what Markdown would take is escaped."""
    words = markup.markdown(PAGE)
    lines = [line for line in words.splitlines() if line.startswith("|")]
    assert {len(re.findall(r"(?<!\\)\|", line)) for line in lines} == {4}
    assert lines[0] == "| x | n |  |"
    assert r"a\_b" in words
    assert r"\<c>" in words
    assert "- **chance**: ± 2" in words


@pytest.mark.parametrize("name", ["brine-hall", "mere-tank"])
def test_pages_are_written_whole(name):
    """Real pages: LaTeX in ASCII but for names, and the numbers of the text in all forms."""
    detector, burst = Detector.gallery(name), Burst.preset("ordinary-collapse")
    forecast = Forecast(detector, burst, distance="10 kpc")
    latex, markdown = forecast.to_latex(), forecast.to_markdown()
    assert latex.isascii()
    assert markup.latex(page.assumptions(forecast)).isascii()
    numbers = re.findall(r"\d[\d\u202f]*", repr(forecast))
    for text, group in ((latex, r"\,"), (markdown, "\u202f")):
        for number in numbers:
            assert number.replace("\u202f", group) in text
