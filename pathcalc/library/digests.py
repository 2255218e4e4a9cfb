"""What a result came from, as digests: the case's files, the cards, the software. Nothing heavy is imported here."""

from __future__ import annotations

import hashlib
import os
import stat
from collections.abc import Mapping
from functools import cache, lru_cache
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from pathcalc.case.model import Case

CARDS = Path(__file__).resolve().parents[1] / "substances" / "cards"
REFERENCE = "reference"
BUILT_IN = "built-in:"
GROUPS = ("pathcalc.legs", "pathcalc.equations", "pathcalc.substances")
MAX_BYTES = 64_000_000


def sha256(data: bytes) -> str:
    """Digest in hexadecimal digits."""
    return hashlib.sha256(data).hexdigest()


@cache
def software() -> Mapping[str, str]:
    """Versions of this program, the numerical libraries, and packages that add legs, equations or substances."""
    from importlib.metadata import entry_points, version

    from pathcalc import __version__

    found = {"pathcalc": __version__, "numpy": version("numpy"), "scipy": version("scipy")}
    for group in GROUPS:
        for point in entry_points(group=group):
            if point.dist is not None and point.dist.name != "pathcalc":
                found[point.dist.name] = point.dist.version
    return dict(sorted(found.items(), key=lambda item: (item[0] not in ("pathcalc", "numpy", "scipy"), item[0])))


def files_of(case: Case, name: str) -> dict[str, str]:
    """Digests of the case's own file and of all it includes, by path relative to its folder."""
    found = {name: sha256(case.text.encode())}
    own = _own_cards(case)
    found.update({n: sha256(text.encode()) for n, text in case.includes if n not in own})
    return found


def cards_of(case: Case) -> dict[str, str | None]:
    """Digests of the card of the case's substance and of its published equation.

    Built-in cards go by ``built-in:`` and their path under the cards, the user's own by their path relative to the
    case's folder. None stands for an equation that was looked for and is not there. A card of another package is
    named by that package's version instead, in the software.
    """
    own = _own_cards(case)
    if own:
        texts = dict(case.includes)
        return {name: sha256(texts[name].encode()) if name in texts else None for name in own}
    if case.fluid.substance is None:
        return {}
    from pathcalc.substances.catalogue import card_path

    path = card_path(case.fluid.substance)
    if path.parent != CARDS:
        return {}
    return {f"{BUILT_IN}{name}": built_in(name) for name in (path.name, f"{REFERENCE}/{path.name}")}


def _own_cards(case: Case) -> list[str]:
    """Paths of the user's own card and of its published equation, relative to the case's folder."""
    card = case.fluid.card_path
    if card is None or case.path is None:
        return []
    name = Path(os.path.relpath(card, case.path.parent.resolve())).as_posix()
    return [name, (Path(name).parent / REFERENCE / Path(name).name).as_posix()]


@cache
def built_in(name: str) -> str | None:
    """Digest of a file of the built-in cards; None where there is none."""
    path = CARDS / name
    if not path.resolve().is_relative_to(CARDS):
        return None
    return file_digest(path)


def file_digest(path: Path) -> str | None:
    """Digest of a file; None where it is no regular file that can be read, or is absurdly large."""
    try:
        status = os.stat(path)
        if not stat.S_ISREG(status.st_mode) or status.st_size > MAX_BYTES:
            return None
        return _digest(str(path), status.st_mtime_ns, status.st_size, status.st_ino)
    except (OSError, ValueError):
        return None


@lru_cache(maxsize=4096)
def _digest(path: str, *_state: int) -> str:
    """Digest of a file in one state: a basis that hundreds of cases include is read once."""
    return sha256(Path(path).read_bytes())


def changes(accepted: Mapping[str, Any], stored_software: Mapping[str, str], folder: Path) -> list[str]:
    """What differs from when a result was accepted: files, cards, software, a text each; empty if nothing does."""
    found = []
    for name, digest in {**accepted["files"], **accepted["cards"]}.items():
        inside = name.removeprefix(BUILT_IN)
        now = built_in(inside) if name.startswith(BUILT_IN) else file_digest(folder / name)
        if now != digest:
            what = "is new" if digest is None else "is gone or cannot be read" if now is None else "has changed"
            found.append(f"{'built-in card ' if inside != name else ''}{inside} {what}")
    found += software_changes({**stored_software, **accepted.get("plugins", {})}, software())
    return found


def software_changes(stored: Mapping[str, str], now: Mapping[str, str]) -> list[str]:
    """Versions that differ, a text each."""
    return [
        f"{name} {stored.get(name, 'absent')} -> {now.get(name, 'absent')}"
        for name in dict.fromkeys((*stored, *now))
        if stored.get(name) != now.get(name)
    ]
