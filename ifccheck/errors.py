"""Errors for people: one line each, and the exit status that goes with it."""

from __future__ import annotations

from typing import ClassVar


class IfccheckError(Exception):
    """Base of every error that a user may see; ``str(error)`` is its one-line message."""

    exit_status: ClassVar[int] = 1


class ModelError(IfccheckError):
    """A model cannot be read."""

    exit_status = 1


class OutputError(IfccheckError):
    """A result cannot be written."""

    exit_status = 1


class UsageError(IfccheckError):
    """The command line is wrong."""

    exit_status = 2


class BriefError(UsageError):
    """The brief, or a table that it names, is wrong."""
