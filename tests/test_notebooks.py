"""Notebooks: run from top to bottom, and stored without outputs."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

FOLDER = Path(__file__).parents[1] / "notebooks"
NOTEBOOKS = sorted(FOLDER.glob("*.ipynb"))


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_notebooks_are_stored_without_outputs(path):
    """What is stored is what was written, not what came out on somebody's machine."""
    for cell in json.loads(path.read_text(encoding="utf-8"))["cells"]:
        assert not cell.get("outputs")
        assert cell.get("execution_count") is None


@pytest.mark.filterwarnings("ignore::DeprecationWarning")
@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_notebooks_run(path):
    """Every cell runs in a kernel of its own, in order."""
    import nbformat
    from nbclient import NotebookClient

    notebook = nbformat.read(path, as_version=4)
    client = NotebookClient(notebook, timeout=120, kernel_name="python3")
    client.execute()
    assert all(
        output["output_type"] != "error"
        for cell in notebook.cells
        for output in cell.get("outputs", [])
    )
