"""Parser for parameter expressions: ``+ - * /``, numbers, names, parentheses; nothing else."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from yieldnet.foundation.errors import TextError
from yieldnet.foundation.exact import NumberTextError, read_number
from yieldnet.model.expression import Expression, Negation, Operation, ParameterName

if TYPE_CHECKING:
    from yieldnet.model.expression import Tree

__all__ = ["MAX_DEPTH", "MAX_LENGTH", "ExpressionTextError", "read_expression"]

MAX_DEPTH = 20
"""Deepest nesting of an expression [-]."""
MAX_LENGTH = 300
"""Longest expression [characters]."""

_TOKEN = re.compile(r"\s*(?:(\d+\.?\d*(?:[eE][+-]?\d+)?|\.\d+)|([A-Za-z_]\w*)|([-+*/()−]))")


class ExpressionTextError(TextError):
    """A text that is not a parameter expression."""

    usual_code = "YN206"


def read_expression(text: str) -> Expression:
    """Expression from its text, outer parentheses included or not.

    Parameters
    ----------
    text : str
        ``(2*po_nadh - 1)``.

    Returns
    -------
    Expression
        Its tree.

    Raises
    ------
    ExpressionTextError
        If it is not one, or goes beyond the limits.

    Examples
    --------
    >>> str(read_expression("(2*po_nadh - 1)"))
    '(2*po_nadh - 1)'
    """
    if len(text) > MAX_LENGTH:
        raise ExpressionTextError(
            f"an expression of {len(text)} characters is too long", f"The limit is {MAX_LENGTH}."
        )
    tokens: list[str] = []
    at = 0
    plain = text.rstrip()
    while at < len(plain):
        found = _TOKEN.match(plain, at)
        if found is None:
            raise ExpressionTextError(
                f"{plain[at:].strip()[:1]!r} in {plain!r} belongs to no expression",
                "Only numbers, parameters, + - * / and parentheses are understood.",
            )
        tokens.append(found[0].strip().replace("−", "-"))
        at = found.end()
    reader = _Reader(tokens, plain)
    tree = reader.total(0)
    if reader.at < len(tokens):
        raise ExpressionTextError(f"{plain!r} goes on after its end with {tokens[reader.at]!r}")
    return Expression(tree)


class _Reader:
    """Recursive descent over the tokens, with a bound on depth."""

    def __init__(self, tokens: list[str], whole: str) -> None:
        self.tokens = tokens
        self.whole = whole
        self.at = 0

    def peek(self) -> str:
        return self.tokens[self.at] if self.at < len(self.tokens) else ""

    def take(self) -> str:
        token = self.peek()
        self.at += 1
        return token

    def total(self, depth: int) -> Tree:
        if depth > MAX_DEPTH:
            raise ExpressionTextError(f"the expression is nested more than {MAX_DEPTH} deep")
        tree = self.product(depth)
        while self.peek() in {"+", "-"}:
            tree = Operation(self.take(), tree, self.product(depth))
        return tree

    def product(self, depth: int) -> Tree:
        tree = self.part(depth)
        while self.peek() in {"*", "/"}:
            tree = Operation(self.take(), tree, self.part(depth))
        return tree

    def part(self, depth: int) -> Tree:
        token = self.take()
        if token == "-":
            if depth > MAX_DEPTH:
                raise ExpressionTextError(f"the expression is nested more than {MAX_DEPTH} deep")
            return Negation(self.part(depth + 1))
        if token == "(":
            tree = self.total(depth + 1)
            closing = self.take()
            if closing and closing != ")":
                raise ExpressionTextError(
                    f"{self.whole!r} has {closing!r} where an operator belongs",
                    "Only numbers, parameters, + - * / and parentheses are understood.",
                )
            if not closing:
                raise ExpressionTextError(f"{self.whole!r} has a parenthesis that never closes")
            return tree
        if token and (token[0].isdigit() or token[0] == "."):
            try:
                return read_number(token)
            except NumberTextError as error:
                raise ExpressionTextError(error.reason, error.hint, error.code) from None
        if token and (token[0].isalpha() or token[0] == "_"):
            return ParameterName(token)
        if not token:
            raise ExpressionTextError(f"{self.whole!r} ends too early")
        raise ExpressionTextError(f"{self.whole!r} has {token!r} where a value belongs")
