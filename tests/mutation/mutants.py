"""Single changes of formulas in a source file: what is changed, and what is no formula.

Changed, one at a time: + and -, * and /, the matrix product and *; a sign; a conjugate taken off; a number
by a tenth or by one; an index or an attribute of x for that of y (0 and 1, real and imag, xx and yy); a
comparison turned round; "and" and "or".

Left out, since a change there makes no wrong formula:

words         messages, notes, reasons, annotations, what is joined to a string or appended to a list of words
              (names in WORDS); decorators, which are dataclasses and caches.
error paths   raise and assert, a branch that does nothing but raise or note a fault, and the condition that
              leads to it; except; lists of faults.
round-off     constants up to 1e-6 in size and those within 1e-6 of one; constants in capitals that are named
              as limits of round-off (ROUND_OFF), their products and adding or taking off these; the side of a
              comparison in which one stands, since it is a yardstick, with local names that are used for
              nothing else. Which way the comparison goes counts.
yardsticks    of the self-checks of theory (YARDSTICKS): what a residual is divided by, no part of a result.
place-holders the constant of np.where(mask, constant, value) under the name `safe` or `far`: its value is
              never used, it only keeps a division from zero.
array shapes  arguments of reshape, transpose, zeros, ones, empty, the shape of full; axis=; None in an index.
effort        numbers of Gauss points, terms, passes, steps of a root finder, cells from which a solver is
              sparse (EFFORT, leggauss, `for _ in range`): one more changes round-off only; one less is in the
              catalogue of faults. Options of solvers (diag_pivot_thresh, rcond, initial).
"""

from __future__ import annotations

import ast
import copy
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]

OPERATORS: dict[type[ast.AST], type[ast.AST]] = {
    ast.Add: ast.Sub,
    ast.Sub: ast.Add,
    ast.Mult: ast.Div,
    ast.Div: ast.Mult,
    ast.MatMult: ast.Mult,
    ast.Lt: ast.GtE,
    ast.LtE: ast.Gt,
    ast.Gt: ast.LtE,
    ast.GtE: ast.Lt,
    ast.Eq: ast.NotEq,
    ast.NotEq: ast.Eq,
    ast.And: ast.Or,
    ast.Or: ast.And,
}
EXCHANGED = {"real": "imag", "imag": "real", "xx": "yy", "yy": "xx"}

# Constants up to this size, or as near to one, guard against round-off.
SMALL = 1e-6
ROUND_OFF = {
    "_ALLOWED", "_ALONG", "_NEUTRAL", "_NO_WARPING", "_RIGHT", "_ROUND", "_SAME", "_STRAIGHT_ON", "CURVED",
    "EXACT_ROUND_OFF", "FLAT", "ROUND_OFF", "SAME_MOMENTS",
}  # fmt: skip
EFFORT = {"_DENSE", "_DEPTH", "_GAUSS_POINTS", "_TERMS", "LINE_POINTS", "PASSES"}
WORDS = {"bends", "faults", "missing", "notes", "opened", "reason", "source", "weightless"}
YARDSTICKS = {"beam_theory/checks.py": {"reach", "scale", "size"}}
SHAPES = {"empty", "ones", "reshape", "transpose", "zeros"}
OPTIONS = {"axis", "diag_pivot_thresh", "initial", "rcond"}


@dataclass(frozen=True)
class Mutant:
    """One change: the file, the line, the lines of its statement, its number, what it was and what it is."""

    path: str
    line: int
    lines: tuple[int, int]
    number: int
    told: str

    @property
    def module(self) -> str:
        return self.path.removesuffix(".py").replace("/", ".")


def mutants(path: str) -> list[Mutant]:
    """All mutants of a file, given relative to the project."""
    tree = _parsed(path)
    lines = _lines(tree)
    return [
        Mutant(path, node.lineno, lines[id(node)], i, told)
        for i, (node, told) in enumerate(_sites(tree, path))
    ]


def mutated(mutant: Mutant) -> ast.Module:
    """The file's tree with the change made."""
    tree = _parsed(mutant.path)
    for i, (node, _) in enumerate(_sites(tree, mutant.path)):
        if i == mutant.number:
            _change(node)
            return ast.fix_missing_locations(tree)
    raise ValueError(f"{mutant.path} has no mutant {mutant.number}")


def _parsed(path: str) -> ast.Module:
    tree = ast.parse((ROOT / path).read_text(encoding="utf-8"))
    for node in ast.walk(tree):
        # an index knows that it is one
        if isinstance(node, ast.Subscript):
            places = node.slice.elts if isinstance(node.slice, ast.Tuple) else [node.slice]
            for place in places:
                place.is_index = True  # type: ignore[attr-defined]
    return tree


def _lines(tree: ast.Module) -> dict[int, tuple[int, int]]:
    """First and last line of the innermost statement of every expression; (0, 0) where it runs on import."""
    found: dict[int, tuple[int, int]] = {}

    def visit(node: ast.AST, span: tuple[int, int]) -> None:
        if isinstance(node, (ast.FunctionDef, ast.Lambda)):
            span = (node.lineno, node.lineno)
        elif isinstance(node, ast.stmt) and span != (0, 0):
            body = getattr(node, "body", None)
            span = (node.lineno, body[0].lineno - 1 if body else node.end_lineno or node.lineno)
            span = (span[0], max(span))
        found[id(node)] = span
        for child in ast.iter_child_nodes(node):
            visit(child, span)

    visit(tree, (0, 0))
    return found


def _sites(tree: ast.Module, path: str) -> Iterator[tuple[ast.expr, str]]:
    """Every expression that can be changed, in a fixed order, with the change in words."""
    skipped = _no_formula(tree, path)
    for node in ast.walk(tree):
        if not isinstance(node, ast.expr) or id(node) in skipped:
            continue
        changed = copy.deepcopy(node)
        if _change(changed):
            yield node, f"{ast.unparse(node)} -> {ast.unparse(changed)}"


def _no_formula(tree: ast.Module, path: str) -> set[int]:
    """Nodes that are no formula, by the rules above."""
    found: set[int] = set()
    for node in ast.walk(tree):
        for part in (*_words(node), *_errors(node), *_array_shapes(node), *_effort(node), *_guards(node)):
            found |= {id(n) for n in ast.walk(part)}
        if isinstance(node, ast.BinOp) and (
            YARDSTICKS.get(path, set()) & {_name(node.left), _name(node.right)}
            or any(side for side in (node.left, node.right) if _allowance(side))
        ):
            found.add(id(node))
        if isinstance(node, ast.Assign) and {_name(t) for t in node.targets} & YARDSTICKS.get(path, set()):
            found |= {id(n) for n in ast.walk(node)}
    for function in (n for n in ast.walk(tree) if isinstance(n, ast.FunctionDef)):
        found |= _only_yardsticks(function, found)
    return found


def _words(node: ast.AST) -> list[ast.AST]:
    """Words, types and decorators of a node."""
    parts: list[ast.AST | None] = []
    if _string(node) or (isinstance(node, ast.BinOp) and (_string(node.left) or _string(node.right))):
        parts = [node]
    elif isinstance(node, (ast.AnnAssign, ast.arg)):
        parts = [node.annotation]
    elif isinstance(node, ast.FunctionDef):
        parts = [node.returns, *node.decorator_list]
    elif isinstance(node, ast.ClassDef):
        parts = [*node.decorator_list, *node.bases]
    elif isinstance(node, ast.Assign) and {_name(t) for t in node.targets} & (
        WORDS
        | {"__all__", "Array", "Complexes", "Distribution", "Floats", "Index", "NDArrayBool", "Position"}
    ):
        parts = [node.value]
    elif isinstance(node, ast.Call) and isinstance(node.func, ast.Attribute):
        if node.func.attr == "join" or _name(node.func.value) in WORDS:
            parts = [node]
    elif isinstance(node, ast.If) and not node.orelse and all(map(_notes, node.body)):
        parts = [node.test, *node.body]
    return [part for part in parts if part is not None]


def _errors(node: ast.AST) -> list[ast.AST]:
    """Branches that only raise or note a fault, and what leads to them."""
    if isinstance(node, (ast.Raise, ast.Assert, ast.ExceptHandler)):
        return [node]
    if isinstance(node, ast.If) and isinstance(node.body[-1], ast.Raise):
        return [node.test, *node.body]
    return []


def _notes(node: ast.stmt) -> bool:
    """Whether a statement only adds to a list of words."""
    if isinstance(node, ast.Continue):
        return True
    if isinstance(node, ast.Expr) and isinstance(node.value, ast.Call):
        called = node.value.func
        return isinstance(called, ast.Attribute) and _name(called.value) in WORDS
    return isinstance(node, ast.Raise)


def _array_shapes(node: ast.AST) -> list[ast.AST]:
    """Arguments that only say how an array is laid out."""
    if not isinstance(node, ast.Call):
        return []
    called = node.func.attr if isinstance(node.func, ast.Attribute) else ""
    parts: list[ast.AST] = [k.value for k in node.keywords if k.arg in OPTIONS]
    if called in SHAPES:
        parts += node.args
    elif called == "full":
        parts += node.args[:1]
    return parts


def _effort(node: ast.AST) -> list[ast.AST]:
    """Numbers of points, terms and steps."""
    if isinstance(node, ast.Assign) and {_name(t) for t in node.targets} & EFFORT:
        return [node.value]
    if isinstance(node, ast.Call) and isinstance(node.func, ast.Attribute) and node.func.attr == "leggauss":
        return list(node.args)
    if isinstance(node, ast.For) and _name(node.target) == "_":
        return [node.iter]
    return []


def _guards(node: ast.AST) -> list[ast.AST]:
    """Limits of round-off, yardsticks beside them, and place-holders."""
    parts: list[ast.AST] = []
    if isinstance(node, ast.Assign) and {_name(t) for t in node.targets} & ROUND_OFF:
        parts.append(node.value)
    elif isinstance(node, ast.Compare):
        sides = [node.left, *node.comparators]
        if any(map(_limit, sides)):
            parts += [side for side in sides if _limit(side)]
    elif isinstance(node, ast.Constant) and _number(node) and _is_small(node.value):
        parts.append(node)
    elif (
        isinstance(node, ast.Assign)
        and {_name(t) for t in node.targets} & {"safe", "far"}
        and isinstance(node.value, ast.Call)
    ):
        parts.append(node.value.args[1])
    return parts


def _only_yardsticks(function: ast.FunctionDef, skipped: set[int]) -> set[int]:
    """Values of local names that are read only where nothing is a formula."""
    found: set[int] = set()
    read: dict[str, list[ast.Name]] = {}
    for node in ast.walk(function):
        if isinstance(node, ast.Name) and isinstance(node.ctx, ast.Load):
            read.setdefault(node.id, []).append(node)
    for node in ast.walk(function):
        if isinstance(node, ast.Assign) and len(node.targets) == 1:
            uses = read.get(_name(node.targets[0]) or "", [])
            if uses and all(id(use) in skipped for use in uses):
                found |= {id(n) for n in ast.walk(node.value)}
    return found


def _limit(node: ast.AST) -> bool:
    """Whether a limit of round-off stands in an expression."""
    return any(
        (isinstance(n, ast.Name) and n.id in ROUND_OFF)
        or (_number(n) and _is_small(n.value) and n.value != 1.0)  # type: ignore[attr-defined]
        for n in ast.walk(node)
    )


def _allowance(node: ast.AST) -> bool:
    """Whether an operand is a limit of round-off or a product with one."""
    return _name(node) in ROUND_OFF or (
        isinstance(node, ast.BinOp) and isinstance(node.op, ast.Mult) and _name(node.left) in ROUND_OFF
    )


def _is_small(value: float) -> bool:
    return 0.0 < abs(value) <= SMALL or 0.0 < abs(abs(value) - 1.0) <= SMALL


def _string(node: ast.AST) -> bool:
    return isinstance(node, ast.JoinedStr) or (isinstance(node, ast.Constant) and isinstance(node.value, str))


def _name(node: ast.AST) -> str | None:
    return node.id if isinstance(node, ast.Name) else None


def _number(node: ast.AST) -> bool:
    return isinstance(node, ast.Constant) and type(node.value) in (int, float)


def _change(node: ast.expr) -> bool:
    """Make the node's one change; False where it has none."""
    if isinstance(node, (ast.BinOp, ast.BoolOp)) and type(node.op) in OPERATORS:
        node.op = OPERATORS[type(node.op)]()  # type: ignore[assignment]
    elif isinstance(node, ast.Compare) and type(node.ops[0]) in OPERATORS:
        node.ops[0] = OPERATORS[type(node.ops[0])]()  # type: ignore[assignment]
    elif isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        node.op = ast.UAdd()
    elif isinstance(node, ast.Attribute) and node.attr in EXCHANGED and isinstance(node.ctx, ast.Load):
        node.attr = EXCHANGED[node.attr]
    elif isinstance(node, ast.Call) and isinstance(node.func, ast.Attribute):
        if node.func.attr == "conj":
            node.func.attr = "asarray"
        elif node.func.attr == "conjugate":
            node.func.attr = "__pos__"
        else:
            return False
    elif isinstance(node, ast.Constant) and type(node.value) is float:
        node.value = 1.0 if node.value == 0.0 else 1.1 * node.value
    elif isinstance(node, ast.Constant) and type(node.value) is int:
        index = getattr(node, "is_index", False) and node.value in (0, 1)
        node.value = 1 - node.value if index else node.value + 1
    else:
        return False
    return True
