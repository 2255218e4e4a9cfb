"""A company's own templates, style and logo from one folder, laid over the built-in ones block by block.

``base.html.j2``
    extends ``pathcalc/base.html.j2`` and overrides its named blocks; so do ``index.html.j2``, ``markdown.md.j2`` and
    ``index.md.j2`` with theirs
``blocks.html.j2``
    macros of one argument, each called as the ``kind`` of a block of :mod:`pathcalc.report.view` that it draws
``style.css``
    added to the built-in style sheet
``logo.svg`` or ``logo.png``
    stands in the header
"""

from __future__ import annotations

import difflib
import re
import traceback
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from jinja2 import BaseLoader, Environment, TemplateNotFound, UndefinedError, nodes
from jinja2.exceptions import SecurityError, TemplateSyntaxError
from markupsafe import Markup

from pathcalc.errors import UsageError
from pathcalc.report.templating import PREFIX

PAGES = ("base.html.j2", "index.html.j2", "markdown.md.j2", "index.md.j2")
BLOCKS = "blocks.html.j2"
STYLE = "style.css"
MAX_BYTES = 1_000_000
_COMMENT = re.compile(r"/\*.*?\*/", re.S)
_REACHES_OUT = re.compile(r"@import|url\(\s*[\"']?(?!\s*[\"']?data:)|image-set\(|</style", re.I)


class Inside(BaseLoader):
    """Templates of one folder; nothing outside it, by whatever way."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder

    def get_source(self, environment: Environment, template: str) -> tuple[str, str, Callable[[], bool]]:
        """Text and place of a template of the folder."""
        path = inside(self.folder, template)
        if path is None:
            raise TemplateNotFound(template)
        return read(path), path.as_posix(), lambda: True


def inside(folder: Path, name: str) -> Path | None:
    """The file of that name in the folder, None where there is none or it lies elsewhere in truth."""
    if "\\" in name or "\0" in name or name.startswith("/"):
        return None
    path = folder / name
    try:
        real = path.resolve()
        found = real.is_file() and real.is_relative_to(folder.resolve())
    except (OSError, RuntimeError):
        return None
    return path if found else None


def read(path: Path) -> str:
    """A text file; raises UsageError where it is too long, unreadable, or not UTF-8."""
    try:
        return read_bytes(path).decode().replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        line = error.object[: error.start].count(b"\n") + 1
        raise UsageError(f"{path.as_posix()}:{line}: is not UTF-8 text") from None


def read_bytes(path: Path) -> bytes:
    """A file; raises UsageError where it is too long or cannot be read."""
    try:
        with path.open("rb") as stream:
            data = stream.read(MAX_BYTES + 1)
    except OSError as error:
        raise UsageError(f"{path.as_posix()}: cannot be read: {error.strerror or error}") from None
    if len(data) > MAX_BYTES:
        raise UsageError(f"{path.as_posix()}: is longer than {MAX_BYTES:,} bytes")
    return data


@dataclass(frozen=True, eq=False)
class Company:
    """What was found in the folder; :meth:`load` makes one, and refuses what cannot work."""

    folder: Path
    style: str = ""
    logo: Markup = field(default_factory=Markup)

    @property
    def loader(self) -> Inside:
        """Where the environment finds this company's templates."""
        return Inside(self.folder)

    @classmethod
    def load(cls, place: str | Path) -> Company:
        """The company's folder with everything in it read and compiled; raises UsageError with file and line."""
        from pathcalc.report.logo import NAMES, logo

        folder = Path(place)
        if not folder.is_dir():
            raise UsageError(f"--template {folder.as_posix()} is no folder")
        known = (*PAGES, BLOCKS, STYLE, *NAMES)
        if not any(inside(folder, name) for name in known):
            raise UsageError(f"--template {folder.as_posix()} holds none of {', '.join(known)}")
        style = inside(folder, STYLE)
        company = cls(folder, _style(style) if style else "", logo(folder))
        company._compile()
        return company

    def _compile(self) -> None:
        from pathcalc.report import html, markdown

        with self.at_fault():
            for path in sorted(self.folder.rglob("*.j2")):
                name = path.relative_to(self.folder).as_posix()
                if inside(self.folder, name):
                    env = (markdown if name.endswith(".md.j2") else html).environment(self)
                    env.get_template(name)
                    if name in PAGES:
                        self._refuse_lost_blocks(env, name)

    def _refuse_lost_blocks(self, env: Environment, name: str) -> None:
        """A block that the template under this one does not have would never be drawn."""
        path = self.folder / name
        tree = env.parse(read(path), name, path.as_posix())
        parents = [node for node in tree.body if isinstance(node, nodes.Extends)]
        if not parents:
            return
        for parent in parents:
            if isinstance(parent.template, nodes.Const) and parent.template.value == name:
                text = f"this template extends itself; the built-in one is {PREFIX}/{name}"
                raise UsageError(f"{path.as_posix()}:{parent.lineno}: {text}")
        known = set(_block_names(env, f"{PREFIX}/{name}"))
        if name.startswith("index.html"):
            known |= set(_block_names(env, f"{PREFIX}/base.html.j2"))
        for node in tree.body:
            if isinstance(node, nodes.Block) and node.name not in known:
                near = difflib.get_close_matches(node.name, known, 1)
                hint = f"did you mean {near[0]!r}?" if near else f"known are {', '.join(sorted(known))}"
                raise UsageError(f"{path.as_posix()}:{node.lineno}: there is no block {node.name!r}; {hint}")

    def macros(self, env: Environment, values: Mapping[str, Any]) -> dict[str, Any]:
        """The company's own macros by the kind of block that they draw."""
        if inside(self.folder, BLOCKS) is None:
            return {}
        module = env.get_template(BLOCKS).make_module({"own": {}, **values})
        return {name: value for name, value in vars(module).items() if not name.startswith("_") and callable(value)}

    @contextmanager
    def at_fault(self) -> Iterator[None]:
        """What goes wrong in a template of this folder is told with its file and line, as a UsageError."""
        try:
            yield
        except UsageError:
            raise
        except TemplateSyntaxError as error:
            raise UsageError(f"{error.filename or error.name}:{error.lineno}: {error.message}") from None
        except Exception as error:
            place = self._place(error)
            if place is None:
                raise
            raise UsageError(f"{place}: {_reason(error)}") from None

    def _place(self, error: Exception) -> str | None:
        """The innermost line of this folder's templates that led to the error."""
        for frame in reversed(traceback.extract_tb(error.__traceback__)):
            if frame.filename.endswith(".j2") and self.folder in Path(frame.filename).parents:
                return f"{frame.filename}:{frame.lineno}"
        return None


def _reason(error: Exception) -> str:
    if isinstance(error, TemplateNotFound):
        return f"there is no template {error.name!r} in this folder or among the built-in ones"
    if isinstance(error, RecursionError):
        return f"templates extend or call one another without end (the built-in ones are under {PREFIX}/)"
    if isinstance(error, UndefinedError | SecurityError):
        text = re.sub(r"'(?:\w+\.)+(\w+) object'", r"\1", str(error.message))
        return re.sub(r"<class '(?:\w+\.)+(\w+)'>", r"\1", text)
    if isinstance(error, KeyError):
        return f"there are no words under the key {error}"
    return f"{type(error).__name__}: {' '.join(str(error).split())[:300]}"


def _block_names(env: Environment, name: str) -> list[str]:
    assert env.loader is not None
    source = env.loader.get_source(env, name)[0]
    return [node.name for node in env.parse(source, name).find_all(nodes.Block)]


def _style(path: Path) -> str:
    text = read(path)
    bare = _COMMENT.sub(lambda found: re.sub(r"[^\n]", " ", found[0]), text)
    out = _REACHES_OUT.search(bare)
    if out:
        line = bare[: out.start()].count("\n") + 1
        word = out[0].split("(")[0].strip()
        raise UsageError(
            f"{path.as_posix()}:{line}: {word!r} cannot be in a style sheet of a page that stands alone; url() takes "
            "data: only"
        )
    return text if text.endswith("\n") else f"{text}\n"
