"""The shape of the code base: imports run one way, files stay short, words stay true."""

from __future__ import annotations

import ast
import itertools
import json
import re
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parent.parent

# Each may import from itself and from those before it.
ORDER = (
    ("units", "errors"),
    ("registry",),
    ("models",),
    ("geometry",),
    ("readings",),
    ("fitting",),
    ("hydraulics",),
    ("line",),
    ("case",),
    ("report",),
    ("batches",),
    ("cli", "ui"),
)
RANK = {name: rank for rank, names in enumerate(ORDER) for name in names}
LONGEST_FILE = 450
HEAVY = (
    "numpy",
    "scipy",
    "pandas",
    "lmfit",
    "pint",
    "plotly",
    "streamlit",
    "pydantic",
    "fluids",
    "typst",
    "xlsxwriter",
    "python_calamine",
)

# Bracketed letters keep this file from finding itself.
UNWANTED = {
    "a machine's path": r"(^|[^a-z.])/(wor[k]|roo[t]|hom[e]|tm[p]|User[s])/",
    "a registry's host": r"pythonhoste[d]|pypi\.or[g]",
    "unfinished work": r"\b(TO[D]O|FIX[M]E|X[X]X|raise NotImplementedErro[r])\b",
    "a tracker's number": r"\bissue #?[0-9]",
    "a test that cannot fail": r"\bassert Tru[e]\b",
    "a test that does not run": r"pytest\.mark\.(ski[p]|xfai[l])",
}
SKIPPED_FOLDERS = {
    ".git",
    ".venv",
    "build",
    "dist",
    "__pycache__",
    ".hypothesis",
    ".mypy_cache",
    ".pytest_cache",
    ".ruff_cache",
}


def _files(*patterns: str) -> Iterator[Path]:
    for pattern in patterns:
        for path in sorted(ROOT.rglob(pattern)):
            inside = path.relative_to(ROOT)
            if not SKIPPED_FOLDERS.intersection(inside.parts) and path.is_file():
                yield path


def _name(path: Path) -> str:
    return path.relative_to(ROOT).as_posix()


def _tree(path: Path) -> ast.Module:
    return ast.parse(path.read_text("utf-8"))


SOURCES = list(_files("rheo/**/*.py", "ui/**/*.py"))
LIBRARY = [path for path in SOURCES if _name(path).startswith("rheo/")]


def _public_homes() -> dict[str, str]:
    """Return the module that each name of the top package comes from."""
    import rheo

    return dict(rheo._PUBLIC)


def _imported(tree: ast.Module) -> Iterator[tuple[int, str]]:
    """Yield line and dotted name of everything of this project that a file imports."""
    homes = _public_homes()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            for alias in node.names:
                if alias.name.split(".")[0] in {"rheo", "ui"}:
                    yield node.lineno, alias.name
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"line {node.lineno}: write the import in full"
            module = node.module or ""
            if module == "rheo":
                for alias in node.names:
                    yield node.lineno, homes.get(alias.name, f"rheo.{alias.name}")
            elif module.split(".")[0] in {"rheo", "ui"}:
                yield node.lineno, module


def _layer(dotted: str) -> str:
    parts = dotted.split(".")
    return "ui" if parts[0] == "ui" else (parts[1] if len(parts) > 1 else "")


# The top package hands on names of all layers, and `python -m` starts the command line.
LAYERED = [path for path in SOURCES if path.parent != ROOT / "rheo" or path.stem in RANK]


@pytest.mark.parametrize("path", LAYERED, ids=_name)
def test_imports_run_downward(path: Path) -> None:
    own = _layer(".".join(path.relative_to(ROOT).with_suffix("").parts))
    for line, dotted in _imported(_tree(path)):
        layer = _layer(dotted)
        if layer == "__version__":
            continue
        if layer == "":
            assert own in {"cli", "ui"}, f"line {line}: import from the layer, not from the top"
            continue
        assert RANK[layer] <= RANK[own], f"line {line}: {own} may not import {dotted}"
        assert layer == own or RANK[layer] < RANK[own] or own == "units", (
            f"line {line}: {own} and {layer} stand side by side"
        )


def test_every_part_has_its_place_in_the_order() -> None:
    folders = {path.name for path in (ROOT / "rheo").iterdir() if any(path.glob("*.py"))}
    files = {path.stem for path in (ROOT / "rheo").glob("*.py")} - {"__init__", "__main__"}
    assert folders | files | {"ui"} == set(RANK)


@pytest.mark.parametrize("path", list(_files("*.py", "*.css", "*.typ")), ids=_name)
def test_files_stay_short(path: Path) -> None:
    assert len(path.read_text("utf-8").splitlines()) <= LONGEST_FILE


@pytest.mark.parametrize(
    "path",
    [
        ROOT / ".ci" / "run",
        *_files("*.py", "*.toml", "*.md", "*.txt", "*.csv", "*.css", "*.typ", "*.json"),
    ],
    ids=_name,
)
def test_no_unwanted_words(path: Path) -> None:
    for number, line in enumerate(path.read_text("utf-8").splitlines(), 1):
        for what, pattern in UNWANTED.items():
            assert not re.search(pattern, line), f"line {number} holds {what}: {line.strip()}"


@pytest.mark.parametrize("path", list(_files("*.py")), ids=_name)
def test_no_error_is_swallowed(path: Path) -> None:
    """Whoever catches everything raises it again or prints where it came from."""
    for node in ast.walk(_tree(path)):
        if isinstance(node, ast.ExceptHandler) and (
            node.type is None or ast.unparse(node.type) in {"Exception", "BaseException"}
        ):
            told = any(
                isinstance(inner, ast.Raise)
                or (isinstance(inner, ast.Call) and "traceback." in ast.unparse(inner.func))
                for inner in ast.walk(node)
            )
            assert told, f"line {node.lineno}"


# --- docstrings -----------------------------------------------------------------------------


def _documented_parameters(docstring: str) -> list[str] | None:
    lines = docstring.expandtabs().splitlines()
    for index in range(len(lines) - 1):
        if lines[index].strip() == "Parameters" and set(lines[index + 1].strip()) == {"-"}:
            break
    else:
        return None
    margin = len(lines[index]) - len(lines[index].lstrip())
    names: list[str] = []
    for line, under in itertools.pairwise([*lines[index + 2 :], ""]):
        if under.strip() and set(under.strip()) == {"-"}:
            break
        if line.strip() and len(line) - len(line.lstrip()) == margin:
            names += [name.strip().lstrip("*") for name in line.split(" : ")[0].split(",")]
    return names


def _signature(node: ast.FunctionDef) -> list[str]:
    arguments = node.args
    named = [*arguments.posonlyargs, *arguments.args]
    names = [argument.arg for argument in named if argument.arg not in {"self", "cls"}]
    if arguments.vararg:
        names.append(arguments.vararg.arg)
    names += [argument.arg for argument in arguments.kwonlyargs]
    if arguments.kwarg:
        names.append(arguments.kwarg.arg)
    return names


def _fields(node: ast.ClassDef) -> list[str]:
    """Return what a class takes: the arguments of ``__init__``, or the fields of a dataclass."""
    for item in node.body:
        if isinstance(item, ast.FunctionDef) and item.name in {"__init__", "__new__"}:
            return _signature(item)
    return [
        item.target.id
        for item in node.body
        if isinstance(item, ast.AnnAssign)
        and isinstance(item.target, ast.Name)
        and not item.target.id.startswith("_")
        and "init=False" not in ast.unparse(item)
        and "ClassVar" not in ast.unparse(item.annotation)
    ]


def _public_definitions(tree: ast.Module) -> Iterator[tuple[str, ast.FunctionDef | ast.ClassDef]]:
    for node in tree.body:
        if isinstance(node, ast.FunctionDef | ast.ClassDef) and not node.name.startswith("_"):
            yield node.name, node
            if isinstance(node, ast.ClassDef):
                for item in node.body:
                    if isinstance(item, ast.FunctionDef) and not item.name.startswith("_"):
                        yield f"{node.name}.{item.name}", item


@pytest.mark.parametrize("path", LIBRARY, ids=_name)
def test_docstrings_say_what_the_signature_says(path: Path) -> None:
    tree = _tree(path)
    assert ast.get_docstring(tree), "say in a line what the file is for"
    for name, node in _public_definitions(tree):
        docstring = ast.get_docstring(node)
        assert docstring, f"{name} has no docstring"
        documented = _documented_parameters(docstring)
        if documented is not None:
            taken = _signature(node) if isinstance(node, ast.FunctionDef) else _fields(node)
            assert documented == taken, name


def test_public_functions_say_what_each_argument_is() -> None:
    for name, home in _public_homes().items():
        module = ROOT / (home.replace(".", "/") + ".py")
        files = [module] if module.exists() else sorted(module.with_suffix("").glob("*.py"))
        found = [
            node
            for path in files
            for known, node in _public_definitions(_tree(path))
            if known == name
        ]
        for node in found:
            if isinstance(node, ast.FunctionDef) and len(_signature(node)) > 1:
                docstring = ast.get_docstring(node) or ""
                assert _documented_parameters(docstring) is not None, f"rheo.{name}"


# --- start-up -------------------------------------------------------------------------------


def _loaded_after(code: str) -> set[str]:
    script = f"{code}\nimport json, sys\nprint('\\n' + json.dumps(sorted(sys.modules)))"
    done = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, check=True, timeout=60
    )
    return {name.split(".")[0] for name in json.loads(done.stdout.splitlines()[-1])}


def test_importing_rheo_loads_nothing_heavy() -> None:
    assert _loaded_after("import rheo").intersection(HEAVY) == set()


def test_help_loads_nothing_heavy() -> None:
    code = (
        "import sys\nsys.argv = ['rheo', '--help']\nfrom rheo.cli import main\n"
        "try:\n    main()\nexcept SystemExit as stop:\n    assert not stop.code"
    )
    assert _loaded_after(code).intersection(HEAVY) == set()


# --- what is promised -----------------------------------------------------------------------


def _test_command() -> str:
    return (ROOT / ".ci" / "run").read_text("utf-8").strip().splitlines()[-1]


def test_the_readme_gives_the_command_that_is_checked() -> None:
    assert _test_command().endswith("-m pytest")
    assert _test_command() in (ROOT / "README.md").read_text("utf-8").splitlines()


def test_files_named_in_the_guides_exist() -> None:
    for guide in ("README.md", "DEVELOPERS.md"):
        text = (ROOT / guide).read_text("utf-8")
        named = set(re.findall(r"`((?:rheo|ui|tests|sample_data|\.ci)/[\w./-]*)`", text))
        missing = sorted(name for name in named if not (ROOT / name).exists())
        assert not missing, f"{guide} names {', '.join(missing)}"


def test_the_nomenclature_knows_every_parameter() -> None:
    import rheo

    guide = (ROOT / "DEVELOPERS.md").read_text("utf-8").splitlines()
    for record in rheo.model_records().values():
        for parameter in record.parameters:
            row = f"| `{parameter.key}` | {parameter.symbol} | {parameter.unit} |"
            assert any(line.startswith(row) for line in guide), row


def _requirements() -> set[str]:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text("utf-8"))["project"]
    wanted = [
        *project["dependencies"],
        *itertools.chain(*project["optional-dependencies"].values()),
    ]
    return {re.split(r"[<>=!~; \[]", one)[0].lower() for one in wanted}


def test_each_dependency_is_pinned_and_explained() -> None:
    pins = (ROOT / "constraints.txt").read_text("utf-8").lower().splitlines()
    pinned = {line.split("==")[0] for line in pins if "==" in line}
    guide = (ROOT / "DEVELOPERS.md").read_text("utf-8").lower()
    for name in _requirements():
        assert name in pinned, f"{name} is not in constraints.txt"
        assert re.search(rf"^\| `{re.escape(name)}` \|", guide, re.MULTILINE), name


def test_pins_hold_no_addresses() -> None:
    text = (ROOT / "constraints.txt").read_text("utf-8")
    assert re.fullmatch(r"(#.*\n|[a-z0-9.-]+==[\w.+!]+\n)+", text)
