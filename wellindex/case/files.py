"""Read a case file, and write results all together or not at all."""

from __future__ import annotations

import hashlib
import os
import tempfile
import tomllib
from collections.abc import Mapping, Sequence
from contextlib import suppress
from pathlib import Path
from typing import Any, NamedTuple

from wellindex.errors import CaseError

#: A case of this many bytes is no case: it would cost too much memory to parse.
LARGEST_FILE = 1_000_000
#: The parser's time grows with the square of a key's parts, and a key stands on one line.
LONGEST_LINE = 2_000


class CaseFile(NamedTuple):
    """A case file as it was read."""

    name: str
    document: dict[str, Any]
    sha256: str
    folder: Path


def read_file(path: Path) -> CaseFile:
    """Read and parse a case file.

    Parameters
    ----------
    path : Path
        A TOML file in UTF-8.

    Returns
    -------
    CaseFile

    Raises
    ------
    CaseError
        No such file, a folder, a file too large, not UTF-8, not TOML (with line and column).

    Examples
    --------
    >>> from pathlib import Path
    >>> from wellindex.case.files import read_file
    >>> read_file(Path("no such case.toml"))
    Traceback (most recent call last):
    wellindex.errors.CaseError: there is no such file: check the path
    """
    try:
        with path.open("rb") as file:
            content = file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise CaseError("there is no such file: check the path") from None
    except IsADirectoryError:
        raise CaseError("this is a folder: name the case file in it") from None
    except (OSError, ValueError) as error:
        raise CaseError(f"cannot read the file: {_reason(error)}") from None
    if len(content) > LARGEST_FILE:
        raise CaseError(f"the file is larger than {LARGEST_FILE} bytes: this is no case file")
    for number, line in enumerate(content.splitlines(), start=1):
        if len(line) > LONGEST_LINE:
            raise CaseError(
                f"line {number} is longer than {LONGEST_LINE} bytes: break the list over lines"
            )
    digest = hashlib.sha256(content).hexdigest()
    return CaseFile(path.name, _parsed(content), digest, path.parent)


def _parsed(content: bytes) -> dict[str, Any]:
    try:
        return tomllib.loads(content.decode("utf-8-sig"))
    except UnicodeDecodeError as error:
        raise CaseError(f"byte {error.start} is not UTF-8 text: save the file as UTF-8") from None
    except tomllib.TOMLDecodeError as error:
        raise CaseError(f"this is not valid TOML: {error}") from None
    except ValueError as error:
        raise CaseError(f"a number in the file cannot be read: {error}") from None
    except RecursionError:
        raise CaseError("lists or tables stand too deep inside one another") from None


def check_folder(folder: Path, names: Sequence[str], *, force: bool) -> None:
    """Refuse a folder that results cannot go to; nothing is changed.

    Parameters
    ----------
    folder : Path
        It need not exist yet.
    names : list of str
        The files that will be written in it.
    force : bool
        Whether files that exist may be replaced.

    Raises
    ------
    CaseError
        A file in place of the folder, no permission to write, a file that exists.
    """
    try:
        _check_folder(folder, names, force=force)
    except OSError as error:
        raise CaseError(f"cannot write to {str(folder)!r}: {_reason(error)}") from None


def _check_folder(folder: Path, names: Sequence[str], *, force: bool) -> None:
    if "\0" in str(folder):
        raise CaseError(f"cannot write to {str(folder)!r}: a null character is no part of a name")
    nearest = next(each for each in (folder, *folder.parents) if os.path.lexists(each))
    if not nearest.is_dir():
        raise CaseError(f"{str(nearest)!r} is a file, not a folder: choose another with --out")
    if not os.access(nearest, os.W_OK | os.X_OK):
        raise CaseError(f"no permission to write in {str(nearest)!r}: choose another with --out")
    for name in names:
        target = folder / name
        if target.is_dir():
            raise CaseError(f"{str(target)!r} is a folder, not a file: choose another with --out")
        if os.path.lexists(target) and not force:
            raise CaseError(
                f"{str(target)!r} exists and is kept: choose another folder with --out, or "
                "replace it with --force"
            )


def write_together(folder: Path, contents: Mapping[str, str | bytes], *, force: bool) -> list[Path]:
    """Write several files so that either all are there afterwards, or all is as it was before.

    Parameters
    ----------
    folder : Path
        Made if it does not exist.
    contents : mapping of str to str or bytes
        File names and what they shall hold.
    force : bool
        Whether files that exist may be replaced.

    Returns
    -------
    list of Path
        The files written.

    Raises
    ------
    CaseError
        What `check_folder` refuses; a disk that is full.
    """
    check_folder(folder, list(contents), force=force)
    made = [each for each in (folder, *folder.parents) if not os.path.lexists(each)]
    change = _Change()
    try:
        folder.mkdir(parents=True, exist_ok=True)
        fresh = {folder / name: change.new_file(folder, each) for name, each in contents.items()}
        for target, temporary in fresh.items():
            change.put(temporary, target)
    except BaseException as error:
        change.undo()
        for each in made:
            with suppress(OSError):
                each.rmdir()
        if isinstance(error, OSError):
            raise CaseError(f"cannot write to {str(folder)!r}: {_reason(error)}") from None
        raise
    change.keep()
    return list(fresh)


class _Change:
    """Files put in place of others, which come back if something fails."""

    def __init__(self) -> None:
        self._temporary: list[Path] = []
        self._moved: list[tuple[Path, Path]] = []
        self._placed: list[Path] = []

    def new_file(self, folder: Path, content: str | bytes) -> Path:
        """Write a temporary file beside its target."""
        handle, name = tempfile.mkstemp(prefix=".wellindex-", suffix=".part", dir=folder)
        self._temporary.append(Path(name))
        with open(handle, "wb") as file:
            file.write(content.encode("utf-8") if isinstance(content, str) else content)
            file.flush()
            os.fsync(file.fileno())
        Path(name).chmod(0o666 & ~_umask())
        return Path(name)

    def put(self, temporary: Path, target: Path) -> None:
        """Move a temporary file to its target, keeping what was there."""
        if os.path.lexists(target):
            aside = temporary.with_suffix(".old")
            self._moved.append((aside, target))
            os.replace(target, aside)
        self._placed.append(target)
        os.replace(temporary, target)

    def undo(self) -> None:
        """Bring everything back as it was."""
        for path in (*self._placed, *self._temporary):
            with suppress(OSError):
                path.unlink()
        for aside, target in self._moved:
            with suppress(OSError):
                os.rename(aside, target)

    def keep(self) -> None:
        """Drop what was replaced."""
        for aside, _target in self._moved:
            with suppress(OSError):
                aside.unlink()


def _umask() -> int:
    mask = os.umask(0o077)  # it can only be read by setting it
    os.umask(mask)
    return mask


def _reason(error: Exception) -> str:
    return str(getattr(error, "strerror", None) or error)
