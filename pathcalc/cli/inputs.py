"""What a PATH on the command line stands for: a file, a folder, or standard input."""

from __future__ import annotations

import sys
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

from pathcalc.cli.run import report_error
from pathcalc.cli.talk import Talk, visible
from pathcalc.errors import UsageError

if TYPE_CHECKING:
    from pathcalc.case import Case

F = TypeVar("F", bound=Callable[..., Any])
STDIN = "-"

PATH = click.Path(allow_dash=True)
ROOT_HELP = "Folder that includes may not leave and case ids begin at; by default the enclosing checkout."


def root_option(command: F) -> F:
    """The option ``--root``."""
    return click.option("--root", type=click.Path(), metavar="DIR", help=ROOT_HELP)(command)


@dataclass(frozen=True)
class Input:
    """One case to come: where it lies, and how it is called in messages."""

    path: Path | None
    shown: str

    def load(self, root: str | None) -> Case:
        """The case; raises InvalidCaseError or UsageError."""
        from pathcalc.case import load, loads

        if self.path is not None:
            return load(self.path, root=root)
        from pathcalc.case.yaml_reader import MAX_BYTES

        data = sys.stdin.buffer.read(MAX_BYTES + 1)
        return loads(data.decode("utf-8", errors="surrogateescape"), name=STDIN, root=root)

    def id(self, root: str | None) -> str:
        """The id that the case has, told without reading it: its path under the root without the ending."""
        if self.path is None:
            return "stdin"
        from pathcalc.case.files import find_root

        folder = self.path.parent.resolve()
        top = find_root(folder) if root is None else Path(root).resolve()
        here = folder / self.path.name
        shown = here.relative_to(top) if here.is_relative_to(top) else Path(self.path.name)
        return shown.with_suffix("").as_posix()


@dataclass(frozen=True)
class Inputs:
    """The cases behind several PATHs; ``many`` where results come as a list."""

    items: tuple[Input, ...]
    many: bool
    code: int
    """Exit code of the PATHs that lead to no case."""


def gather(paths: Sequence[str], talk: Talk, root: str | None = None) -> Inputs:
    """The cases of all PATHs, each once, in the order given; a PATH without any is told and counted as wrong usage.

    Links in a folder that lead out of the root are not followed, and each is told and counted as such, too.
    """
    from pathcalc.library.discovery import discover

    found: dict[object, Input] = {}
    code, many = 0, len(paths) > 1
    for path in paths:
        if path == STDIN:
            found.setdefault(STDIN, Input(None, STDIN))
            continue
        folder = Path(path).is_dir()
        many = many or folder
        try:
            found_here = discover(path, root, results=False)
            files = found_here.cases
            for outcome in found_here.outcomes:
                code = max(code, outcome.code)
                for finding in outcome.findings:
                    talk.line(visible(str(finding)))
            if folder and not files:
                raise UsageError(f"{path}: no case in this folder (*.yaml that begin with the key pathcalc)")
        except UsageError as error:
            code = max(code, report_error(error, talk))
            continue
        for file in files:
            found.setdefault(file.absolute(), Input(file, file.as_posix()))
    return Inputs(tuple(found.values()), many, code)


def single(path: str) -> Input:
    """The one case behind a PATH that may not be a folder."""
    return Input(None, STDIN) if path == STDIN else Input(Path(path), Path(path).as_posix())
