"""The house has one way down: a module imports from its own layer or from lower ones."""

import ast
from pathlib import Path

import pytest

import calcpack

ROOT = Path(calcpack.__file__).parent
LAYERS = [
    "job",
    "files",
    "processes",
    "progress",
    "statics",
    "actions",
    "framing",
    "equivalent",
    "sheet",
    "clauses",
    "figures",
    "notebook",
    "export",
    "record",
    "build",
    "verification",
    "overview",
    "cli",
]
MODULES = sorted(path for path in ROOT.rglob("*.py") if "_house" not in path.parts)


def layer_of(module: str) -> int | None:
    """The layer of a dotted module name, None for the package itself and for what is not ours."""
    parts = module.split(".")
    if parts[0] != "calcpack" or len(parts) == 1:
        return None
    return LAYERS.index(parts[1])


def imported(path: Path) -> set[str]:
    names = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names.update(alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: relative import"
            names.add(node.module or "")
            if node.module == "calcpack":
                names.update(f"calcpack.{alias.name}" for alias in node.names if alias.name[0].islower())
    return names


@pytest.mark.parametrize("path", MODULES, ids=lambda path: path.relative_to(ROOT).as_posix())
def test_imports_run_downward_only(path):
    relative = path.relative_to(ROOT).with_suffix("").parts
    if relative[0] in ("__init__", "__main__"):
        pytest.skip("the package itself")
    own = LAYERS.index(relative[0])
    upward = {name for name in imported(path) if (layer := layer_of(name)) is not None and layer > own}
    assert not upward, f"{'.'.join(relative)} reaches up to {sorted(upward)}"


def test_an_arrow_back_up_would_be_seen(tmp_path):
    wrong = tmp_path / "wrong.py"
    wrong.write_text("from calcpack.cli import app\nfrom calcpack import build\n", encoding="utf-8")
    assert {layer_of(name) for name in imported(wrong)} >= {LAYERS.index("cli"), LAYERS.index("build")}


@pytest.mark.parametrize("path", MODULES, ids=lambda path: path.relative_to(ROOT).as_posix())
def test_modules_stay_readable_in_one_sitting(path):
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 450
