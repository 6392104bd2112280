"""How `mutate.py` brings a changed text into a process: at import, or into functions that are there already."""

from __future__ import annotations

import ast
import gc
import importlib.abc
import importlib.machinery
from collections.abc import Iterator
from pathlib import Path
from types import CodeType, FunctionType

from mutants import Function, first_line, functions

PACKAGE = "calcpack"
CALLED: set[Function] = set()  # since it was last emptied


class Replaced(importlib.abc.MetaPathFinder, importlib.abc.SourceLoader):
    """Imports one module from a changed text."""

    def __init__(self, module: str, path: Path, text: str) -> None:
        self.module, self.path, self.text = module, path, text

    def find_spec(self, name, path=None, target=None):
        """Ours alone."""
        if name != self.module:
            return None
        spec = importlib.machinery.ModuleSpec(name, self, origin=str(self.path))
        if self.path.name == "__init__.py":
            spec.submodule_search_locations = [str(self.path.parent)]
        return spec

    def get_filename(self, name):
        """Where the unchanged text stands."""
        return str(self.path)

    def get_data(self, path):
        """The changed text."""
        return self.text.encode()

    def path_stats(self, path):
        """No compiled file is kept."""
        raise OSError


def telling(path: Path) -> str:
    """A module's text with its functions saying that they are called."""
    tree = ast.parse(path.read_text(encoding="utf-8"))
    say = f"__import__({__name__!r}).CALLED.add({{}})"
    for each in functions(tree):
        call = ast.parse(say.format((str(path), first_line(each))), mode="eval").body
        if isinstance(each, ast.Lambda):
            each.body = ast.BoolOp(ast.Or(), [call, each.body])
        else:
            each.body.insert(1 if ast.get_docstring(each) else 0, ast.Expr(call))
    return ast.unparse(tree)


def replace_function(module: str, path: Path, text: str, owner: str) -> None:
    """Give a function of an imported module, and all that stands within it, the code of a changed text."""
    (code,) = (
        each
        for each in _codes(compile(text, str(path), "exec", dont_inherit=True))
        if each.co_qualname == owner
    )
    found = [
        each
        for each in gc.get_objects()
        if isinstance(each, FunctionType) and each.__module__ == module and each.__code__.co_qualname == owner
    ]
    if not found:
        raise LookupError(f"{module} has no {owner}")
    for each in found:
        each.__code__ = code


def _codes(code: CodeType) -> Iterator[CodeType]:
    """A code with all that stand within it."""
    yield code
    for each in code.co_consts:
        if isinstance(each, CodeType):
            yield from _codes(each)


def module_of(path: Path) -> str:
    return ".".join(path.with_suffix("").parts).removesuffix(".__init__")


def drawing_on(changed: set[str]) -> set[str]:
    """Some modules of the package with every module that imports them, directly or by way of another."""
    imports = {}
    for path in sorted(Path(PACKAGE).rglob("*.py")):
        whole = ast.parse(path.read_text(encoding="utf-8"))
        name = module_of(path)
        imports[name] = {each for node in ast.walk(whole) for each in _imported(node)} | _above(name) - {name}
    found = set(changed)
    while more := {name for name, wanted in imports.items() if name not in found and wanted & found}:
        found |= more
    return found


def _imported(node: ast.AST) -> set[str]:
    """The modules that an import statement loads, with the packages they stand in."""
    if isinstance(node, ast.Import):
        names = {each.name for each in node.names}
    elif isinstance(node, ast.ImportFrom) and node.module:
        names = {node.module, *(f"{node.module}.{each.name}" for each in node.names)}
    else:
        return set()
    return {each for name in names for each in _above(name)}


def _above(name: str) -> set[str]:
    """A module with the packages it stands in."""
    parts = name.split(".")
    return {".".join(parts[:count]) for count in range(1, len(parts) + 1)}
