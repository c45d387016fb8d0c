"""The page of benchmarks: the last output of the benchmarks where there is one."""

from __future__ import annotations

from pathlib import Path

from unit_tables import list_table

COMMAND = "python -m tests.benchmarks.run --write docs/_generated/benchmarks.md"
_HOW = f"""\
No output was at hand when these pages were built. Measure on your machine, and the result stands
here in the next build:

.. code-block:: console

   $ .venv/bin/{COMMAND}
"""


def page(folder: Path) -> str:
    """Return the body of the page."""
    if not (folder / "benchmarks.md").is_file():
        return _HOW
    return from_markdown((folder / "benchmarks.md").read_text(encoding="utf-8"))


def from_markdown(text: str) -> str:
    """Return paragraphs and one table as reStructuredText."""
    lines = text.splitlines()
    prose = [line for line in lines if not line.startswith("|")]
    rows = [line.strip("|").split("|") for line in lines if line.startswith("|")]
    if not rows:
        return text
    head, _rule, *body = ([cell.strip() for cell in row] for row in rows)
    return "\n".join(prose).strip() + "\n\n" + list_table(head, body)
