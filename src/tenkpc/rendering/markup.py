"""A page as Markdown and as LaTeX."""

from __future__ import annotations

import re
from collections.abc import Iterator

from tenkpc.rendering import GROUPS, Block, Facts, Page, Paragraph, Row, Rule, Table

# what LaTeX has a command for; the longest come first
_LATEX = (
    ("ν̄e", r"$\bar{\nu}_e$"),
    ("ν̄x", r"$\bar{\nu}_x$"),
    ("νe", r"$\nu_e$"),
    ("νx", r"$\nu_x$"),
    ("ν̄", r"$\bar{\nu}$"),
    ("\\", r"\textbackslash{}"),
    *((char, f"\\{char}") for char in "&%$#_{}"),
    ("~", r"\textasciitilde{}"),
    ("^", r"\textasciicircum{}"),
    (GROUPS, r"\,"),
    ("<", "$<$"),
    (">", "$>$"),
    ("σ", r"$\sigma$"),
    ("ν", r"$\nu$"),
    ("γ", r"$\gamma$"),
    ("→", r"$\rightarrow$"),
    ("±", r"$\pm$"),
    ("−", r"$-$"),
    ("×", r"$\times$"),
    ("÷", r"$\div$"),
    ("⊕", r"$\oplus$"),
    ("√", r"$\surd$"),
    ("≥", r"$\geq$"),
    ("∞", r"$\infty$"),
    ("—", "---"),
    ("“", "``"),
    ("”", "''"),
    ("·", r"$\cdot$"),
)
_TABLE = dict(_LATEX)
_WRITTEN = re.compile("|".join(map(re.escape, _TABLE)))
_RAISED = {
    **dict(zip("⁰¹²³⁴⁵⁶⁷⁸⁹", "0123456789", strict=True)),
    "⁺": "+",
    "⁻": "-",
}
_SUPERSCRIPTS = re.compile(f"[{''.join(_RAISED)}]+")


def markdown(page: Page) -> str:
    """Lay a page out as Markdown: paragraphs, pipe tables and rules."""
    return "\n\n".join(text for block in page if (text := _markdown_block(block))) + "\n"


def latex(page: Page) -> str:
    """Lay a page out as LaTeX: paragraphs, and tables as ``tabular``; needs no package."""
    return "\n\n".join(text for block in page if (text := _latex_block(block))) + "\n"


def _markdown_block(block: Block) -> str:
    match block:
        case Paragraph():
            return _plain(block.text)
        case Rule():
            return "---"
        case Facts():
            return "\n".join(f"- **{_plain(name)}**: {_plain(text)}" for name, text in block.rows)
        case Table():
            return "\n".join(_pipes(block))


def _pipes(table: Table) -> Iterator[str]:
    count = _columns(table)
    titles = table.titles or ("",) * count
    yield _pipe_row([*titles, *[""] * (count - len(titles))])
    yield _pipe_row(["---", *["---:"] * (count - 1)])
    for row in table.rows:
        cells = [f"&emsp;{c}" if row.level and i == 0 else c for i, c in enumerate(row.cells)]
        yield _pipe_row([*cells, *[""] * (count - len(cells))])


def _pipe_row(cells: list[str]) -> str:
    return f"| {' | '.join(_plain(cell) for cell in cells)} |"


def _plain(words: str) -> str:
    """Escape what Markdown would take for markup."""
    return re.sub(r"([|*_<])", r"\\\1", words)


def _latex_block(block: Block) -> str:
    match block:
        case Paragraph():
            words = tex(block.text)
            return f"{{\\small {words}\\par}}" if block.small and words else words
        case Rule():
            return r"\medskip\hrule\medskip"
        case Facts():
            lines = (rf"\item[{tex(name)}] {tex(text)}" for name, text in block.rows)
            return "\n".join([r"\begin{description}", *lines, r"\end{description}"])
        case Table():
            return "\n".join(_tabular(block))


def _tabular(table: Table) -> Iterator[str]:
    yield rf"\begin{{tabular}}{{l{'r' * (_columns(table) - 1)}}}"
    if table.titles:
        yield f"{' & '.join(map(tex, table.titles))} \\\\"
        yield r"\hline"
    yield from (_tabular_row(row) for row in table.rows)
    yield r"\end{tabular}"


def _tabular_row(row: Row) -> str:
    indent = r"\quad " if row.level else ""
    return f"{indent}{' & '.join(map(tex, row.cells))} \\\\"


def tex(words: str) -> str:
    """Write a text so that LaTeX prints it: escapes, Greek, arrows, raised digits and signs."""
    written = _WRITTEN.sub(lambda m: _TABLE[m[0]], words)
    return _SUPERSCRIPTS.sub(
        lambda m: f"\\textsuperscript{{{''.join(_RAISED[c] for c in m[0])}}}", written
    )


def _columns(table: Table) -> int:
    return max([len(table.titles), *(len(row.cells) for row in table.rows)])
