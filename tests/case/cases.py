"""The bundled case, a straight one and edited copies of it, the command run in this process."""

import io
import tomllib
from contextlib import redirect_stderr, redirect_stdout
from pathlib import Path
from typing import Any, Final, NamedTuple

import wellindex
from wellindex.__main__ import main

BUNDLED: Final = Path(wellindex.__file__).parent / "case" / "five_layers.toml"
STRAIGHT: Final = BUNDLED.with_name("vertical_well.toml")
TEXT: Final = STRAIGHT.read_text(encoding="utf-8")


class Answer(NamedTuple):
    """What the command returned and printed."""

    code: int
    out: str
    err: str


def command(*arguments: Any) -> Answer:
    """Run the command here; an exception that escapes it fails the test."""
    out, err = io.StringIO(), io.StringIO()
    with redirect_stdout(out), redirect_stderr(err):
        code = main([str(argument) for argument in arguments])
    return Answer(code, out.getvalue(), err.getvalue())


def edited(*changes: tuple[str, str], extra: str = "") -> str:
    """The straight case with some of its words replaced, and lines added at its end."""
    text = TEXT
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new)
    return text + extra


def document(text: str = TEXT) -> dict[str, Any]:
    """What a case says, read without the package."""
    return tomllib.loads(text)


def written(folder: Path, text: str, name: str = "case.toml") -> Path:
    """Write a case file."""
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return path
