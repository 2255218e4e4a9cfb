"""What can go wrong, as types.

PathcalcError             exit code 5: our own fault unless a subclass says otherwise
├── UsageError            exit code 2: the command line or the call is wrong
│   └── InvalidWordsError a catalogue of words is not valid; carries every finding
├── InvalidCaseError      exit code 3: a case, an included file or a card is not valid; carries every finding
└── NoSolutionError       exit code 4: a valid case has no solution in the equation's range; carries the trouble
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar, Literal


@dataclass(frozen=True)
class Finding:
    """One thing wrong with a text file, at its place (lines and columns count from 1)."""

    file: str
    line: int
    column: int
    message: str
    code: str
    severity: Literal["error", "warning"] = "error"

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}: {self.severity}: {self.message} ({self.code})"


@dataclass(frozen=True)
class Trouble:
    """Why a state or a leg has no solution, where, and what would do."""

    code: str
    at: str
    text: str
    remedy: str

    def __str__(self) -> str:
        place = f"{self.at}: " if self.at else ""
        return f"{place}{self.text}; {self.remedy} ({self.code})"


class PathcalcError(Exception):
    """Base of every error this package raises on purpose."""

    exit_code: ClassVar[int] = 5


class UsageError(PathcalcError):
    """The caller asked for something that cannot be asked."""

    exit_code = 2


class InvalidWordsError(UsageError):
    """A file is not a catalogue of words; ``findings`` holds everything that was found, in file order."""

    def __init__(self, findings: Sequence[Finding]) -> None:
        self.findings = list(findings)
        super().__init__("\n".join(str(f) for f in self.findings))


class InvalidCaseError(PathcalcError):
    """A file is not a valid case; ``findings`` holds everything that was found, in file order."""

    exit_code = 3

    def __init__(self, findings: Sequence[Finding]) -> None:
        self.findings = list(findings)
        super().__init__("\n".join(str(f) for f in self.findings))


class NoSolutionError(PathcalcError):
    """A valid case has no solution within the equation's range."""

    exit_code = 4

    def __init__(self, trouble: Trouble) -> None:
        self.trouble = trouble
        super().__init__(str(trouble))
