"""Single changes of operators, signs and constants in a source file."""

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

# Constants up to this size guard against round-off: ten per cent of one changes no result.
ROUND_OFF = 1e-6


@dataclass(frozen=True)
class Mutant:
    """One change: the file, the line, what it was and what it is."""

    path: str
    line: int
    number: int
    told: str

    @property
    def module(self) -> str:
        return self.path.removesuffix(".py").replace("/", ".")


def mutants(path: str) -> list[Mutant]:
    """All mutants of a file, given relative to the project."""
    tree = ast.parse((ROOT / path).read_text(encoding="utf-8"))
    return [
        Mutant(path, node.lineno, i, told) for i, (node, told) in enumerate(_sites(tree)) if told is not None
    ]


def mutated(mutant: Mutant) -> ast.Module:
    """The file's tree with the change made."""
    tree = ast.parse((ROOT / mutant.path).read_text(encoding="utf-8"))
    for i, (node, _) in enumerate(_sites(tree)):
        if i == mutant.number:
            _change(node)
            return ast.fix_missing_locations(tree)
    raise ValueError(f"{mutant.path} has no mutant {mutant.number}")


def _sites(tree: ast.Module) -> Iterator[tuple[ast.expr, str | None]]:
    """Every expression that can be changed, in a fixed order, with the change in words."""
    skipped = _words(tree)
    for node in ast.walk(tree):
        if not isinstance(node, ast.expr) or id(node) in skipped:
            continue
        changed = copy.deepcopy(node)
        if _change(changed):
            yield node, f"{ast.unparse(node)} -> {ast.unparse(changed)}"


def _words(tree: ast.Module) -> set[int]:
    """Nodes that only make words or types: messages, docstrings, annotations, arguments of raise."""
    found: set[int] = set()
    for node in ast.walk(tree):
        parts: list[ast.AST | None] = []
        if isinstance(node, (ast.JoinedStr, ast.Raise, ast.Assert)):
            parts = [node]
        elif isinstance(node, (ast.AnnAssign, ast.arg)):
            parts = [node.annotation]
        elif isinstance(node, (ast.FunctionDef, ast.AsyncFunctionDef)):
            parts = [node.returns, *node.decorator_list]
        elif isinstance(node, ast.ClassDef):
            parts = [*node.decorator_list, *node.bases]
        elif isinstance(node, ast.Assign) and any(
            isinstance(t, ast.Name) and t.id in ("__all__", "Index", "Array", "Position")
            for t in node.targets
        ):
            parts = [node.value]
        for part in parts:
            if part is not None:
                found |= {id(n) for n in ast.walk(part)}
    return found


def _number(node: ast.expr | ast.AST) -> bool:
    return isinstance(node, ast.Constant) and isinstance(node.value, (int, float))


def _change(node: ast.expr) -> bool:
    """Make the node's one change; False where it has none."""
    if isinstance(node, ast.BinOp) and any(
        isinstance(n, (ast.JoinedStr, ast.Constant)) and not _number(n) for n in ast.walk(node)
    ):
        return False
    if isinstance(node, (ast.BinOp, ast.BoolOp)) and type(node.op) in OPERATORS:
        node.op = OPERATORS[type(node.op)]()  # type: ignore[assignment]
    elif isinstance(node, ast.Compare) and type(node.ops[0]) in OPERATORS:
        node.ops[0] = OPERATORS[type(node.ops[0])]()  # type: ignore[assignment]
    elif isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        node.op = ast.UAdd()
    elif isinstance(node, ast.Constant) and type(node.value) is float and not 0.0 < node.value <= ROUND_OFF:
        node.value = 1.0 if node.value == 0.0 else 1.1 * node.value
    elif isinstance(node, ast.Constant) and type(node.value) is int:
        node.value += 1
    else:
        return False
    return True
