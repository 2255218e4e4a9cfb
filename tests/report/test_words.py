"""The word catalogue: every key used exists and gets its values, every key is used."""

from __future__ import annotations

import ast
import re
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

import pathcalc
from pathcalc.words import WORDS, Saying, english, say, say_of, using
from pathcalc.words.catalogue import _ENGLISH, _flat, _plain, slots

FOLDER = Path(pathcalc.__file__).parent
ROOMS = ("equations", "path", "report", "cli")
PREFIXES = re.compile(r"[\"']([a-z]+(?:\.[a-z]+)*\.)\{")
SPEAKERS = {"say", "Saying", "_word"}
NAMED = {"say_of"}


def files() -> list[Path]:
    return [p for room in ROOMS for p in (FOLDER / room).rglob("*") if p.suffix in {".py", ".j2"}]


def sources() -> str:
    return "\n".join(p.read_text(encoding="utf-8") for p in files())


def calls() -> Iterator[tuple[str, str, ast.Call, list[str], list[str]]]:
    """File, function, call, whole keys and beginnings of keys of every call that speaks."""
    for path in files():
        if path.suffix != ".py":
            continue
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and getattr(node.func, "id", "") in SPEAKERS | NAMED and node.args:
                first = node.args[0]
                options = [first.body, first.orelse] if isinstance(first, ast.IfExp) else [first]
                whole = [o.value for o in options if isinstance(o, ast.Constant)]
                begun = [str(getattr(o.values[0], "value", "")) for o in options if isinstance(o, ast.JoinedStr)]
                yield path.name, node.func.id, node, whole, begun  # type: ignore[attr-defined]


def test_every_key_used_exists() -> None:
    keys = set(WORDS)
    tables = {key.partition(".")[0] for key in keys}
    used = 0
    for file, function, _, whole, begun in calls():
        for key in whole:
            used += 1
            assert key in (tables if function in NAMED else keys), (file, key)
        for lead in begun:
            assert any(key.startswith(lead) for key in keys), (file, lead)
    for key in re.findall(r"say\(\s*\"([a-z][\w.-]+)\"", sources()):
        assert key in keys
    assert used > 200


def test_every_value_of_a_text_is_given() -> None:
    checked = 0
    for file, _, call, whole, _ in calls():
        given = {k.arg for k in call.keywords}
        for key in whole:
            if key in WORDS and None not in given:
                checked += 1
                assert slots(WORDS[key]) <= given, (file, key)
    assert checked > 200


def test_every_key_is_used() -> None:
    text = sources()
    tables = {whole[0] + "." for _, function, _, whole, _ in calls() if function in NAMED and whole}
    prefixes = ("symbol.", *tables, *set(PREFIXES.findall(text)))
    unused = [k for k in WORDS if f'"{k}"' not in text and not k.startswith(prefixes) and f"'{k}'" not in text]
    assert unused == []


def test_names_of_the_package_have_words() -> None:
    """Where a key is put together from a name, each name has its text."""
    from pathcalc.case.leg_registry import leg_models
    from pathcalc.equilibrium.points import PHASES
    from pathcalc.path.basis import _CONSTANTS, _PARAMETERS
    from pathcalc.path.checks import NAMES, meaning, name_in_words

    assert all(f"phase.{phase}" in WORDS for phase in PHASES if phase != "none")
    assert all(f"path.{path}" in WORDS for path in leg_models())
    assert all(f"constant.{key}" in WORDS for key, *_ in _CONSTANTS)
    assert all(f"parameter.{key}" in WORDS for key in _PARAMETERS.values())
    assert [name_in_words(name) for name in NAMES] == list(NAMES)
    assert all(meaning(name) for name in NAMES)


def test_no_text_stands_in_the_worked_steps() -> None:
    """Titles, notes and sources of steps are said, not written."""
    for path in (FOLDER / "path").glob("*.py"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.Call) and getattr(node.func, "id", "") in {"Step", "Constant", "_warning"}:
                texts = [k.value for k in node.keywords if k.arg in ("title", "note", "source", "text")]
                if node.func.id == "_warning":  # type: ignore[attr-defined]
                    texts += node.args[2:]
                elif node.func.id == "Step":  # type: ignore[attr-defined]
                    texts += node.args[:1]
                else:
                    texts += node.args[1:2]
                for text in texts:
                    written = isinstance(text, ast.Constant) and text.value
                    assert not written, (path.name, ast.unparse(text))


def test_missing_value_is_an_error() -> None:
    with pytest.raises(KeyError):
        say("basis.count", n=1)
    with pytest.raises(KeyError):
        say("no.such.words")
    assert say_of("phase", "plasma") == "plasma"


def test_quick_reading_is_that_of_toml() -> None:
    """The English file is of the simple form that is read without the whole of TOML, and reads the same."""
    text = _ENGLISH.read_text(encoding="utf-8")
    assert _plain(text) == dict(_flat(tomllib.loads(text))) == dict(english().texts)
    assert _plain('[a]\nb = "c\\n"\n') is None
    assert _plain("[a]\nb = 'c' # remark\n") is None


def test_english_texts_hold_names_alone_in_braces() -> None:
    for text in WORDS.values():
        slots(text)


def test_saying_is_said_in_the_words_in_force(tmp_path: Path) -> None:
    file = tmp_path / "de.toml"
    file.write_text("[reach]\nrange = 'von {low} bis {high}'\n", encoding="utf-8")
    saying = Saying("reach.range", low="1 K", high=Saying("step.given"))
    assert str(saying) == "1 K to Given"
    with using(file):
        assert str(saying) == "von 1 K bis Given"
        with using():
            assert str(saying) == "1 K to Given"
    assert saying == Saying("reach.range", low="1 K", high=Saying("step.given"))
