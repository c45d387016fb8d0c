"""Exceptions and warnings: each error is ours and also the builtin that callers expect."""

from __future__ import annotations


class WellIndexError(Exception):
    """Base of every error that this package raises on purpose."""


class UnitsError(WellIndexError, TypeError):
    """A value has no unit, a wrong unit, or one that cannot be read safely."""


class DomainError(WellIndexError, ValueError):
    """A value has the right unit but lies outside the range where the formula holds."""


class ShapeError(WellIndexError, ValueError):
    """Arrays do not fit together."""


class CaseError(WellIndexError, ValueError):
    """A case file cannot be read, or asks for something it does not describe."""


class ArgumentsError(UnitsError, DomainError, ShapeError):
    """Several arguments are wrong in different ways; caught as any of its three kinds."""


class AssumptionWarning(UserWarning):
    """The answer rests on an assumption that is strained here."""


class BackflowWarning(UserWarning):
    """A coupling, or a whole well, flows against its role."""
