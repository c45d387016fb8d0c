"""Named arrays from an .npz: checked by their headers first, and never unpickled."""

from __future__ import annotations

import zipfile
import zlib
from collections.abc import Callable
from typing import IO, Any, BinaryIO

import numpy as np

from wellindex.errors import CaseError

Array = np.ndarray[Any, Any]
Check = Callable[[tuple[int, ...]], str | None]

_READABLE = (zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED)
_MOST_SHOWN = 12
_BROKEN = (zipfile.BadZipFile, zlib.error, ValueError, EOFError, RuntimeError, OSError, KeyError)


class Archive:
    """The arrays of one .npz file.

    Parameters
    ----------
    stream : binary file
        The file; it can be searched.
    name : str
        Of the file, for messages.

    Raises
    ------
    CaseError
        The file is no .npz.
    """

    def __init__(self, stream: BinaryIO, name: str) -> None:
        self._name = name
        try:
            self._zip = zipfile.ZipFile(stream)
        except _BROKEN:
            raise CaseError(
                f"{name}: this is no .npz file: write one with numpy.savez or savez_compressed"
            ) from None

    def __contains__(self, key: str) -> bool:
        return f"{key}.npy" in self._zip.namelist()

    def numbers(self, key: str, check: Check) -> Array:
        """Return an array of real numbers as float64.

        Parameters
        ----------
        key : str
            The array's name.
        check : callable
            Takes the shape before the array is read; says what is wrong with it, or None.

        Raises
        ------
        CaseError
            No such array, one of another type or shape, one that needs unpickling, a broken file.
        """
        return self._read(key, "fiu", "real numbers", check).astype(np.float64, copy=False)

    def truths(self, key: str, check: Check) -> Array:
        """Return an array of bool; as `numbers`."""
        return self._read(key, "b", "bool", check)

    def _read(self, key: str, types: str, words: str, check: Check) -> Array:
        if key not in self:
            held = [each.removesuffix(".npy") for each in self._zip.namelist()[:_MOST_SHOWN]]
            found = ", ".join(repr(each[:40]) for each in held) or "nothing"
            raise CaseError(f"{self._name}: no array named {key!r}; it holds {found}")
        try:
            with self._open(key) as member:
                shape, dtype = _header(member)
            if dtype.hasobject:
                raise CaseError(
                    f"{self._name}: {key!r} holds Python objects; those are never unpickled: save "
                    "an array of numbers"
                )
            if dtype.kind not in types or dtype.itemsize > 16:
                raise CaseError(f"{self._name}: {key!r} needs {words}; it holds {dtype}")
            wrong = check(shape)
            if wrong:
                raise CaseError(f"{self._name}: {key!r} {wrong}; its shape is {shape}")
            with self._open(key) as member:
                array: Array = np.lib.format.read_array(member, allow_pickle=False)
        except _BROKEN as error:
            if isinstance(error, CaseError):
                raise
            reason = " ".join(str(error).split())[:100]
            raise CaseError(f"{self._name}: cannot read {key!r}: {reason}") from None
        return array

    def _open(self, key: str) -> IO[bytes]:
        info = self._zip.getinfo(f"{key}.npy")
        if info.compress_type not in _READABLE:
            raise ValueError("it is packed in a way that numpy does not write")
        return self._zip.open(info)


def _header(member: IO[bytes]) -> tuple[tuple[int, ...], np.dtype[Any]]:
    """Return the shape and type that an array's header declares."""
    version = np.lib.format.read_magic(member)
    readers = {
        (1, 0): np.lib.format.read_array_header_1_0,
        (2, 0): np.lib.format.read_array_header_2_0,
    }
    if version not in readers:
        raise ValueError(f"arrays of format {version} are not read")
    shape, _order, dtype = readers[version](member)
    return shape, dtype
