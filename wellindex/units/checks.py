"""What a formula says about values it cannot use (refuse) or should not trust (caution)."""

from __future__ import annotations

import sys
import warnings
from typing import Any

import numpy as np

from wellindex.errors import AssumptionWarning, DomainError

_PACKAGE = __name__.partition(".")[0]


def warn(message: str, category: type[Warning]) -> None:
    """Warn at the line of the caller outside this package."""
    level = 2
    frame = sys._getframe(1)
    while frame.f_back is not None and _is_ours(frame.f_globals.get("__name__", "")):
        frame = frame.f_back
        level += 1
    warnings.warn(message, category, stacklevel=level)


def _is_ours(module: str) -> bool:
    return module == _PACKAGE or module.startswith(_PACKAGE + ".")


def place(flat: int, shape: tuple[int, ...]) -> str:
    """Return the index of an element in words: "[3]" or "[0, 3]"."""
    index = np.unravel_index(flat, shape)
    return "[" + ", ".join(str(int(i)) for i in index) + "]"


class Checks:
    """Raises at the first refused value and warns at a doubtful one, at once."""

    def refuse(self, bad: Any, reason: str, shown: Any = None) -> None:
        """Raise `DomainError` where `bad` is true."""
        if bad is False or not np.any(bad):
            return
        flat = int(np.argmax(bad))
        where = f" at {place(flat, np.shape(bad))}" if np.ndim(bad) else ""
        raise DomainError(f"{reason}{_example(shown, bad, flat)}{where}")

    def caution(self, bad: Any, reason: str, shown: Any = None) -> None:
        """Warn where `bad` is true."""
        if bad is False or not np.any(bad):
            return
        flat = int(np.argmax(bad))
        count = f" ({np.count_nonzero(bad)} elements)" if np.ndim(bad) else ""
        warn(f"{reason}{_example(shown, bad, flat)}{count}", AssumptionWarning)


class Tally(Checks):
    """Gathers refusals and cautions over the blocks of one large call."""

    def __init__(self, *, keep_going: bool) -> None:
        self.keep_going = keep_going
        self.offset = 0
        self.shape: tuple[int, ...] = ()
        self.size = 0
        self.lost: Any = None
        self.reasons: dict[str, int] = {}
        self.cautions: dict[str, int] = {}
        self.doubted: dict[str, Any] = {}

    def start(self, offset: int, shape: tuple[int, ...], size: int) -> None:
        """Begin the block of `size` elements whose first is number `offset` of `shape`."""
        self.offset = offset
        self.shape = shape
        self.size = size
        self.lost = None
        self.doubted = {}

    def refuse(self, bad: Any, reason: str, shown: Any = None) -> None:
        """Raise with the element's index in the whole array, or mark it as lost."""
        if bad is False or not np.any(bad):
            return
        if not self.keep_going:
            flat = int(np.argmax(bad))
            where = place(self.offset + flat, self.shape)
            raise DomainError(f"{reason}{_example(shown, bad, flat)} at {where}")
        bad = np.broadcast_to(bad, self.size)
        fresh = bad if self.lost is None else bad & ~self.lost
        count = int(np.count_nonzero(fresh))
        if count:
            self.reasons[reason] = self.reasons.get(reason, 0) + count
            self.lost = bad if self.lost is None else bad | self.lost

    def caution(self, bad: Any, reason: str, shown: Any = None) -> None:
        """Count doubtful elements that are not lost, once for a reason; `report` warns once."""
        if bad is not False and np.any(bad):
            bad = np.broadcast_to(bad, self.size)
            known = self.doubted.get(reason)
            fresh = bad if known is None else bad & ~known
            if self.lost is not None:
                fresh = fresh & ~self.lost
            self.doubted[reason] = bad if known is None else bad | known
            count = int(np.count_nonzero(fresh))
            if count:
                self.cautions[reason] = self.cautions.get(reason, 0) + count

    def report(self) -> None:
        """Warn once for all that was marked or doubted."""
        for reason, count in self.cautions.items():
            warn(f"{reason} ({count} elements)", AssumptionWarning)
        if self.reasons:
            parts = "; ".join(f"{count} x {reason}" for reason, count in self.reasons.items())
            total = sum(self.reasons.values())
            said = "1 element is" if total == 1 else f"{total} elements are"
            warn(f"{said} not a number: {parts}", AssumptionWarning)


def _example(shown: Any, bad: Any, flat: int) -> str:
    if shown is None:
        return ""
    value = shown if np.ndim(shown) == 0 else np.ravel(np.broadcast_to(shown, np.shape(bad)))[flat]
    return f" (here {float(value):.4g})"


AT_ONCE = Checks()
