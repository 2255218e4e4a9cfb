"""The template environments: the built-in templates, and a company's own over them in a sandbox.

Values are escaped for where they go unless they are markup already; what a template's author wrote stays as it is.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from jinja2 import BaseLoader, ChoiceLoader, Environment, PackageLoader, PrefixLoader, StrictUndefined, nodes
from jinja2.exceptions import TemplateSyntaxError
from jinja2.sandbox import ImmutableSandboxedEnvironment
from markupsafe import Markup

PREFIX = "pathcalc"
"""A company's template reaches the built-in one of the same name under ``pathcalc/``."""


class Plain(Environment):
    """For the built-in templates."""

    def _parse(self, source: str, name: str | None, filename: str | None) -> nodes.Template:
        return _literal(super()._parse(source, name, filename))


class Sandbox(ImmutableSandboxedEnvironment):
    """For a company's templates: no private attributes, no changing of values, no way around the escaping."""

    def _parse(self, source: str, name: str | None, filename: str | None) -> nodes.Template:
        tree = super()._parse(source, name, filename)
        for node in tree.find_all(nodes.EvalContextModifier):
            raise TemplateSyntaxError("escaping cannot be switched off", node.lineno, name, filename)
        return _literal(tree)


def _literal(tree: nodes.Template) -> nodes.Template:
    """The template with its own quoted texts marked as what they are: its author's, not a value's."""
    for output in tree.find_all(nodes.Output):
        output.nodes = [_marked(node) for node in output.nodes]
    return tree


def _marked(node: nodes.Expr) -> nodes.Expr:
    if isinstance(node, nodes.Const) and isinstance(node.value, str):
        return nodes.MarkSafe(node, lineno=node.lineno)
    if isinstance(node, nodes.CondExpr):
        node.expr1 = _marked(node.expr1)
        node.expr2 = None if node.expr2 is None else _marked(node.expr2)
    return node


def environment(
    finalize: Callable[[Any], Any], filters: dict[str, Callable[..., Any]], company: BaseLoader | None
) -> Environment:
    """An environment over the built-in templates, or over the company's and then those."""
    from pathcalc.report.words import say

    built_in = PackageLoader("pathcalc.report")
    loaders: list[BaseLoader] = [PrefixLoader({PREFIX: built_in}), built_in]
    if company is not None:
        loaders.insert(0, company)
    kind = Plain if company is None else Sandbox
    env = kind(
        loader=ChoiceLoader(loaders),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
        finalize=finalize,
    )
    env.filters.pop("safe")
    env.filters.update(filters)
    env.globals["say"] = say
    return env


def markup(function: Callable[..., str]) -> Callable[..., Markup]:
    """The filter with its result marked as escaped."""

    def filtered(*values: Any) -> Markup:
        return Markup(function(*values))

    return filtered
