"""Speaking to people: standard error for notes and errors, standard output for data; colour only where wanted."""

from __future__ import annotations

import os
import re
import sys
from collections.abc import Callable
from typing import Any, TypeVar

import click

F = TypeVar("F", bound=Callable[..., Any])

_CONTROL = re.compile(r"[\x00-\x08\x0b-\x1f\x7f-\x9f\u2028\u2029\u202a-\u202e\u2066-\u2069]")


def safe(text: str) -> str:
    """Text from outside (file names, messages) with control characters made visible."""
    return _CONTROL.sub(lambda found: f"\\x{ord(found[0]):02x}", text)


def visible(text: str) -> str:
    """Text from outside that is to stay on its line: line feeds and tabs are made visible, too."""
    return safe(text).replace("\n", "\\x0a").replace("\t", "\\x09")


def one_line(text: str) -> str:
    """The text on one line, at most 300 characters."""
    flat = " ".join(text.split())
    return flat if len(flat) <= 300 else f"{flat[:299]}…"


def coloured(stream: Any) -> bool:
    """Whether a stream is a terminal that may show colour (``NO_COLOR`` and ``TERM=dumb`` say no)."""
    if os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb":
        return False
    try:
        return bool(stream.isatty())
    except (AttributeError, ValueError):
        return False


class Talk:
    """How much is said. ``quiet`` keeps notes back, ``verbose`` tells more; errors are always told."""

    def __init__(self) -> None:
        self.quiet = False
        self.verbose = False

    def note(self, text: str) -> None:
        """Something good to know, on standard error."""
        if not self.quiet:
            self.line(text)

    def error(self, text: str) -> None:
        """An error, on standard error."""
        head = "\033[31merror:\033[0m " if coloured(sys.stderr) else "error: "
        sys.stderr.write(f"{head}{safe(text)}\n")

    def line(self, text: str) -> None:
        """A line on standard error as it is."""
        sys.stderr.write(f"{safe(text)}\n")

    def usage(self, error: click.ClickException) -> None:
        """A mistake on the command line, with the way to the help."""
        context = getattr(error, "ctx", None)
        self.error(error.format_message())
        if context is not None:
            self.line(f"{context.get_usage()}\nTry '{context.command_path} --help'.")

    def traceback(self, error: Exception) -> None:
        """Where an unexpected error came from, if more is wanted."""
        if self.verbose:
            import traceback

            self.line("".join(traceback.format_exception(error)).rstrip())


def write(text: str) -> None:
    """Data, on standard output."""
    sys.stdout.write(text if text.endswith("\n") else f"{text}\n")


def write_json(value: Any) -> None:
    """A value as JSON on standard output."""
    write_utf8(json_text(value))


def json_text(value: Any) -> str:
    """JSON with shortest round-trip floats and keys as they come; NaN is refused."""
    import json

    text = json.dumps(value, indent=2, ensure_ascii=False, allow_nan=False)
    try:
        text.encode()
    except UnicodeEncodeError:
        return json.dumps(value, indent=2, allow_nan=False)
    return text


def write_utf8(text: str) -> None:
    """Data whose bytes are the same wherever it is written: UTF-8, lines ended by a line feed."""
    sys.stdout.flush()
    sys.stdout.buffer.write(text.encode() if text.endswith("\n") else f"{text}\n".encode())
    sys.stdout.buffer.flush()


def _set(name: str) -> Callable[[click.Context, click.Parameter, bool], None]:
    def callback(context: click.Context, parameter: click.Parameter, value: bool) -> None:
        if value:
            setattr(context.ensure_object(Talk), name, True)

    return callback


def loudness(command: F) -> F:
    """Options ``--quiet`` and ``--verbose``, before the command's name or after it."""
    for flag, short, text in (
        ("--verbose", "-v", "Tell more; show where an internal error came from."),
        ("--quiet", "-q", "Only data and errors."),
    ):
        command = click.option(flag, short, is_flag=True, expose_value=False, callback=_set(flag[2:]), help=text)(
            command
        )
    return command
