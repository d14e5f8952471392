"""Arithmetic of parameters in a coefficient: a small tree of its own, evaluated in fractions."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING

from yieldnet.foundation.exact import WrittenNumber

if TYPE_CHECKING:
    from collections.abc import Mapping

__all__ = ["Expression", "Negation", "Operation", "ParameterName", "Tree"]


@dataclass(frozen=True, slots=True)
class ParameterName:
    """A parameter by its name."""

    name: str


@dataclass(frozen=True, slots=True)
class Negation:
    """Minus something."""

    inner: Tree


@dataclass(frozen=True, slots=True)
class Operation:
    """Two things joined by ``+``, ``-``, ``*`` or ``/``."""

    sign: str
    left: Tree
    right: Tree


Tree = WrittenNumber | ParameterName | Negation | Operation


@dataclass(frozen=True, slots=True)
class Expression:
    """A parameter expression such as ``(2*po_nadh - 1)``.

    Parameters
    ----------
    tree : Tree
        Its structure.
    """

    tree: Tree

    def __str__(self) -> str:
        return f"({_text(self.tree)})"

    def names(self) -> tuple[str, ...]:
        """Parameters it uses, in order of appearance."""
        return tuple(dict.fromkeys(_names(self.tree)))

    def value(self, parameters: Mapping[str, Fraction]) -> Fraction:
        """Value for given parameters, exact.

        Parameters
        ----------
        parameters : mapping of str to Fraction
            Value of each parameter that is used.

        Returns
        -------
        Fraction
            The value [-].

        Raises
        ------
        KeyError
            If a parameter has no value.
        ZeroDivisionError
            If a divisor is zero.

        Examples
        --------
        >>> tree = Operation("*", WrittenNumber(Fraction(1, 2), "1/2"), ParameterName("po"))
        >>> Expression(tree).value({"po": Fraction(3)})
        Fraction(3, 2)
        """
        return _value(self.tree, parameters)


def _value(tree: Tree, parameters: Mapping[str, Fraction]) -> Fraction:
    match tree:
        case WrittenNumber():
            return tree.value
        case ParameterName():
            return parameters[tree.name]
        case Negation():
            return -_value(tree.inner, parameters)
    left, right = _value(tree.left, parameters), _value(tree.right, parameters)
    match tree.sign:
        case "+":
            return left + right
        case "-":
            return left - right
        case "*":
            return left * right
    return left / right


def _names(tree: Tree) -> list[str]:
    match tree:
        case WrittenNumber():
            return []
        case ParameterName():
            return [tree.name]
        case Negation():
            return _names(tree.inner)
    return _names(tree.left) + _names(tree.right)


def _text(tree: Tree) -> str:
    match tree:
        case WrittenNumber():
            return tree.text
        case ParameterName():
            return tree.name
        case Negation():
            return f"-{_bracketed(tree.inner)}"
    left = _text(tree.left)
    right = _text(tree.right)
    if tree.sign in "*/" and isinstance(tree.left, Operation) and tree.left.sign in "+-":
        left = f"({left})"
    if isinstance(tree.right, Operation) and (tree.sign in "*/" or tree.right.sign in "+-"):
        right = f"({right})"
    return f"{left}{tree.sign}{right}" if tree.sign in "*/" else f"{left} {tree.sign} {right}"


def _bracketed(tree: Tree) -> str:
    return f"({_text(tree)})" if isinstance(tree, Operation) else _text(tree)
