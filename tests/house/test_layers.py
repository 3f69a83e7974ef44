"""The house: who may import whom, and how long things may be (the table in DEVELOPERS.md)."""

from __future__ import annotations

import ast
import re
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
PACKAGE = ROOT / "ident"
LONGEST_MODULE, LONGEST_FUNCTION = 400, 60
FRONT = ("ident", "ident.__main__")  # names only, loaded when used; and the program's start


def module_name(path: Path) -> str:
    parts = path.relative_to(ROOT).with_suffix("").parts
    return ".".join(parts[:-1] if parts[-1] == "__init__" else parts)


MODULES = {module_name(path): path for path in sorted(PACKAGE.rglob("*.py"))}


def layers_documented() -> list[str]:
    """Rows of the table in DEVELOPERS.md, lowest first."""
    text = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    return re.findall(r"^\| \d+ \| `(\w+)` \|", text, flags=re.MULTILINE)


def imports_of(name: str, tree: ast.AST) -> set[str]:
    """Modules of the package that a tree imports, wherever in it."""
    package = name if MODULES[name].name == "__init__.py" else name.rpartition(".")[0]
    found = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names if alias.name.split(".")[0] == "ident"}
        elif isinstance(node, ast.ImportFrom):
            base = package.rsplit(".", node.level - 1)[0] if node.level else ""
            source = ".".join(part for part in (base, node.module or "") if part)
            if source.split(".")[0] == "ident":
                found |= {
                    f"{source}.{alias.name}" if f"{source}.{alias.name}" in MODULES else source for alias in node.names
                }
    return found


def layer_of(name: str) -> str:
    parts = name.split(".")
    return parts[1] if len(parts) > 1 else ""


@pytest.mark.parametrize("name", [name for name in MODULES if name not in FRONT])
def test_imports_point_down(name: str) -> None:
    order = layers_documented()
    tree = ast.parse(MODULES[name].read_text(encoding="utf-8"))
    assert layer_of(name) in order, f"{name} is in no layer of DEVELOPERS.md"
    for imported in imports_of(name, tree):
        if imported == "ident" or layer_of(imported) == layer_of(name):
            continue
        points_down = order.index(layer_of(imported)) < order.index(layer_of(name))
        assert points_down, f"{name} imports {imported}, which is above it"


def runtime_imports(name: str) -> set[str]:
    """What importing a module imports at once: its top level, less what is for type checkers only."""
    tree = ast.parse(MODULES[name].read_text(encoding="utf-8"))
    top = [node for node in tree.body if isinstance(node, ast.Import | ast.ImportFrom)]
    return imports_of(name, ast.Module(body=list(top), type_ignores=[])) - {name}


def test_imports_run_in_no_circle() -> None:
    graph = {name: runtime_imports(name) & set(MODULES) for name in MODULES}
    done: set[str] = set()

    def visit(name: str, path: tuple[str, ...]) -> None:
        assert name not in path, " -> ".join((*path, name))
        if name in done:
            return
        for imported in graph[name]:
            visit(imported, (*path, name))
        done.add(name)

    for name in graph:
        visit(name, ())


def test_the_table_of_layers_names_only_what_is_there() -> None:
    assert set(layers_documented()) == {layer_of(name) for name in MODULES if name not in FRONT}


@pytest.mark.parametrize("name", MODULES)
def test_modules_and_functions_are_short(name: str) -> None:
    text = MODULES[name].read_text(encoding="utf-8")
    assert len(text.splitlines()) <= LONGEST_MODULE, f"{name} should become a folder"
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            length = (node.end_lineno or node.lineno) - node.lineno + 1
            assert length <= LONGEST_FUNCTION, f"{name}.{node.name} has {length} lines"


def test_assert_is_not_used_on_input() -> None:
    """`assert` vanishes under -O; input is checked with exceptions of the family."""
    for name, path in MODULES.items():
        tree = ast.parse(path.read_text(encoding="utf-8"))
        assert not any(isinstance(node, ast.Assert) for node in ast.walk(tree)), f"{name} uses assert"
        bare = [node for node in ast.walk(tree) if isinstance(node, ast.ExceptHandler) and node.type is None]
        assert not bare, f"{name} has a bare except"
