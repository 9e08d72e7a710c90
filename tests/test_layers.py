"""The house rule: imports run downward only, and there is no circle."""

import ast
from graphlib import CycleError, TopologicalSorter
from pathlib import Path

import doubler

ROOT = Path(doubler.__file__).parent

# From the ground up; a layer may import itself and what stands before it. Names are first parts below doubler.
LAYERS = [
    {"errors"},
    {"demo_data"},
    {"units"},
    {"catalogue"},
    {"mechanics"},
    {"workbook"},
    {"cases", "outcome"},
    {"summary"},
    {"fill", "sweep", "size", "explain"},
    {"check"},
    {"hosts"},
    {"cli"},
    {"__main__"},
]
LEVEL = {name: level for level, names in enumerate(LAYERS) for name in names}


def modules() -> dict[str, Path]:
    found = {}
    for path in ROOT.rglob("*.py"):
        parts = path.relative_to(ROOT).with_suffix("").parts
        name = ".".join(("doubler", *(parts[:-1] if parts[-1] == "__init__" else parts)))
        found[name] = path
    return found


def imports(path: Path, known: set[str], *, at_top: bool = False) -> set[str]:
    tree = ast.parse(path.read_text(encoding="utf-8"))
    nodes = tree.body if at_top else list(ast.walk(tree))
    found: set[str] = set()
    for node in nodes:
        if isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom) and node.module and not node.level:
            for alias in node.names:
                submodule = f"{node.module}.{alias.name}"
                found.add(submodule if submodule in known else node.module)
    return {name for name in found if name == "doubler" or name.startswith("doubler.")}


def first_part(module: str) -> str:
    return module.split(".")[1] if "." in module else ""


def test_imports_run_downward_only() -> None:
    known = modules()
    wrong = []
    for module, path in known.items():
        here = first_part(module)
        if not here:
            continue
        assert here in LEVEL, f"{module} stands in no layer of tests/test_layers.py"
        for target in imports(path, set(known)):
            there = first_part(target)
            if there and there != here and LEVEL[there] >= LEVEL[here] and here != "cli":
                wrong.append(f"{module} imports {target}")
    assert not wrong


def test_there_is_no_circle_of_imports_at_module_top() -> None:
    known = modules()
    graph = {
        module: {target for target in imports(path, set(known), at_top=True) if target in known and target != module}
        for module, path in known.items()
    }
    # A package's __init__ re-exports its parts; a part that imports its own package's __init__ would be the circle.
    try:
        list(TopologicalSorter(graph).static_order())
    except CycleError as error:
        raise AssertionError(f"circle of imports: {error.args[1]}") from error


def test_no_file_grows_past_its_topic() -> None:
    long = {path.name: n for path in modules().values() if (n := len(path.read_text().splitlines())) > 450}
    assert not long


def test_no_module_is_a_drawer_for_leftovers() -> None:
    assert not {"utils", "helpers", "common", "base"} & {name.rsplit(".", 1)[-1] for name in modules()}
