"""Files that a case names: in its folder or below; their contents are accounted for."""

from __future__ import annotations

import hashlib
import io
from collections.abc import Callable
from pathlib import Path, PurePosixPath
from typing import Any, BinaryIO

from wellindex.case.entries import UNUSABLE, Entry, line, plain_words
from wellindex.errors import CaseError, WellIndexError

#: Text beyond this is no survey and no table of a grid that a case can hold.
LARGEST_CSV = 200_000_000
#: Corners of the largest grid in double precision, and other arrays beside them.
LARGEST_NPZ = 500_000_000
_LONGEST_NAME = 200
_NEEDED = "the name of a file in the folder of the case or below"
_name = line(_LONGEST_NAME)

Made = Callable[[Any, str], Any]


class Beside:
    """Opens the files that a case names.

    A case may come from someone else, so it reaches nothing but its own folder: no absolute name,
    no ``..``, no link that leads out.

    Parameters
    ----------
    folder : Path, optional
        The folder of the case; without one, a case cannot name files.

    Attributes
    ----------
    sha256 : dict of str to str
        Of each file that was read, by its name in the case.
    """

    def __init__(self, folder: Path | None = None) -> None:
        self._folder = folder
        self.sha256: dict[str, str] = {}

    def read_text(self, entry: Entry, make: Made) -> Any:
        """Return ``make(lines, name)`` of a CSV in UTF-8; note what is wrong with it."""

        def make_of_text(stream: BinaryIO, name: str) -> Any:
            with io.TextIOWrapper(stream, encoding="utf-8-sig", newline="") as lines:
                return make(lines, name)

        return self._read(entry, ".csv", LARGEST_CSV, make_of_text)

    def read_bytes(self, entry: Entry, make: Made) -> Any:
        """Return ``make(stream, name)`` of an .npz; note what is wrong with it."""
        return self._read(entry, ".npz", LARGEST_NPZ, make)

    def suffix(self, entry: Entry) -> str:
        """Return the ending of the name that an entry holds, in small letters."""
        return PurePosixPath(entry.value).suffix.lower() if isinstance(entry.value, str) else ""

    def _read(self, entry: Entry, suffix: str, most: int, make: Made) -> Any:
        name = _name(entry)
        if name is UNUSABLE:
            return UNUSABLE
        if self.suffix(entry) != suffix:
            return entry.refuse(f"the name of a file that ends in {suffix}")
        try:
            with self._find(name).open("rb") as stream:
                if stream.seek(0, io.SEEK_END) > most:
                    raise CaseError(f"{name}: the file is larger than {most} bytes")
                stream.seek(0)
                self.sha256[name] = hashlib.file_digest(stream, "sha256").hexdigest()
                stream.seek(0)
                return make(stream, name)
        except WellIndexError as error:
            words = plain_words(error)
            told = words.startswith((name, "needs "))
            entry.problems.add(entry.where, words if told else f"{name}: {words}")
        except (OSError, ValueError) as error:
            reason = getattr(error, "strerror", None) or error
            entry.problems.add(entry.where, f"{name}: cannot read the file: {reason}")
        except (ArithmeticError, MemoryError):
            entry.problems.add(entry.where, f"{name}: its numbers cannot be calculated with")
        return UNUSABLE

    def _find(self, name: str) -> Path:
        """Return the path of a file in the case's folder."""
        if self._folder is None:
            raise CaseError(f"{name}: this case was not read from a folder, and names no file")
        if any(mark in name for mark in "\\:") or name.startswith("/"):
            raise CaseError(f"needs {_NEEDED}, written with '/'; got {name!r}")
        folder = self._folder.resolve()
        path = (folder / name).resolve()
        if ".." in PurePosixPath(name).parts or not path.is_relative_to(folder):
            raise CaseError(
                f"needs {_NEEDED}; {name!r} leads out of it: copy the file beside the case"
            )
        if not path.exists():
            raise CaseError(f"{name}: there is no such file in the folder of the case")
        if not path.is_file():
            raise CaseError(f"{name}: this is no plain file")
        return path
