"""What do the readers say to files that somebody, or something, has spoiled?

A library folder, a shelf and a rule file are copied, one of them is spoiled at random, and the reader must
either give a result or one line of error. Run as a command, this goes on for as long as one likes:

    python tests/library/fuzz_readers.py --seconds 60 --seed 7
"""

from __future__ import annotations

import argparse
import random
import shutil
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

from tuner.errors import TunerError
from tuner.library.folders import data_folder
from tuner.library.load import read_library, read_own_measured
from tuner.library.stock import read_shelf
from tuner.screening.rules import load_rules
from tuner.structure.molecule import canonical_smiles

LIBRARY_FILES = ("substituents.csv", "series.toml", "cores.toml", "sources.toml", "measured_pka.csv")
ODD_PIECES = (
    "", ",", ";", '"', "'", "\n", "\r", "\t", "#", "=", "[", "]", "{", "}", "nan", "inf", "-", "1e999", "0,5",
    "yes",
    "\ufeff", "\u2028", "\x00", "ä", "σ", "🧪", "*", "[*:1]", "[*:99]", "true", '"""', "%s", "../..",
    "9" * 400,
)  # fmt: skip
"""What tends to break a reader: separators, quotes, line ends, odd numbers, marks of other encodings."""


def spoil(text: str, chance: random.Random) -> bytes:
    """A file with one to four random faults: a piece put in or out, a line lost or doubled, bytes cut."""
    for _ in range(chance.randint(1, 4)):
        at = chance.randrange(len(text) + 1)
        kind = chance.randrange(5)
        if kind == 0:
            text = text[:at] + chance.choice(ODD_PIECES) + text[at:]
        elif kind == 1:
            text = text[:at] + text[at + chance.randint(1, 12) :]
        elif kind == 2:
            text = text[:at]
        else:
            lines = text.split("\n")
            line = chance.randrange(len(lines))
            lines[line : line + 1] = [lines[line]] * (0 if kind == 3 else 2)
            text = "\n".join(lines)
    raw = text.encode("utf-8", "surrogatepass")
    return raw[: chance.randrange(len(raw) + 1)] + b"\xff" if chance.random() < 0.03 else raw


def outcome(read: Callable[[], object]) -> str:
    """ "" where the reader gave a result or one sound line; else what it did instead."""
    try:
        read()
    except TunerError as fault:
        text = fault.text
        return "" if text.strip() and "\n" not in text else f"not one line: {text!r}"
    except Exception as fault:  # anything else is what this looks for
        return f"{type(fault).__name__}: {fault}"
    return ""


def one_round(folder: Path, chance: random.Random) -> str:
    """Spoil one file of a fresh copy and read it; "" where all was well, else the file and what happened."""
    name = chance.choice((*LIBRARY_FILES, "shelf.csv", "measured.csv", "hazards.toml"))
    if name in LIBRARY_FILES:
        shipped = folder / "library"
        for file in LIBRARY_FILES:
            shutil.copy(data_folder() / file, shipped / file)
        (shipped / name).write_bytes(spoil((shipped / name).read_text(encoding="utf-8"), chance))
        return tell(name, outcome(lambda: read_library(shipped)))
    path = folder / name
    if name == "shelf.csv":
        source = data_folder() / "stock" / "small_shelf.csv"
        path.write_bytes(spoil(source.read_text(encoding="utf-8"), chance))
        return tell(name, outcome(lambda: read_shelf(path, canonical=canonical_smiles)))
    if name == "measured.csv":
        source = data_folder() / "measured_pka.csv"
        path.write_bytes(spoil(source.read_text(encoding="utf-8"), chance))
        return tell(name, outcome(lambda: read_own_measured(path)))
    own = folder / "own"
    rules = (data_folder() / "hazards.toml").read_text(encoding="utf-8").split("# ----")[-1]
    (own / name).write_bytes(spoil(rules[rules.index("[rule") :], chance))
    return tell(name, outcome(lambda: load_rules(read_library(data_folder(), own))))


def tell(name: str, said: str) -> str:
    """The file and the fault, "" where there is none."""
    return f"{name}: {said}" if said else ""


def fuzz(seed: int, rounds: int, seconds: float = 1e9) -> tuple[int, list[str]]:
    """Number of rounds done, and everything that went wrong, with the seed of its round."""
    wrong: list[str] = []
    start = time.monotonic()
    done = 0
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        for part in ("library", "own"):
            (folder / part).mkdir()
        while done < rounds and time.monotonic() - start < seconds:
            said = one_round(folder, random.Random(f"{seed}/{done}"))
            if said:
                wrong.append(f"seed {seed} round {done}: {said}")
            done += 1
    return done, wrong


def main() -> int:
    """Fuzz for a while; 1 where anything went wrong."""
    parser = argparse.ArgumentParser(description="spoil data files at random and see what the readers say")
    parser.add_argument("--seconds", type=float, default=30.0)
    parser.add_argument("--seed", type=int, default=1)
    given = parser.parse_args()
    done, wrong = fuzz(given.seed, 10**9, given.seconds)
    print(f"{done} spoiled files, {len(wrong)} badly answered")
    print("\n".join(wrong))
    return 1 if wrong else 0


if __name__ == "__main__":
    raise SystemExit(main())
