"""Sphinx configuration. Numbers, tables of checks and figures are made during the build."""

from __future__ import annotations

import re
import sys
from pathlib import Path
from typing import Any

DOCS = Path(__file__).parent
sys.path[:0] = [str(DOCS.parent), str(DOCS / "scripts"), str(DOCS / "figures")]

import benchmark_page  # noqa: E402
import case_example  # noqa: E402
import check_tables  # noqa: E402
import prose_numbers  # noqa: E402
import unit_tables  # noqa: E402
from docutils import nodes  # noqa: E402
from sphinx.domains.python import PyXRefRole  # noqa: E402
from sphinx.errors import ExtensionError  # noqa: E402

import wellindex  # noqa: E402

project = "wellindex"
author = "The wellindex maintainers"
project_copyright = f"2026, {author}"
release = wellindex.__version__
version = release

extensions = [
    "sphinx.ext.autodoc",
    "sphinx.ext.mathjax",
    "sphinx.ext.napoleon",
]
root_doc = "index"
exclude_patterns = ["_build", "_generated"]
default_role = "name"
nitpicky = True

autodoc_typehints = "none"
autodoc_member_order = "bysource"
autodoc_class_signature = "mixed"
napoleon_google_docstring = False
# Argument types are words ("Quantity or str, length"), not names to link to.
napoleon_use_param = False
napoleon_use_rtype = False
napoleon_use_ivar = True

html_theme = "furo"
html_title = f"wellindex {release}"
html_show_sourcelink = False
pygments_style = "friendly"
pygments_dark_style = "monokai"
rst_epilog = prose_numbers.substitutions()


def generate(app: Any) -> None:
    """Write docs/_generated; stop the build where a published value is missed."""
    import draw

    folder = DOCS / "_generated"
    folder.mkdir(exist_ok=True)
    tables = check_tables.compute()
    (folder / "checks.rst").write_text(check_tables.page(tables), encoding="utf-8")
    missed = check_tables.missed(tables)
    if missed:
        raise ExtensionError("published values missed: " + "; ".join(missed))
    (folder / "answer_units.rst").write_text(unit_tables.answers(), encoding="utf-8")
    (folder / "known_units.rst").write_text(unit_tables.known(), encoding="utf-8")
    (folder / "refused_units.rst").write_text(unit_tables.refused(), encoding="utf-8")
    (folder / "five_layers.txt").write_text(case_example.printed(), encoding="utf-8")
    (folder / "five_layers.svg").write_bytes(case_example.drawn())
    (folder / "benchmarks.rst").write_text(benchmark_page.page(folder), encoding="utf-8")
    draw.all_figures(folder / "figures")


def name(role: str, rawtext: str, text: str, *rest: Any, **more: Any) -> Any:
    """Link a public name; show any other word in backquotes (an argument, say) as code."""
    plain = text.lstrip("~").removeprefix("wellindex.")
    if plain.split(".")[0] not in wellindex.__all__:
        return [nodes.literal(rawtext, text)], []
    full = ("~" if text.startswith("~") else "") + f"wellindex.{plain}"
    shown = full if text.startswith("~") else f"{text} <{full}>"
    return PyXRefRole()("py:obj", rawtext, shown, *rest, **more)


def words(app: Any, env: Any, node: Any, shown: Any) -> Any:
    """Let the words of a numpydoc type, as in "array of int, (n, 3)", stand unlinked."""
    public = node.get("reftarget", "").split(".")[-1] in wellindex.__all__
    return shown if node.get("reftype") == "class" and not public else None


def sources(app: Any, what: str, of: str, thing: Any, options: Any, lines: list[str]) -> None:
    """Number the sources of a docstring as a list: footnotes of two docstrings would collide."""
    lines[:] = [re.sub(r"^\.\. \[\d+\] ", "#. ", line) for line in lines]


def setup(app: Any) -> None:
    """Make what the pages include before they are read."""
    app.connect("autodoc-process-docstring", sources, priority=600)
    app.add_role("name", name)
    app.connect("missing-reference", words)
    app.connect("builder-inited", generate)
