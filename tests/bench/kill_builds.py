"""Kill builds of tables at random moments, then let two processes build one store at once.

Run from the top of the repository:

    python tests/bench/kill_builds.py [--kills 20] [--seed 1]

A child process builds several refrigerants into a store and is killed without notice (kill -9) at a random moment
of its work, again and again, in the same store. Then two processes build what is missing at the same time. After
that the store has to hold the same results as a store built in peace, number for number, and no half-written file
may be taken for a table. Prints what happened; ends with 1 if anything differs.
"""

from __future__ import annotations

import argparse
import os
import random
import signal
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np

TOP = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(TOP))

from retrofit.properties.components import mixture_of  # noqa: E402 - runs without an installed package
from retrofit.properties.store import read_fluid  # noqa: E402

NAMES = ("R134a", "R410A", "R32", "R454B", "R290", "R513A", "R717", "R1234yf")
BUILD = "import sys; from retrofit.properties import fluid; [fluid(name) for name in sys.argv[1:]]"


def build(store: Path) -> subprocess.Popen[bytes]:
    """Start a process that builds every refrigerant of the list into a store."""
    environment = os.environ | {"RETROFIT_STORE": str(store), "PYTHONPATH": str(TOP)}
    return subprocess.Popen([sys.executable, "-c", BUILD, *NAMES], env=environment)


def built_in_peace(store: Path) -> tuple[float, float]:
    """Build a store and return when its first file appeared and when it was done. [s]"""
    begun, first = time.perf_counter(), 0.0
    process = build(store)
    while process.poll() is None:
        if not first and store.is_dir() and any(store.glob("*.tables")):
            first = time.perf_counter() - begun
        time.sleep(0.005)
    if process.returncode:
        raise SystemExit(f"the build in peace ended with {process.returncode}")
    return first, time.perf_counter() - begun


def kill_once(store: Path, after_s: float) -> bool:
    """Start a build and kill it after a time; return whether it was still at work."""
    process = build(store)
    try:
        process.wait(timeout=after_s)
    except subprocess.TimeoutExpired:
        os.kill(process.pid, signal.SIGKILL)
    return process.wait() == -signal.SIGKILL


def kill_while_writing(store: Path, delay_s: float) -> bool:
    """Start a build, wait for a half-written file and kill it there; return whether one was met."""
    process = build(store)
    while process.poll() is None:
        if store.is_dir() and any(store.glob(".half-*")):
            time.sleep(delay_s)
            break
    if process.poll() is None:
        os.kill(process.pid, signal.SIGKILL)
    return process.wait() == -signal.SIGKILL


def differing(store: Path, reference: Path) -> list[str]:
    """Return the refrigerants whose stored tables are missing or not the same, number for number."""
    return [name for name in NAMES if not _same(name, store, reference)]


def _same(name: str, store: Path, reference: Path) -> bool:
    mixture = mixture_of(name)
    one, other = read_fluid(mixture, store), read_fluid(mixture, reference)
    if one is None or other is None:
        return False
    left, right = one.tables.arrays(), other.tables.arrays()
    return left.keys() == right.keys() and all(np.array_equal(left[key], right[key]) for key in left)


def unreadable(store: Path, reference: Path) -> list[str]:
    """Return the table files present that do not hold the reference's results."""
    present = [name for name in NAMES if any(store.glob(f"{name}.*.tables"))]
    return [name for name in present if not _same(name, store, reference)]


def main() -> int:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--kills", type=int, default=20)
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    moment = random.Random(options.seed)
    with tempfile.TemporaryDirectory() as folder:
        reference, store = Path(folder) / "in-peace", Path(folder) / "killed"
        first, whole = built_in_peace(reference)
        print(f"in peace: {len(NAMES)} refrigerants, first table after {first:.2f} s, done after {whole:.2f} s")
        faults, killed, tries = [], 0, 0
        while (
            killed < options.kills and tries < 3 * options.kills
        ):  # a build that was done before the signal counts not
            i, tries = tries, tries + 1
            if i % 4 == 3 or (killed > 0 and all(any(store.glob(f"{name}.*.tables")) for name in NAMES)):
                for path in store.glob("*.tables"):  # begin anew, so that there is something to build
                    path.unlink()
            if i % 2:
                killed += kill_while_writing(store, moment.uniform(0.0, 0.001))
            else:
                killed += kill_once(store, moment.uniform(0.9 * first, whole))
            faults += unreadable(store, reference)
        halves = len(list(store.glob(".half-*"))) if store.is_dir() else 0
        left = sum(any(store.glob(f"{name}.*.tables")) for name in NAMES)
        print(f"killed {killed} builds in {tries} tries; left {left} tables and {halves} half-written files")
        for path in store.glob("*.tables"):
            path.unlink()
        two = [build(store), build(store)]
        codes = [process.wait() for process in two]
        faults += differing(store, reference)
        print(f"two at once: exit codes {codes}; differing from the build in peace: {', '.join(faults) or 'none'}")
    return int(bool(faults) or any(codes) or killed < options.kills)


if __name__ == "__main__":
    sys.exit(main())
