"""Mutation test of the formulas: do the tests notice when the code is changed a little?

    pip install mutmut==3.8.1
    python tests/mutation/run_mutmut.py FOLDER                       # every mutant
    python tests/mutation/run_mutmut.py FOLDER --sample 400          # 400 a package, by a seed
    python tests/mutation/run_mutmut.py FOLDER --packages geometry   # one package
    python tests/mutation/run_mutmut.py FOLDER --again               # survivors, after new tests

FOLDER is made where it is absent, and holds a copy of the code, the mutants and the results;
nothing is written elsewhere. Run again with the same FOLDER, it goes on where it stopped: mutants
of functions that have changed are tried afresh, the others keep their result. Survivors are tried
again only with `--again`, since it is the tests that change for them.

At the end it prints, for each package, how many mutants there are, how many were killed (a test
failed), ran out of time, survived, or are run by no test; and the score, killed and out of time
over all that were tried, with the 95 % interval of Wilson where it is a sample. Then the names of
those that survived. In FOLDER/PACKAGE, `mutmut show NAME` prints one as a difference, and `mutmut
browse` walks through them.

What it does not see: mutmut changes the bodies of plain functions and methods. Tables, constants
and lambdas of a module, and the bodies of functions with a decorator (properties, cached rules of
quadrature) stay as they are. The published checks and the sweeps over all models stand for those.
"""

from __future__ import annotations

import argparse
import json
import math
import random
import shutil
import subprocess
import sys
from collections import Counter
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
# Each package is tried by its own tests and by those that lean on it most directly.
TESTS = {
    "models": ("tests/models", "tests/geometry", "tests/published"),
    "geometry": ("tests/geometry", "tests/models", "tests/published"),
    "hydraulics": ("tests/hydraulics", "tests/published"),
}
COPIED = ("rheo", "tests", "sample_data", "pyproject.toml")

KILLED = {1, 3}
OUT_OF_TIME = {24, -24, 36, 152, 255}
SURVIVED = 0
NO_TESTS = {5, 33}
LEFT_OUT = 34

CONFIGURATION = """[mutmut]
source_paths=
    rheo
only_mutate=
    rheo/{package}/*
also_copy=
    sample_data
pytest_add_cli_args=
    -p
    no:cacheprovider
pytest_add_cli_args_test_selection=
{tests}
timeout_multiplier=3.0
timeout_constant=20.0
use_git_change_detection=false
on_dependency_change=ignore
"""

# A value remembered from an earlier test would hide which tests a function is run by, and in a
# worker hide the mutant. The smallest example of a failure is of no interest here.
HOOKS = '''"""Hooks of the mutation test."""

import sys

from hypothesis import Phase, settings

settings.register_profile("mutation", phases=[Phase.explicit, Phase.generate], database=None)
settings.load_profile("mutation")


def pytest_runtest_setup(item):
    for name, module in list(sys.modules.items()):
        if name.startswith(("rheo.models", "rheo.geometry", "rheo.hydraulics")):
            for value in list(vars(module).values()):
                clear = getattr(value, "cache_clear", None)
                if clear is not None:
                    clear()
'''

# mutmut has no command of its own that stops once the mutants are made.
MAKE_MUTANTS = """
from mutmut import __main__ as mutmut
mutmut.copy_src_dir()
mutmut.copy_also_copy_files()
mutmut.setup_source_paths()
mutmut.create_mutants({children})
"""


def copy_code(folder: Path, package: str) -> None:
    """Bring the copy up to date; files that are as they were keep their time."""
    wanted: set[Path] = set()
    for name in COPIED:
        origin = ROOT / name
        files = [origin] if origin.is_file() else sorted(origin.rglob("*"))
        for file in files:
            inside = file.relative_to(ROOT)
            if not file.is_file() or "__pycache__" in inside.parts:
                continue
            wanted.add(inside)
            target = folder / inside
            if not target.exists() or target.read_bytes() != file.read_bytes():
                target.parent.mkdir(parents=True, exist_ok=True)
                shutil.copyfile(file, target)
                mutated = folder / "mutants" / inside
                if inside.parts[0] == "rheo" and mutated.exists():
                    # mutmut renews what is older than its source, but only where it mutates.
                    shutil.copy2(target, mutated)
    for name in COPIED:
        for place in (folder, folder / "mutants"):
            for file in sorted((place / name).rglob("*.py")):
                if file.relative_to(place) not in wanted:
                    file.unlink()
    for place in (folder, folder / "mutants"):
        hooks = place / "tests" / "conftest.py"
        hooks.parent.mkdir(parents=True, exist_ok=True)
        hooks.write_text(HOOKS, encoding="utf-8")
    test_lines = "\n".join(f"    {test}" for test in TESTS[package])
    text = CONFIGURATION.format(package=package, tests=test_lines)
    (folder / "setup.cfg").write_text(text, encoding="utf-8")


def result_files(folder: Path, package: str) -> list[Path]:
    """Return the files in which mutmut keeps the results of a package."""
    return sorted((folder / "mutants" / "rheo" / package).rglob("*.meta"))


def choose(folder: Path, package: str, sample: int | None, seed: int, again: bool) -> None:
    """Mark which mutants are to be tried and which are left out."""
    contents = {file: json.loads(file.read_text()) for file in result_files(folder, package)}
    names = sorted(key for content in contents.values() for key in content["exit_code_by_key"])
    chosen = set(names)
    if sample is not None and sample < len(names):
        chosen = set(random.Random(seed).sample(names, sample))
    for file, content in contents.items():
        codes = content["exit_code_by_key"]
        for name, code in codes.items():
            if name not in chosen:
                codes[name] = LEFT_OUT if code is None else code
            elif code == LEFT_OUT or (again and code not in KILLED):
                codes[name] = None
        file.write_text(json.dumps(content, indent=4))


def wilson(successes: int, tried: int) -> tuple[float, float]:
    """Return the 95 % interval of a share."""
    z = 1.959964
    share = successes / tried
    middle = (share + z * z / (2 * tried)) / (1 + z * z / tried)
    half = z * math.sqrt(share * (1 - share) / tried + z * z / (4 * tried**2)) / (1 + z * z / tried)
    return middle - half, middle + half


def report(folder: Path, package: str) -> list[str]:
    """Print the counts and the score of a package, and return the survivors."""
    counts: Counter[str] = Counter()
    survivors = []
    for file in result_files(folder, package):
        for name, code in json.loads(file.read_text())["exit_code_by_key"].items():
            if code is None or code == LEFT_OUT:
                counts["not tried"] += 1
            elif code in KILLED:
                counts["killed"] += 1
            elif code in OUT_OF_TIME:
                counts["out of time"] += 1
            elif code in NO_TESTS:
                counts["no tests"] += 1
                survivors.append(f"{name} (no tests)")
            elif code == SURVIVED:
                counts["survived"] += 1
                survivors.append(name)
            else:
                counts["crashed"] += 1
                survivors.append(f"{name} (ended with {code})")
    total = sum(counts.values())
    tried = total - counts["not tried"]
    noticed = counts["killed"] + counts["out of time"]
    parts = ", ".join(f"{count} {what}" for what, count in sorted(counts.items()))
    line = f"{package}: {total} mutants; {parts}"
    if tried:
        line += f"; score {noticed / tried:.1%}"
    if tried and counts["not tried"]:
        low, high = wilson(noticed, tried)
        line += f" (95 % interval {low:.1%} to {high:.1%})"
    print(line)
    return survivors


def main() -> None:
    """Run it."""
    parser = argparse.ArgumentParser(description="Mutation test of the formulas.")
    parser.add_argument("folder", type=Path)
    parser.add_argument("--packages", nargs="+", choices=tuple(TESTS), default=list(TESTS))
    parser.add_argument("--sample", type=int, help="mutants a package; all when absent")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--children", type=int, default=2, help="processes at a time")
    parser.add_argument("--again", action="store_true", help="try the survivors again")
    parser.add_argument("--report", action="store_true", help="print what is known, run nothing")
    wish = parser.parse_args()
    survivors = []
    for package in wish.packages:
        folder = wish.folder.resolve() / package
        if not wish.report:
            folder.mkdir(parents=True, exist_ok=True)
            copy_code(folder, package)
            make = [sys.executable, "-c", MAKE_MUTANTS.format(children=wish.children)]
            subprocess.run(make, cwd=folder, check=True, stdout=subprocess.DEVNULL)
            choose(folder, package, wish.sample, wish.seed, wish.again)
            # Through its entry point: run as a module it would be loaded twice.
            start = "from mutmut.__main__ import cli; cli()"
            command = [sys.executable, "-c", start, "run", "--max-children", str(wish.children)]
            subprocess.run(command, cwd=folder, check=True)
        survivors += report(folder, package)
    print("\n".join(survivors))


if __name__ == "__main__":
    main()
