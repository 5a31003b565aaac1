"""Docstrings say what the code does: every public function documents its real arguments, and numbers have units.

Forms in use: a first sentence; `Args:` with `name: text` or `name, name: text`, the unit last in square brackets
([-] if none); `Returns:`, `Raises:`, `Source:`. A short function may give the unit of its result at the end of its
first sentence instead of under `Returns:`.
"""

import ast
import re
from pathlib import Path

import pytest

TOP = Path(__file__).parents[1]
FILES = sorted((TOP / "retrofit").rglob("*.py"))
NUMBERS = {"float", "ArrayLike", "FloatArray", "np.float64"}
SELF = ("self", "cls")
COMPUTES = ("properties", "cycle", "equipment")  # the other rooms also pass on numbers of whatever unit
UNIT = re.compile(r"\[[^\]]+\]")
SECTION = re.compile(r"^(Args|Returns|Raises|Source|Attributes):", re.MULTILINE)


def _public_functions(tree, owner=""):
    """Yield dotted name and node of every public function and method, not of what stands inside one."""
    for node in tree.body:
        if isinstance(node, ast.ClassDef) and not node.name.startswith("_"):
            yield from _public_functions(node, f"{node.name}.")
        elif isinstance(node, ast.FunctionDef) and not node.name.startswith("_"):
            yield owner + node.name, node


def _functions():
    for path in FILES:
        place = path.relative_to(TOP).with_suffix("").as_posix().replace("/", ".")
        for name, node in _public_functions(ast.parse(path.read_text(encoding="utf-8"))):
            yield pytest.param(node, place.split(".")[1] in COMPUTES, id=f"{place}.{name}")


FUNCTIONS = list(_functions())


def _sections(docstring):
    """Return the parts of a docstring by the name of the section; the part before them is 'Sentence'."""
    parts = SECTION.split(docstring)
    return {"Sentence": parts[0]} | dict(zip(parts[1::2], parts[2::2], strict=True))


def _documented(text):
    """Return the documented arguments and their texts, in order: entries stand at the least indentation."""
    lines = [line for line in text.splitlines() if line.strip()]
    if not lines:
        return {}
    least = min(len(line) - len(line.lstrip()) for line in lines)
    entries = []
    for line in lines:
        if len(line) - len(line.lstrip()) == least:
            entries.append(line.strip())
        else:
            entries[-1] += " " + line.strip()
    found = {}
    for entry in entries:
        names, _, meaning = entry.partition(":")
        found |= {name.strip().lstrip("*"): meaning for name in names.split(",")}
    return found


def _arguments(node):
    """Return the real arguments and their annotations, without self and cls."""
    args = node.args
    given = [*args.posonlyargs, *args.args, args.vararg, *args.kwonlyargs, args.kwarg]
    return {
        arg.arg: ast.unparse(arg.annotation) if arg.annotation else "" for arg in given if arg and arg.arg not in SELF
    }


def _is_number(annotation):
    return any(part.strip() in NUMBERS for part in annotation.split("|"))


def faults(node, computes):
    """Return what is wrong with a function's docstring, in words; `computes` asks for units throughout."""
    docstring = ast.get_docstring(node)
    if not docstring:
        return ["no docstring"]
    sections = _sections(docstring)
    real, documented = _arguments(node), _documented(sections.get("Args", ""))
    found = []
    if documented and list(documented) != list(real):
        found.append(f"documents {', '.join(documented)} but takes {', '.join(real) or 'nothing'}")
    found += [
        f"no unit for {name}"
        for name, text in documented.items()
        if _is_number(real.get(name, "")) and not UNIT.search(text)
    ]
    if not computes:
        return found
    needs = [name for name, annotation in real.items() if _is_number(annotation)]
    if needs and not documented:
        found.append(f"numbers without a word: {', '.join(needs)}")
    returned = ast.unparse(node.returns) if node.returns else ""
    said = sections["Sentence"] + sections.get("Returns", "")
    if _is_number(returned) and not UNIT.search(said):
        found.append("no unit for the result")
    return found


@pytest.mark.parametrize(("node", "computes"), FUNCTIONS)
def test_docstring_fits_the_function(node, computes):
    """A public function has a docstring; its arguments are the real ones, in order, and numbers carry units."""
    assert faults(node, computes) == []


def test_every_room_is_looked_at():
    """The walk finds functions in every room that computes, and a good many of them."""
    names = [parameter.id for parameter in FUNCTIONS]

    assert len(names) > 150
    assert {name.split(".")[1] for name in names} >= {"properties", "cycle", "units", "refrigerants"}


GOOD = """
def work(h_J_per_kg: float, share: ArrayLike = 1.0) -> FloatArray:
    \"\"\"Return the work.

    Args:
        h_J_per_kg: Enthalpy. [J/kg]
        share: Part of it that counts,
            from 0 to 1. [-]
    Returns: Work. [J/kg]
    \"\"\"
"""


def _function(text):
    return ast.parse(text).body[0]


@pytest.mark.parametrize(
    ("old", "new", "fault"),
    [
        ("share: Part", "part: Part", "documents h_J_per_kg, part but takes h_J_per_kg, share"),
        ("share: ArrayLike", "other: ArrayLike", "documents h_J_per_kg, share but takes h_J_per_kg, other"),
        ("from 0 to 1. [-]", "from 0 to 1.", "no unit for share"),
        ("Enthalpy. [J/kg]", "Enthalpy.", "no unit for h_J_per_kg"),
        ("Work. [J/kg]", "Work.", "no unit for the result"),
        ("Args:", "Given:", "numbers without a word: h_J_per_kg, share"),
    ],
)
def test_a_fault_is_found(old, new, fault):
    """The check itself: a good docstring passes, and each way of spoiling it is named."""
    assert faults(_function(GOOD), True) == []
    assert fault in faults(_function(GOOD.replace(old, new, 1)), True)


def test_a_missing_docstring_is_found():
    """A function without a docstring is named."""
    assert faults(_function("def work():\n    return 1"), False) == ["no docstring"]
