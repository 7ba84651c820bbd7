"""A measurement model written as a formula, so that a laboratory can have any budget checked.

Only numbers, named inputs, + - * / ** and the functions sqrt, exp, log, log10, sin, cos,
tan are known. Formulas
also take complex numbers, so that derivatives can be taken by a complex step, and arrays of draws.
"""

from __future__ import annotations

import ast
import operator
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

LONGEST = 500
OPERATORS: dict[type[ast.operator], Callable[[Any, Any], Any]] = {
    ast.Add: operator.add,
    ast.Sub: operator.sub,
    ast.Mult: operator.mul,
    ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}
FUNCTIONS: dict[str, Callable[[Any], Any]] = {
    "sqrt": np.sqrt,
    "exp": np.exp,
    "log": np.log,
    "log10": np.log10,
    "sin": np.sin,
    "cos": np.cos,
    "tan": np.tan,
}
Formula = Callable[[Mapping[str, Any]], Any]


def parse_model(text: str) -> Formula:
    """A function of named inputs from its formula.

    Raises
    ------
    ValueError
        When the formula cannot be read or uses anything that is not known; the sentence names it. The
        function itself raises it for an input that is not given and for a division by zero.
    """
    if len(text) > LONGEST:
        raise ValueError(f"Formula is {len(text)} characters long; at most {LONGEST} are expected.")
    try:
        body = ast.parse(text, mode="eval").body
    except (SyntaxError, ValueError, MemoryError, RecursionError) as problem:
        raise ValueError(f"Formula is {text!r}; an expression such as 1000*m*P/(M*V) is expected.") from problem
    compute = _node(body)

    def model(values: Mapping[str, Any]) -> Any:
        try:
            with np.errstate(all="ignore"):  # a result that is no number is refused by whoever asked
                return compute(values)
        except (ZeroDivisionError, OverflowError) as problem:
            raise ValueError(f"Formula {text!r} gives no number for these inputs.") from problem

    return model


def _node(node: ast.expr) -> Formula:
    if isinstance(node, ast.Constant) and isinstance(node.value, int | float) and not isinstance(node.value, bool):
        number = float(node.value)
        return lambda values: number
    if isinstance(node, ast.Name):
        return _input(node.id)
    if isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub | ast.UAdd):
        inner, sign = _node(node.operand), -1 if isinstance(node.op, ast.USub) else 1
        return lambda values: sign * inner(values)
    if isinstance(node, ast.BinOp) and type(node.op) in OPERATORS:
        left, right, combine = _node(node.left), _node(node.right), OPERATORS[type(node.op)]
        return lambda values: combine(left(values), right(values))
    if isinstance(node, ast.Call) and isinstance(node.func, ast.Name) and len(node.args) == 1 and not node.keywords:
        return _function(node.func.id, _node(node.args[0]))
    raise ValueError(f"Formula has {ast.unparse(node)!r}; numbers, inputs, + - * / ** and {_known()} are known.")


def _input(name: str) -> Formula:
    def value(values: Mapping[str, Any]) -> Any:
        if name not in values:
            raise ValueError(f"Formula uses {name!r}, which is not among the inputs {', '.join(sorted(values))}.")
        return values[name]

    return value


def _function(name: str, inner: Formula) -> Formula:
    if name not in FUNCTIONS:
        raise ValueError(f"Formula uses the function {name!r}; {_known()} are known.")
    function = FUNCTIONS[name]
    return lambda values: function(inner(values))


def _known() -> str:
    return ", ".join(FUNCTIONS)
