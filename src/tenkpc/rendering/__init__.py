"""Rows and paragraphs, and the same page of them as plain text or HTML.

A page is a sequence of blocks: paragraphs, thin rules and tables. Whoever has a result to show
builds the page; nothing here knows what it says.
"""

from __future__ import annotations

import html as _html
import math
import textwrap
import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass

WIDTH = 78
BAR_WIDTH = 12
INDENT = "  "
GROUPS = "\u202f"  # a narrow blank that does not break


@dataclass(frozen=True)
class Paragraph:
    """Running text; ``small`` is for the foot of a page."""

    text: str
    small: bool = False


@dataclass(frozen=True)
class Facts:
    """Names with a text each, which runs on beside its name."""

    rows: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Rule:
    """A thin line across the page."""


@dataclass(frozen=True)
class Row:
    """One row of a table.

    Attributes
    ----------
    cells
        text of each column; the first is left-aligned, the others right-aligned.
    level
        0 for a heading row, 1 for a row under it.
    bar
        length of a bar after the cells, 0 to 1; None for no bar.
    """

    cells: tuple[str, ...]
    level: int = 0
    bar: float | None = None


@dataclass(frozen=True)
class Table:
    """Rows under column titles; an empty title tuple prints none."""

    rows: tuple[Row, ...]
    titles: tuple[str, ...] = ()


Block = Facts | Paragraph | Rule | Table
Page = Sequence[Block]


def text(page: Page, width: int = WIDTH) -> str:
    """Lay a page out as plain text, no line wider than ``width`` columns."""
    return "\n".join(_text_block(block, width) for block in page)


def html(page: Page) -> str:
    """Lay a page out as an HTML fragment that brings its own few lines of style."""
    blocks = "".join(_html_block(block) for block in page)
    return f'<div style="font-variant-numeric:tabular-nums;max-width:46em">{blocks}</div>'


def columns_of(words: str) -> int:
    """Count the columns a text takes: combining marks take none."""
    return sum(1 for char in words if not unicodedata.combining(char))


def pad(words: str, width: int, *, right: bool = False) -> str:
    """Fill a text with blanks to ``width`` columns."""
    blanks = " " * max(0, width - columns_of(words))
    return blanks + words if right else words + blanks


def number(value: float, decimals: int = 0) -> str:
    """Print a number in groups of three digits, which no line break parts, to given decimals."""
    if not math.isfinite(value):
        return "∞" if value > 0 else "—"
    return f"{value:,.{decimals}f}".replace(",", GROUPS)


def decimals_for(value: float) -> int:
    """Decimals that leave about three significant digits of a count."""
    if value <= 0 or not math.isfinite(value):
        return 0
    return max(0, min(6, 2 - math.floor(math.log10(value))))


def percent(share: float) -> str:
    """Print a share between 0 and 1 as a per cent with two significant digits at most."""
    value = 100 * share
    if value == 0 or value >= 9.95:
        return f"{value:.0f} %"
    return f"{value:.1f} %" if value >= 0.05 else "< 0.1 %"


def _text_block(block: Block, width: int) -> str:
    match block:
        case Paragraph():
            return "\n".join(_wrap(block.text, width))
        case Facts():
            return "\n".join(_text_facts(block, width))
        case Rule():
            return "─" * width
        case Table():
            return "\n".join(_text_table(block, width))


def _wrap(words: str, width: int) -> list[str]:
    """Wrap at blanks only, so that commands and units stay whole."""
    lines = textwrap.wrap(words, width, break_long_words=False, break_on_hyphens=False)
    return lines or [""]


def _text_facts(facts: Facts, width: int) -> list[str]:
    first = max((columns_of(name) for name, _ in facts.rows), default=0) + 2
    lines = []
    for name, words in facts.rows:
        head, *rest = _wrap(words, width - first)
        lines.append((pad(name, first) + head).rstrip())
        lines += [" " * first + line for line in rest]
    return lines


def _text_table(table: Table, width: int) -> list[str]:
    rows = [*([Row(table.titles)] if table.titles else []), *table.rows]
    if not rows:
        return []
    count = max(len(row.cells) for row in rows)
    numbers = [max(columns_of(_cell(row, i)) for row in rows) for i in range(1, count)]
    bar = BAR_WIDTH + 2 if any(row.bar is not None for row in rows) else 0
    first = width - bar - sum(2 + wide for wide in numbers)
    longest = max(columns_of(INDENT * row.level + row.cells[0]) for row in rows)
    first = min(first, max(longest, 34))
    return [_text_row(row, first, numbers) for row in rows]


def _text_row(row: Row, first: int, numbers: Sequence[int]) -> str:
    head = pad(INDENT * row.level + row.cells[0], first)
    cells = [pad(_cell(row, i + 1), wide, right=True) for i, wide in enumerate(numbers)]
    bar = "" if row.bar is None else "█" * max(1, round(row.bar * BAR_WIDTH))
    return "  ".join([head, *cells, bar]).rstrip()


def _cell(row: Row, index: int) -> str:
    return row.cells[index] if index < len(row.cells) else ""


def _html_block(block: Block) -> str:
    match block:
        case Paragraph():
            size = ";font-size:85%;opacity:.8" if block.small else ""
            return f'<p style="margin:.4em 0{size}">{_html.escape(block.text)}</p>'
        case Facts():
            pairs = (f"<dt>{_html.escape(n)}</dt><dd>{_html.escape(t)}</dd>" for n, t in block.rows)
            style = "display:grid;grid-template-columns:max-content auto;gap:.1em 1em;margin:.4em 0"
            return f'<dl style="{style}">{"".join(pairs)}</dl>'
        case Rule():
            return '<hr style="border:0;border-top:1px solid;opacity:.4">'
        case Table():
            return _html_table(block)


def _html_table(table: Table) -> str:
    head = "".join(
        f"<th{_align(i, ';white-space:nowrap')}>{_html.escape(t)}</th>"
        for i, t in enumerate(table.titles)
    )
    body = "".join(_html_row(row) for row in table.rows)
    top = f"<thead><tr>{head}</tr></thead>" if head else ""
    return f'<table style="border-collapse:collapse">{top}<tbody>{body}</tbody></table>'


def _html_row(row: Row) -> str:
    indent = f";padding-left:{0.6 + 1.5 * row.level:g}em"
    cells = [
        f"<td{_align(i, indent if i == 0 else '')}>{_html.escape(cell)}</td>"
        for i, cell in enumerate(row.cells)
    ]
    if row.bar is not None:
        wide = max(0.3, 8 * row.bar)
        style = f"width:{wide:.2f}em;height:.6em;background:currentColor;opacity:.6"
        cells.append(f'<td><div style="{style}"></div></td>')
    return f"<tr>{''.join(cells)}</tr>"


def _align(index: int, more: str = "") -> str:
    side = "left" if index == 0 else "right"
    return f' style="text-align:{side};padding:.1em .6em{more}"'
