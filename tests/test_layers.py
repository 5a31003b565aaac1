"""Imports go one way, down the ladder of rooms, by full names; what is slow to load is loaded where it is used."""

import ast
import subprocess
import sys
from graphlib import TopologicalSorter
from pathlib import Path

import pytest

TOP = Path(__file__).parents[1]
PACKAGE = TOP / "retrofit"
# From the bottom up. A new room needs a place here.
LADDER = (
    "errors",
    "units",
    "refrigerants",
    "properties",
    "cycle",
    "equipment",
    "case",
    "study",
    "checks",
    "figures",
    "report",
    "meeting",
    "cli",
)
ENTRIES = ("__init__", "__main__")  # the door of the package and the way to run it
DOOR = ("retrofit", "retrofit.__version__")
FILES = sorted(PACKAGE.rglob("*.py"))
# Slow to load, so imported inside the functions that need them.
SLOW = ("CoolProp", "matplotlib", "scipy", "jinja2", "flask", "werkzeug")


def _room(path):
    first = path.relative_to(PACKAGE).parts[0]
    return first.removesuffix(".py")


def _is_type_checking(node):
    return isinstance(node, ast.If) and ast.unparse(node.test) in ("TYPE_CHECKING", "typing.TYPE_CHECKING")


def _names(node):
    """Return the full names an import statement brings in; a relative one as it is written."""
    if isinstance(node, ast.Import):
        return [alias.name for alias in node.names]
    module = "." * node.level + (node.module or "")
    return [f"{module.rstrip('.')}.{alias.name}" for alias in node.names] if module in ("retrofit", ".") else [module]


def imports(text):
    """Return the names imported anywhere in a module, and those imported as soon as it is loaded."""
    tree = ast.parse(text)
    anywhere = [
        name for node in ast.walk(tree) if isinstance(node, ast.Import | ast.ImportFrom) for name in _names(node)
    ]
    loaded, nodes = [], list(tree.body)
    while nodes:
        node = nodes.pop()
        if isinstance(node, ast.Import | ast.ImportFrom):
            loaded += _names(node)
        elif not isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda) and not _is_type_checking(node):
            nodes += list(ast.iter_child_nodes(node))
    return anywhere, loaded


def climbs(room, text):
    """Return the imports of a module that do not go down the ladder, in words."""
    found = []
    for name in imports(text)[0]:
        if name.startswith("."):
            found.append(f"{name} is relative")
        elif name.startswith("retrofit.") and name not in DOOR and room not in ENTRIES:
            target = name.split(".")[1]
            if target not in LADDER:
                found.append(f"{name} has no place in the ladder")
            elif LADDER.index(target) > LADDER.index(room):
                found.append(f"{name} climbs")
    return found


def _module(path):
    """Return the full name of a module or package."""
    return ".".join(path.relative_to(TOP).with_suffix("").parts).removesuffix(".__init__")


def _needed(module, names, modules):
    """Return the modules that have to be loaded before a module is: those it names, and packages around them."""
    found = set()
    for name in names:
        parts = name.split(".")
        around = {".".join(parts[:end]) for end in range(1, len(parts) + 1)} & modules
        found |= {each for each in around if each != module and not module.startswith(f"{each}.")}
    return found


def test_no_module_waits_for_itself():
    """Whichever module is loaded first, none is asked for a name while it is still loading."""
    modules = {_module(path): path for path in FILES}
    needs = {
        name: _needed(name, imports(path.read_text(encoding="utf-8"))[1], modules.keys())
        for name, path in modules.items()
    }

    assert list(TopologicalSorter(needs).static_order())  # CycleError names the modules that go in a ring


def _parameters(files):
    return [pytest.param(path, id=path.relative_to(TOP).as_posix()) for path in files]


def test_every_room_has_a_place():
    """Every room of the package stands in the ladder."""
    rooms = {_room(path) for path in FILES} - set(ENTRIES)

    assert rooms <= set(LADDER)
    assert rooms >= {"errors", "units", "refrigerants", "properties", "cycle", "case"}


@pytest.mark.parametrize("path", _parameters(FILES))
def test_imports_go_down(path):
    """No module imports from a room above its own, or by a relative name."""
    assert climbs(_room(path), path.read_text(encoding="utf-8")) == []


@pytest.mark.parametrize("path", _parameters(FILES))
def test_slow_libraries_wait(path):
    """What is slow to load is not loaded with the module, and only the properties room calls the property library."""
    anywhere, loaded = imports(path.read_text(encoding="utf-8"))

    assert not {name.split(".")[0] for name in loaded} & set(SLOW)
    if _room(path) != "properties":
        assert "CoolProp" not in {name.split(".")[0] for name in anywhere}


@pytest.mark.parametrize(
    "module",
    ["retrofit", "retrofit.errors", "retrofit.units", "retrofit.refrigerants", "retrofit.properties", "retrofit.cycle"],
)
def test_a_room_loads_lightly(module):
    """Importing a room in a fresh process loads none of the slow libraries, and the catalogue and units no NumPy."""
    light = (*SLOW, "numpy") if module.split(".")[-1] in ("retrofit", "errors", "units", "refrigerants") else SLOW
    code = f"import sys, {module}; print(*sorted({{name.split('.')[0] for name in sys.modules}}))"
    run = subprocess.run([sys.executable, "-c", code], cwd=TOP, capture_output=True, text=True, check=True)

    assert set(run.stdout.split()) & set(light) == set()


@pytest.mark.parametrize(
    ("room", "text", "fault"),
    [
        ("cycle", "from retrofit.case import Case", "retrofit.case climbs"),
        ("cycle", "def f():\n    from retrofit import study", "retrofit.study climbs"),
        ("units", "import retrofit.refrigerants.blends", "retrofit.refrigerants.blends climbs"),
        ("cycle", "from . import states", ".states is relative"),
        ("cycle", "from .states import StatePoint", ".states is relative"),
        ("cli", "from retrofit.attic import box", "retrofit.attic has no place in the ladder"),
    ],
)
def test_a_climb_is_found(room, text, fault):
    """The check itself: each way of climbing is named, and going down is not."""
    assert climbs(room, text) == [fault]
    assert climbs("cycle", "import numpy\nfrom retrofit.cycle.states import StatePoint\nimport retrofit.units") == []


def test_a_slow_import_is_found():
    """The check itself: an import on loading is told from one inside a function or for types only."""
    text = "if TYPE_CHECKING:\n    import scipy\ndef f():\n    import jinja2\nclass A:\n    import matplotlib.pyplot\n"

    assert imports(text)[1] == ["matplotlib.pyplot"]
