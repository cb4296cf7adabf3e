"""Formulas of problem files as SymPy expressions, read apart from the program's own parser."""

import ast
import re

import sympy as sp

FUNCTIONS = {
    "exp": sp.exp, "log": sp.log, "ln": sp.log, "sqrt": sp.sqrt, "sin": sp.sin, "cos": sp.cos, "tan": sp.tan,
    "asin": sp.asin, "acos": sp.acos, "atan": sp.atan, "atan2": sp.atan2, "sinh": sp.sinh, "cosh": sp.cosh,
    "tanh": sp.tanh, "asinh": sp.asinh, "acosh": sp.acosh, "atanh": sp.atanh, "erf": sp.erf, "erfc": sp.erfc,
    "abs": sp.Abs, "sign": sp.sign,
}
COMPARISONS = {ast.Lt: sp.Lt, ast.LtE: sp.Le, ast.Gt: sp.Gt, ast.GtE: sp.Ge, ast.Eq: sp.Eq, ast.NotEq: sp.Ne}
OPERATIONS = {
    ast.Add: lambda a, b: a + b, ast.Sub: lambda a, b: a - b, ast.Mult: lambda a, b: a * b,
    ast.Div: lambda a, b: a / b, ast.Pow: lambda a, b: a**b,
}


def read(text, names):
    """The expression that `text` means; `names` maps names to expressions. Decimals are exact."""
    text = re.sub(r"\bif\s*\(", "choose(", text.replace("^", "**"))
    return Reader(text, names).of(ast.parse(text, mode="eval").body)


class Reader:
    def __init__(self, text, names):
        self.text, self.names = text, names

    def of(self, node):
        if isinstance(node, ast.Constant):
            return sp.Rational(ast.get_source_segment(self.text, node))
        if isinstance(node, ast.Name):
            return sp.pi if node.id == "pi" else self.names[node.id]
        if isinstance(node, ast.BinOp):
            return OPERATIONS[type(node.op)](self.of(node.left), self.of(node.right))
        if isinstance(node, ast.UnaryOp):
            return -self.of(node.operand) if isinstance(node.op, ast.USub) else self.of(node.operand)
        if isinstance(node, ast.Compare):
            return sp.Piecewise((1, self.relation(node)), (0, True))
        return self.call(node.func.id, node.args)

    def relation(self, node):
        if isinstance(node, ast.Compare):
            return COMPARISONS[type(node.ops[0])](self.of(node.left), self.of(node.comparators[0]))
        return sp.Ne(self.of(node), 0)

    def call(self, name, arguments):
        if name == "choose":
            condition, first, second = arguments
            return sp.Piecewise((self.of(first), self.relation(condition)), (self.of(second), True))
        values = [self.of(argument) for argument in arguments]
        if name == "max":
            return sp.Piecewise((values[0], values[0] > values[1]), (values[1], True))
        if name == "min":
            return sp.Piecewise((values[0], values[0] < values[1]), (values[1], True))
        if name == "heaviside":
            return sp.Heaviside(values[0], sp.Rational(1, 2))
        return FUNCTIONS[name](*values)


def number(value):
    """A TOML number or constant formula as an exact SymPy number: decimals mean what they say."""
    return sp.Rational(repr(value))


def names_of(problem, coordinates):
    """Everything that the formulas of a problem may use, sub-expressions resolved."""
    names = {axis: sp.Symbol(axis, real=True) for axis in coordinates + ["t"]}
    axes = [axis for axis in coordinates]
    for name, value in problem.get("parameters", {}).items():
        values = value if isinstance(value, list) else [value]
        if len(values) == 1:
            names[name] = number(values[0])
        if isinstance(value, list):
            names.update({f"{name}_{axis}": number(one) for axis, one in zip(axes, values)})
    names.update({name: number(value) for name, value in problem.get("constants", {}).items()})
    waiting = dict(problem.get("names", {}))
    while waiting:
        ready = [name for name, text in waiting.items() if not set(re.findall(r"[A-Za-z_]\w*", text)) & set(waiting)]
        for name in ready:
            names[name] = read(waiting.pop(name), names)
    return names
