"""Read thousands of broken case files: each is read or refused in words, and none ends in a traceback.

Run from the top of the repository:

    python tests/bench/broken_cases.py [--count 5000] [--seed 1] [--command 40] [--keep FOLDER]

Each file is a shipped case, or the starting case with its remarks taken in, with one to four faults, drawn by
a seeded generator. The script prints how
many were still valid, how many were refused and how many ended in a traceback; it ends with 1 if any did.
With `--command N` the first N files also go through `python -m retrofit check FILE`, which has to end
with 0 or 2 and without a traceback.
"""

from __future__ import annotations

import argparse
import random
import re
import shutil
import subprocess
import sys
import tempfile
import time
import traceback
from collections import Counter
from collections.abc import Callable
from pathlib import Path

TOP = Path(__file__).resolve().parents[2]
sys.path.insert(0, str(TOP))

from retrofit.case import new_case_text, read_case  # noqa: E402 - the script runs without an installed package
from retrofit.errors import CaseFileError  # noqa: E402

Fault = Callable[[bytes, random.Random], bytes]

ODD_VALUES = (
    "5",
    "-8",
    "nan",
    "-inf",
    "1e400",
    "1e308",
    "0xffffffffffffffffffffffffffffffff",
    "9" * 5000,
    "true",
    "2026-02-30",
    "2026-12-01",
    "07:32:00",
    "[]",
    "{}",
    '["R22", ["R32"], {a = 1}]',
    "[[[[[[]]]]]]",
    "{a.b.c = 1}",
    '""',
    '" "',
    '"8 degC"',
    '"1,5 kW"',
    '"1e400 kW"',
    '"1e308 ton"',
    '"nan K"',
    '"١٢ kW"',
    '"²³ kW"',
    '"-500 degC"',
    '"20 bar"',
    '"0 K"',
    '"R404A"',
    '"r-404a"',
    '"R99"',
    '"\\u001b[31mred\\u001b[0m"',
    '"\\u0000"',
    '"\\u202e kW 021"',
    '"\\U0001F9CA"',
    '"' + "k" * 100_000 + '"',
    "'''\n[duty]\ncooling = 1\n'''",
    '"""a\\\n   b"""',
    "[[2, 0.6, 0.9], [3, 0.7]]",
    '["12 bar g", "11 bar g", 10]',
    "{R32 = 1.1, R999 = nan}",
    "{work = 0.9, stop = 1e400}",
    str(list(range(11))),
    '"0.3 bar"',
    '"4.19 kJ/(kg K)"',
    '"92 A"',
    "[900, 1200, 1800]",
    "[3, 2, 1]",
    '[["2 degC", 4000], ["2 degC", 4760]]',
    '[["2026-03-01", "18 kg"], ["2025-03-01", "20 kg"]]',
    '[[2027, "0.3 kg/kWh"], [2026]]',
    "{R448A = 30, R-448A = [1, 2]}",
    '"hours.csv"',
    '"../hours.csv"',
    '"wet bulb"',
    '"10 %"',
)


def delete_line(data: bytes, draw: random.Random) -> bytes:
    lines = data.split(b"\n")
    del lines[draw.randrange(len(lines))]
    return b"\n".join(lines)


def repeat_line(data: bytes, draw: random.Random) -> bytes:
    lines = data.split(b"\n")
    lines.insert(draw.randrange(len(lines)), draw.choice(lines))
    return b"\n".join(lines)


def swap_lines(data: bytes, draw: random.Random) -> bytes:
    lines = data.split(b"\n")
    first, second = draw.randrange(len(lines)), draw.randrange(len(lines))
    lines[first], lines[second] = lines[second], lines[first]
    return b"\n".join(lines)


def flip_character(data: bytes, draw: random.Random) -> bytes:
    if not data:
        return data
    place = draw.randrange(len(data))
    return data[:place] + bytes([draw.randrange(32, 127)]) + data[place + 1 :]


def random_bytes(data: bytes, draw: random.Random) -> bytes:
    place = draw.randrange(len(data) + 1)
    return data[:place] + draw.randbytes(draw.randrange(1, 40)) + data[place:]


def truncate(data: bytes, draw: random.Random) -> bytes:
    return data[: draw.randrange(len(data) + 1)]


def odd_value(data: bytes, draw: random.Random) -> bytes:
    return _with_value(data, draw, lambda old: draw.choice(ODD_VALUES).encode())


def wrong_unit(data: bytes, draw: random.Random) -> bytes:
    units = (
        "degC",
        "kW",
        "K",
        "kg",
        "bar g",
        "m3/h",
        "bar",
        "mm",
        "A",
        "V",
        "h",
        "kg/s",
        "degc",
        "KW",
        "furlong",
        "",
        "%",
        "°C",
        "F deg",
    )
    number = draw.choice(("5", "-8", "0", "1e9", "1e-9", "+4.", ".5", "1 000", "1_000", "--1"))
    return _with_value(data, draw, lambda old: f'"{number} {draw.choice(units)}"'.encode())


def swap_values(data: bytes, draw: random.Random) -> bytes:
    values = [line.split(b"=", 1)[1] for line in data.split(b"\n") if b"=" in line]
    return _with_value(data, draw, lambda old: draw.choice(values) if values else old)


def misspell_key(data: bytes, draw: random.Random) -> bytes:
    keys = [line.split(b"=", 1)[0].strip() for line in data.split(b"\n") if b" = " in line]
    key = draw.choice(keys) if keys else b""
    return data.replace(key, key[:2] + key[3:], 1) if len(key) > 3 else data


def nest(data: bytes, draw: random.Random) -> bytes:
    depth = draw.choice((10, 150, 400, 2000, 50_000))
    opening, closing = draw.choice(((b"[", b"]"), (b"{a=", b"}")))
    return data + b"\nnested = " + opening * depth + b"1" + closing * depth + b"\n"


def odd_text(data: bytes, draw: random.Random) -> bytes:
    odd = draw.choice(("\ufeff", "\x1b[2J", "\x9b", "\x00", "\u202e", "°", "٣", "🧊", "\r", "\r\n", "\u2028", "\x7f"))
    place = draw.randrange(len(data) + 1)
    return data[:place] + odd.encode() + data[place:]


def other_encoding(data: bytes, draw: random.Random) -> bytes:
    return data.decode("utf-8", "replace").encode(draw.choice(("utf-16", "utf-32", "utf-8-sig", "cp500")), "replace")


def odd_structure(data: bytes, draw: random.Random) -> bytes:
    odd = (
        "[duty]",
        "[[duty]]",
        "duty = 5",
        "[plant.duty]",
        "plant.x.y = 1",
        '["du ty"]',
        "[",
        "]]",
        "= 5",
        "a.b",
        "[evaporator]",
        "[lines.suction.length]",
        "[compressor.polynomial]",
        "lines.suction = 5",
        "[thresholds.a.b]",
        "evaporator.inlet = '2 degC'",
        '[thresholds]\n"\\u001b" = {}',
        "[year]",
        "[year.climate]",
        "[options]\nR404A = 5",
        "[options.R99]",
        "[options.r-404a]\nleak_rate = '5 %'",
        "[plus_minus]\nplant = '1 K'",
        "[plus_minus.duty.evaporating]",
    )
    lines = data.split(b"\n")
    lines.insert(draw.randrange(len(lines)), draw.choice(odd).encode())
    return b"\n".join(lines)


def _with_value(data: bytes, draw: random.Random, new: Callable[[bytes], bytes]) -> bytes:
    lines = data.split(b"\n")
    places = [index for index, line in enumerate(lines) if b"=" in line]
    if not places:
        return data
    index = draw.choice(places)
    key, old = lines[index].split(b"=", 1)
    lines[index] = key + b"= " + new(old)
    return b"\n".join(lines)


FAULTS: tuple[Fault, ...] = (
    delete_line,
    repeat_line,
    swap_lines,
    flip_character,
    flip_character,
    random_bytes,
    truncate,
    odd_value,
    odd_value,
    wrong_unit,
    wrong_unit,
    swap_values,
    misspell_key,
    nest,
    odd_text,
    other_encoding,
    odd_structure,
)


def broken_case(shipped: list[bytes], draw: random.Random) -> bytes:
    """Return one shipped case with one to four faults."""
    data = draw.choice(shipped)
    for _ in range(draw.choice((1, 1, 1, 2, 2, 3, 4))):
        data = draw.choice(FAULTS)(data, draw)
    return data


def outcome(path: Path) -> str:
    """Read one file and return what came of it; a complaint has to be fit for a terminal."""
    try:
        read_case(path)
    except CaseFileError as error:
        odd = [c for c in str(error) if not c.isprintable() and c != "\n"]
        return "refused with control characters" if odd or not error.problems else "refused"
    except Exception:  # anything else is the fault this script looks for
        traceback.print_exc()
        return "traceback"
    return "valid"


def command_outcome(path: Path) -> str:
    """Check one file by the command and return what came of it."""
    done = subprocess.run(
        [sys.executable, "-m", "retrofit", "check", str(path)],
        cwd=TOP,
        capture_output=True,
        text=True,
        check=False,
    )
    is_clean = done.returncode in (0, 2) and "Traceback" not in done.stderr
    if not is_clean:
        print(f"exit {done.returncode} for {path}:\n{done.stderr[-2000:]}")
    return f"command exit {done.returncode}" if is_clean else "command fault"


def full_case() -> bytes:
    """Return the starting case with its remarks taken in: it has nearly every table and key."""
    lines = new_case_text().splitlines()
    is_key = re.compile(r"# (\[|[\w.]+ = )")
    return "\n".join(line.removeprefix("# ") if is_key.match(line) else line for line in lines).encode()


def main() -> int:
    """Run the benchmark and return the exit code."""
    options = argparse.ArgumentParser(description=(__doc__ or "").splitlines()[0])
    options.add_argument("--count", type=int, default=5000, help="files to read (5000)")
    options.add_argument("--seed", type=int, default=1, help="seed of the faults (1)")
    options.add_argument("--command", type=int, default=0, metavar="N", help="also run the command on N files")
    options.add_argument("--keep", type=Path, help="folder to keep the files that end badly in")
    asked = options.parse_args()
    shipped = [path.read_bytes() for path in sorted((TOP / "cases").glob("*.toml"))]
    shipped += [full_case()] * 3
    draw = random.Random(asked.seed)
    counts: Counter[str] = Counter()
    start = time.perf_counter()
    with tempfile.TemporaryDirectory() as folder:
        for hours in (TOP / "cases").glob("*.csv"):
            shutil.copy(hours, folder)
        for number in range(asked.count):
            path = Path(folder) / f"case-{number}.toml"
            data = broken_case(shipped, draw)
            path.write_bytes(data)
            results = [outcome(path)]
            if number < asked.command:
                results.append(command_outcome(path))
            counts.update(results)
            if asked.keep and not {"valid", "refused"}.issuperset(results[:1]):
                asked.keep.mkdir(parents=True, exist_ok=True)
                (asked.keep / path.name).write_bytes(data)
            path.unlink()
    for name, count in sorted(counts.items()):
        print(f"{name:>32}: {count}")
    print(f"{'time':>32}: {time.perf_counter() - start:.1f} s")
    bad = ("traceback", "refused with control characters", "command fault")
    return 1 if any(counts[name] for name in bad) else 0


if __name__ == "__main__":
    sys.exit(main())
