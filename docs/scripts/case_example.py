"""What the command prints for the case that comes with the library."""

from __future__ import annotations

from pathlib import Path

import wellindex.case
from wellindex.case import figure
from wellindex.case.files import read_file
from wellindex.case.report import as_text
from wellindex.case.run import run_case

EXAMPLE = Path(wellindex.case.__file__).with_name("five_layers.toml")


def printed() -> str:
    """Return the printed results."""
    return as_text(run_case(read_file(EXAMPLE)))


def drawn() -> bytes:
    """Return the figure of its well as SVG."""
    files = figure.as_files(run_case(read_file(EXAMPLE)))
    return next(content for name, content in files.items() if name.endswith(".svg"))
