"""The code of a page of the documentation: found, and run in order in one namespace.

A text block that follows a Python block at once is what that block prints.
"""

from __future__ import annotations

import io
import re
from contextlib import redirect_stdout
from pathlib import Path
from typing import Any, NamedTuple

_FENCE = re.compile(r"^```(?P<language>\w+)\n(?P<body>.*?)^```$", re.DOTALL | re.MULTILINE)
_DIRECTIVE = re.compile(
    r"^\.\. code-block:: (?P<language>\w+)\n(?:   :.*\n)*\n(?P<body>(?:(?:   .*)?\n)+)",
    re.MULTILINE,
)


class Block(NamedTuple):
    """One block of a page: its language, text, line and what must follow at once."""

    language: str
    body: str
    line: int
    end: int
    start: int


class Example(NamedTuple):
    """A Python block with what it prints; `printed` is None where the page does not show it."""

    code: str
    printed: str | None
    line: int


def blocks(path: Path) -> list[Block]:
    """Return every block of code of a page, in order."""
    text = path.read_text(encoding="utf-8") + "\n"
    pattern = _FENCE if path.suffix == ".md" else _DIRECTIVE
    found = []
    for match in pattern.finditer(text):
        body = match["body"]
        if path.suffix != ".md":
            body = "\n".join(line[3:] for line in body.splitlines()).rstrip() + "\n"
        line = text.count("\n", 0, match.start("body")) + 1
        end = match.start("body") + len(match["body"].rstrip())
        if path.suffix == ".md":
            end = match.end()
        found.append(Block(match["language"], body, line, end, match.start()))
    return found


def examples(path: Path) -> list[Example]:
    """Return the Python blocks of a page, each with the text that it must print."""
    text = path.read_text(encoding="utf-8") + "\n"
    found = blocks(path)
    result = []
    for block, following in zip(found, [*found, None][1:], strict=True):
        if block.language != "python":
            continue
        printed = None
        if following is not None and following.language == "text":
            between = text[block.end : following.start]
            printed = following.body if not between.strip() else None
        result.append(Example(block.body, printed, block.line))
    return result


def run(path: Path) -> dict[str, Any]:
    """Run the examples of a page and return its names; raise where one prints something else."""
    names: dict[str, Any] = {"__name__": "__main__"}
    for example in examples(path):
        code = "\n" * (example.line - 1) + example.code
        out = io.StringIO()
        with redirect_stdout(out):
            exec(compile(code, str(path), "exec"), names)
        shown = _plain(out.getvalue())
        if example.printed is not None and shown != _plain(example.printed):
            raise AssertionError(
                f"{path}, line {example.line}: the page shows\n{example.printed}\nand the code "
                f"prints\n{out.getvalue()}"
            )
        if example.printed is None and shown:
            raise AssertionError(f"{path}, line {example.line}: prints {shown!r}, not shown")
    return names


def _plain(text: str) -> str:
    return "\n".join(line.rstrip() for line in text.strip("\n").splitlines())
