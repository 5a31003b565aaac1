"""Change one sign, factor or limit at a time in what computes, and see whether the tests of its room notice.

    python tests/bench/mutants.py equipment cycle --number 40 --seed 1 --minutes 20
    python tests/bench/mutants.py study/installed.py --all

Works on a copy of the project in a temporary folder; the project itself is never changed. A mutant is `killed` when a
test fails, `slow` when its tests take more than `--limit` seconds (an endless loop, or too little time), and
`SURVIVED` when all its tests pass. Survivors that cannot change a number are listed below with the reason, and are told
as `equivalent`; each other one asks for a test. The tests of the module itself run first, then the rest of the room.
"""

from __future__ import annotations

import argparse
import ast
import os
import random
import shutil
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from pathlib import Path
from typing import NamedTuple

TOP = Path(__file__).resolve().parents[2]
ROOMS = ("cycle", "equipment", "study")
COPIED = ("retrofit", "report_templates", "cases", "tests", "pyproject.toml")
OPERATORS = {ast.Add: ast.Sub, ast.Sub: ast.Add, ast.Mult: ast.Div, ast.Div: ast.Mult, ast.Pow: ast.Mult}
COMPARED = {ast.Lt: ast.Gt, ast.Gt: ast.Lt, ast.LtE: ast.GtE, ast.GtE: ast.LtE}
NAMES = {"maximum": "minimum", "minimum": "maximum", "max": "min", "min": "max", "fmax": "fmin", "fmin": "fmax",
         "sin": "cos", "cos": "sin", "exp": "expm1", "log": "log1p"}  # fmt: skip
# Survivors that change no result, by file, function and change, with why.
_STEERS = "steers the steps alone; what they end on is checked against the equation"
_ONE_PASCAL = "one pascal among 100 000"
_TOLERANCE = "how closely something is solved or told apart, far below what is shown"
EQUIVALENT: dict[tuple[str, str, str], str] = {
    ("cycle/matching.py", "_pressure_where", "(miss - new) / step -> (miss - new) * step"): _STEERS,
    ("equipment/balance.py", "_slopes", "0.05 -> 0.05500000000000001"): _STEERS,
    ("equipment/balance.py", "", "1e-06 -> 1.1e-06"): _TOLERANCE,
    (
        "equipment/oil.py",
        "changes_needed",
        "np.log(wanted) / np.log(kept) - 1e-09 -> np.log(wanted) / np.log(kept) - 1.1000000000000001e-09",
    ): _TOLERANCE,
    (
        "equipment/compressor.py",
        "",
        "0.05 -> 0.05500000000000001",
    ): "how wide the corner at the end of a curve is rounded",
    ("equipment/compressor.py", "constant", "[1.0, 2.0] -> [1.0, 2.2]"): "where the nodes of a level curve stand",
    ("equipment/compressor.py", "constant", "[1.0, 2.0] -> [1.1, 2.0]"): "where the nodes of a level curve stand",
    (
        "equipment/compressor.py",
        "shaft_and_electric",
        "power + 0.0 * efficiency -> power - 0.0 * efficiency",
    ): "nothing times the efficiency, for its shape",
    ("study/installed.py", "existing_plant", "-heat -> +heat"): "the capacity rate takes its absolute value",
    (
        "study/installed.py",
        "run_installed",
        "starts[1] + inlets - usual_K -> starts[1] + inlets + usual_K",
    ): _STEERS,
    ("study/installed.py", "run_installed", "starts[1] + inlets -> starts[1] - inlets"): _STEERS,
    (
        "study/installed.py",
        "_exchanger",
        "Exchanger(1.0, Secondary(table.inlet_K, rate), table.arrangement) -> "
        "Exchanger(1.1, Secondary(table.inlet_K, rate), table.arrangement)",
    ): "stands in until the conductance is found, and is replaced",
    ("equipment/polynomial.py", "_even_ln_p", "np.log -> np.log1p"): _ONE_PASCAL,
}


class Mutant(NamedTuple):
    """One change: where, in which function, the statement as it is and as it becomes, and the whole module."""

    path: Path
    line: int
    function: str
    before: str
    after: str
    text: str

    @property
    def change(self) -> str:
        """Return the change in short."""
        return f"{self.before} -> {self.after}"


def mutants_of(path: Path) -> Iterator[Mutant]:
    """Yield every mutant of a module."""
    tree = ast.parse(path.read_text(encoding="utf-8"))
    nodes = list(ast.walk(tree))
    parents = {id(child): node for node in nodes for child in ast.iter_child_nodes(node)}
    for node in nodes:
        line = [node]
        while id(line[-1]) in parents:
            line.append(parents[id(line[-1])])
        if any(_is_words(item) for item in line):
            continue
        whole = next((item for item in line if isinstance(item, ast.expr) and not isinstance(item, ast.Constant)), node)
        function = next((item.name for item in line if isinstance(item, ast.FunctionDef)), "")
        kept, before = dict(vars(node)), ast.unparse(whole)
        if _change(node):
            yield Mutant(path, node.lineno, function, before, ast.unparse(whole), ast.unparse(tree))
        vars(node).update(kept)


def _is_words(node: ast.AST) -> bool:
    """Say whether a node is a message, a type or an import: nothing that computes."""
    if isinstance(node, ast.Call) and "Error" in ast.unparse(node.func):
        return True
    return isinstance(node, ast.Raise | ast.JoinedStr | ast.arg | ast.AnnAssign | ast.alias)


def _change(node: ast.AST) -> bool:
    """Change a node in place; say whether there was anything to change."""
    if (
        isinstance(node, ast.BinOp)
        and type(node.op) in OPERATORS
        and not isinstance(node.left, ast.Constant | ast.List)
    ):
        node.op = OPERATORS[type(node.op)]()
    elif isinstance(node, ast.BinOp) and isinstance(node.left, ast.Constant) and isinstance(node.left.value, float):
        node.op = OPERATORS.get(type(node.op), type(node.op))()
    elif isinstance(node, ast.Compare) and len(node.ops) == 1 and type(node.ops[0]) in COMPARED:
        node.ops = [COMPARED[type(node.ops[0])]()]
    elif isinstance(node, ast.UnaryOp) and isinstance(node.op, ast.USub):
        node.op = ast.UAdd()
    elif isinstance(node, ast.Constant) and isinstance(node.value, float) and node.value not in (0.0,):
        node.value *= 1.1
    elif isinstance(node, ast.Attribute) and node.attr in NAMES:
        node.attr = NAMES[node.attr]
    elif isinstance(node, ast.Name) and node.id in ("max", "min"):
        node.id = NAMES[node.id]
    else:
        return False
    return True


def chosen(names: list[str]) -> list[Path]:
    """Return the modules of some rooms, or files named from the package on."""
    found: list[Path] = []
    for name in names:
        place = TOP / "retrofit" / name
        found += sorted(place.glob("*.py")) if place.is_dir() else [place]
    return [path for path in found if path.name != "__init__.py"]


def tests_of(path: Path, only_own: bool) -> Iterator[list[str]]:
    """Yield groups of tests: those named after the module, then the others of its room."""
    room = path.relative_to(TOP / "retrofit").parts[0]
    every = sorted((TOP / "tests" / room).glob("**/test_*.py"))
    own = [item for item in every if path.stem.rstrip("s") in item.stem]
    groups = [own or every] if only_own else [own, [item for item in every if item not in own]]
    yield from ([str(item.relative_to(TOP)) for item in group] for group in groups if group)


def outcome(mutant: Mutant, folder: Path, limit_s: float, only_own: bool) -> str:
    """Return "killed", "slow" or "SURVIVED"."""
    place = folder / mutant.path.relative_to(TOP)
    kept = place.read_text(encoding="utf-8")
    place.write_text(mutant.text, encoding="utf-8")
    try:
        return _run(folder, mutant.path, limit_s, only_own)
    finally:
        place.write_text(kept, encoding="utf-8")


def _run(folder: Path, path: Path, limit_s: float, only_own: bool) -> str:
    env = {**os.environ, "PYTHONPATH": str(folder), "PYTHONDONTWRITEBYTECODE": "1"}
    for files in tests_of(path, only_own):
        command = [
            sys.executable,
            "-m",
            "pytest",
            "-x",
            "-q",
            "-n",
            "0",
            "-p",
            "no:cacheprovider",
            "--no-header",
            *files,
        ]
        try:
            done = subprocess.run(command, cwd=folder, env=env, capture_output=True, timeout=limit_s, check=False)
        except subprocess.TimeoutExpired:
            return "slow"
        if done.returncode == 1:
            return "killed"
        if done.returncode != 0:
            return "killed"  # the module cannot even be imported
    return "SURVIVED"


def main() -> None:
    """Run a sample of mutants within a time, and list what survived."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("names", nargs="*", default=list(ROOMS), help="rooms, or files such as study/installed.py")
    parser.add_argument("--number", type=int, default=30, help="how many mutants are drawn")
    parser.add_argument("--all", action="store_true", help="every mutant, in order")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--minutes", type=float, default=20.0, help="no mutant is begun after this")
    parser.add_argument("--limit", type=float, default=300.0, help="seconds for a group of tests")
    parser.add_argument("--own", action="store_true", help="only tests named after the module")
    parser.add_argument("--function", help="only in functions of this name")
    asked = parser.parse_args()
    mutants = [made for path in chosen(asked.names) for made in mutants_of(path)]
    mutants = [made for made in mutants if asked.function in (None, made.function)]
    if not asked.all:
        mutants = random.Random(asked.seed).sample(mutants, min(asked.number, len(mutants)))
    begin, counts = time.monotonic(), dict.fromkeys(("killed", "slow", "SURVIVED", "equivalent"), 0)
    with tempfile.TemporaryDirectory() as temporary:
        folder = Path(temporary)
        for name in COPIED:
            copier = shutil.copytree if (TOP / name).is_dir() else shutil.copy
            copier(TOP / name, folder / name)
        for made in mutants:
            if time.monotonic() - begin > 60 * asked.minutes:
                print(f"Time is over: {len(mutants) - sum(counts.values())} of {len(mutants)} mutants were not tried.")
                break
            file = made.path.relative_to(TOP / "retrofit").as_posix()
            why = EQUIVALENT.get((file, made.function, made.change), "")
            found = "equivalent" if why else outcome(made, folder, asked.limit, asked.own)
            counts[found] += 1
            print(
                f"{found:10s} {file}:{made.line} {made.function}: {made.change}{'; ' + why if why else ''}", flush=True
            )
    print(", ".join(f"{count} {name}" for name, count in counts.items()))


if __name__ == "__main__":
    main()
