"""Does the house keep its own rules: directions of import, sizes, words, documents, data with sources?

Each rule is one test that lists every offender, so that one run shows all there is to mend.
"""

from __future__ import annotations

import ast
import csv
import re
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

from tuner.library.catalogue import split_citation
from tuner.library.folders import data_files, data_folder

ROOT = Path(__file__).resolve().parents[1]
PACKAGE = ROOT / "tuner"
MODULES = sorted(PACKAGE.rglob("*.py"))
TEST_FILES = sorted((ROOT / "tests").rglob("*.py"))

MAY_IMPORT = {
    "errors": set(),
    "library": {"errors"},
    "brief": {"errors", "library"},
    "structure": {"errors", "library"},
    "acidity": {"errors", "library", "structure.records", "brief.records"},
    "synthesis": {"errors", "library", "structure", "brief.records"},
    "screening": {"errors", "library", "structure"},
    "prediction": {"errors", "library", "structure", "acidity", "brief.records"},
    "fitting": {"errors", "library", "structure", "acidity", "prediction"},
    "search": {
        "errors", "library", "structure", "acidity", "synthesis", "screening", "prediction", "brief.records",
    },
    "lab": {"errors", "library", "structure", "acidity", "prediction", "search", "brief.records"},
    "report": {"errors", "brief.records", "search.result", "synthesis.records", "screening.cautions",
    "library.folders"}, "cli": {
        "errors", "library", "brief", "structure", "acidity", "synthesis", "screening", "prediction",
        "fitting", "search", "lab", "report",
    },
}  # fmt: skip
"""Room -> rooms (or single modules) it may import. DEVELOPERS.md says the same in words."""

OUTSIDE_LIBRARIES = {
    "rdkit": {"structure"},
    "pymoo": {"search"},
    "typer": {"cli"},
    "rich": {"cli"},
    "jinja2": {"report"},
    "xlsxwriter": {"report"},
    "dask": {"search"},
    "distributed": {"search"},
}
"""Library -> the rooms that alone may import it: each can be exchanged in one place."""

MODULE_LINES = 450
FUNCTION_LINES = 70


def room_of(path: Path) -> str:
    """`library` for tuner/library/load.py, `errors` for tuner/errors.py."""
    parts = path.relative_to(PACKAGE).with_suffix("").parts
    return parts[0]


def parsed(path: Path) -> ast.Module:
    return ast.parse(path.read_text(encoding="utf-8"))


def imported(tree: ast.AST) -> Iterator[str]:
    """Dotted names of all modules that a piece of code imports."""
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module:
            yield node.module


def functions(path: Path) -> Iterator[ast.FunctionDef]:
    yield from (node for node in ast.walk(parsed(path)) if isinstance(node, ast.FunctionDef))


def public_functions(path: Path) -> Iterator[ast.FunctionDef]:
    """Functions of a module and methods of its public classes, by names without a leading underscore."""
    for node in parsed(path).body:
        if isinstance(node, ast.FunctionDef) and not node.name.startswith("_"):
            yield node
        if isinstance(node, ast.ClassDef) and not node.name.startswith("_"):
            members = (m for m in node.body if isinstance(m, ast.FunctionDef))
            yield from (m for m in members if not m.name.startswith("_"))


def where(path: Path, node: ast.AST | None = None) -> str:
    return f"{path.relative_to(ROOT)}" + (f":{node.lineno}" if node is not None else "")  # type: ignore[attr-defined]


def test_imports_follow_the_map() -> None:
    wrong = []
    for path in MODULES:
        room = room_of(path)
        allowed = MAY_IMPORT.get(room)
        for name in imported(parsed(path)):
            parts = name.split(".")
            if parts[0] != "tuner" or len(parts) == 1 or parts[1] == room or room == "__init__":
                continue
            if allowed is None or (parts[1] not in allowed and ".".join(parts[1:3]) not in allowed):
                wrong.append(f"{where(path)} imports {name}")
    assert wrong == []


def test_every_outside_library_has_its_room() -> None:
    wrong = [
        f"{where(path)} imports {name}"
        for path in MODULES
        for name in imported(parsed(path))
        if room_of(path) not in OUTSIDE_LIBRARIES.get(name.split(".")[0], {room_of(path)})
    ]
    assert wrong == []


def top_level_imports(path: Path, known: set[str]) -> set[str]:
    """Modules of this package that this one needs as soon as it is loaded."""
    names: set[str] = set()
    for node in parsed(path).body:
        if isinstance(node, ast.ImportFrom) and node.module and node.module.startswith("tuner"):
            parts = {f"{node.module}.{alias.name}" for alias in node.names}
            names |= parts & known or {node.module}  # `from package import module` needs the module alone
        elif isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names if alias.name.startswith("tuner")}
    return names


def test_no_module_imports_itself_in_a_circle() -> None:
    known = {
        ".".join(p.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__"): p for p in MODULES
    }
    graph = {name: top_level_imports(path, set(known)) & set(known) - {name} for name, path in known.items()}
    while True:
        leaves = [name for name, needs in graph.items() if not needs & set(graph)]
        if not leaves:
            break
        for name in leaves:
            del graph[name]
    assert sorted(graph) == []


def test_modules_and_functions_stay_small() -> None:
    long_modules = [
        where(p) for p in MODULES if len(p.read_text(encoding="utf-8").splitlines()) > MODULE_LINES
    ]
    long_functions = [
        f"{where(path, node)} {node.name}"
        for path in MODULES
        for node in functions(path)
        if (node.end_lineno or node.lineno) - node.lineno + 1 > FUNCTION_LINES
    ]
    assert (long_modules, long_functions) == ([], [])


def test_every_module_says_which_question_it_answers() -> None:
    silent = []
    for path in MODULES:
        text = path.read_text(encoding="utf-8")
        if not text.strip():
            continue
        heading = (ast.get_docstring(ast.parse(text)) or "").split("\n\n")[0]
        command = path.name == "__main__.py" or room_of(path) == "cli"  # these say what is typed
        if "?" not in heading and path.name != "__init__.py" and not command:
            silent.append(where(path))
        if not heading:
            silent.append(where(path))
    assert silent == []


def test_every_public_name_is_documented() -> None:
    silent = [
        f"{where(path, node)} {node.name}"
        for path in MODULES
        for node in public_functions(path)
        if not ast.get_docstring(node)
    ]
    silent += [
        f"{where(path, node)} {node.name}"
        for path in MODULES
        for node in parsed(path).body
        if isinstance(node, ast.ClassDef) and not node.name.startswith("_") and not ast.get_docstring(node)
    ]
    assert silent == []


UNIT_WORDS = re.compile(
    r"pKa|pH|dimensionless|degC|°C|kelvin|\bK\b|g/mol|mol|kJ|\bmV\b|%|per cent|share|probabilit|weight|count|"
    r"hit|second|number|sigma|rho|sd\b|standard error|variance|worth|cost|score|unit|pixel|width|height",
    re.IGNORECASE,
)
"""What tells the unit of a number. Crude on purpose: it catches silence, not nonsense."""


def has_number(node: ast.FunctionDef) -> bool:
    """Whether the function takes or gives a float or an array of floats."""
    hints = [a.annotation for a in (*node.args.args, *node.args.kwonlyargs)] + [node.returns]
    return any(
        hint is not None and re.search(r"\bfloat\b|FloatArray|float64", ast.unparse(hint)) for hint in hints
    )


def test_every_public_function_of_numbers_states_a_unit() -> None:
    silent = [
        f"{where(path, node)} {node.name}"
        for path in MODULES
        for node in public_functions(path)
        if has_number(node) and not UNIT_WORDS.search(ast.get_docstring(node) or "")
    ]
    assert silent == []


def test_hints_are_not_evaluated_at_import() -> None:
    missing = [
        where(path)
        for path in (*MODULES, *TEST_FILES)
        if path.read_text(encoding="utf-8").strip()
        and any(isinstance(node, ast.FunctionDef) for node in parsed(path).body)
        and "from __future__ import annotations" not in path.read_text(encoding="utf-8")
    ]
    assert missing == []


def test_nothing_random_but_through_a_seeded_generator() -> None:
    allowed = {"default_rng", "Generator", "SeedSequence", "PCG64", "BitGenerator"}
    wrong = []
    for path in (*MODULES, *TEST_FILES):
        for node in ast.walk(parsed(path)):
            if isinstance(node, ast.Attribute) and ast.unparse(node.value) in ("np.random", "numpy.random"):
                watched = (
                    {"seed", "get_state"} if path in TEST_FILES else set()
                )  # a test may watch the global state
                if node.attr not in allowed | watched:
                    wrong.append(f"{where(path, node)} {ast.unparse(node)}")
            elif isinstance(node, ast.Attribute) and ast.unparse(node.value) == "random":
                if node.attr != "Random":  # random.Random(seed) is a generator of one's own
                    wrong.append(f"{where(path, node)} {ast.unparse(node)}")
            elif isinstance(node, ast.Call) and ast.unparse(node) == "np.random.default_rng()":
                wrong.append(f"{where(path, node)} a generator without a seed")
    assert wrong == []


def test_only_the_command_line_prints_and_nothing_catches_everything() -> None:
    wrong = []
    for path in MODULES:
        for node in ast.walk(parsed(path)):
            if isinstance(node, ast.Call) and ast.unparse(node.func) == "print":
                if room_of(path) not in ("cli", "fitting"):
                    wrong.append(f"{where(path, node)} prints")
            elif isinstance(node, ast.ExceptHandler) and node.type is None:
                wrong.append(f"{where(path, node)} catches everything")
            elif isinstance(node, ast.ImportFrom) and any(alias.name == "*" for alias in node.names):
                wrong.append(f"{where(path, node)} imports a star")
    assert wrong == []


UNFINISHED = re.compile("|".join(["TO" + "DO", "FIX" + "ME", r"\bXX" + "X\\b", "NotImplemented" + "Error"]))
STRAY_PATHS = re.compile("|".join(["/wo" + "rk/", "/tm" + "p/", "/ro" + "ot/", "/ho" + "me/"]))
PARKED_TESTS = re.compile(
    "|".join([r"mark\.sk" + "ip", r"mark\.xf" + "ail", r"pytest\.sk" + "ip", r"pytest\.xf" + "ail"])
)


def tracked_text() -> Iterator[tuple[Path, str]]:
    """Every text file of the project, whether in a checkout or not."""
    folders = [PACKAGE, ROOT / "tests", ROOT / "libraries"]
    single = [ROOT / name for name in ("README.md", "DEVELOPERS.md", "pyproject.toml")]
    for path in (*single, *(p for folder in folders for p in sorted(folder.rglob("*")))):
        if path.is_file() and path.suffix in (
            ".py",
            ".md",
            ".toml",
            ".csv",
            ".json",
            ".html",
            ".j2",
            ".css",
            ".js",
        ):
            yield path, path.read_text(encoding="utf-8")


def test_no_loose_ends_and_no_path_of_somebodys_machine() -> None:
    wrong = [
        f"{where(path)}: {match.group(0)}"
        for path, text in tracked_text()
        for pattern in (UNFINISHED, STRAY_PATHS)
        for match in pattern.finditer(text)
    ]
    assert wrong == []


def test_every_test_asserts_and_none_is_parked() -> None:
    wrong = [
        f"{where(p)} parks a test" for p in TEST_FILES if PARKED_TESTS.search(p.read_text(encoding="utf-8"))
    ]
    for path in TEST_FILES:
        checkers = {node.name for node in functions(path) if asserts(node)}
        for node in functions(path):
            if node.name.startswith("test_") and not (asserts(node) or calls(node) & checkers):
                wrong.append(f"{where(path, node)} {node.name} asserts nothing")
    assert wrong == []


def asserts(node: ast.FunctionDef) -> bool:
    """Whether a test asserts, expects an error, or calls a function that is named for asserting."""
    for inner in ast.walk(node):
        if isinstance(inner, ast.Assert):
            return True
        if isinstance(inner, ast.Call):
            called = ast.unparse(inner.func)
            if called == "pytest.raises" or "assert" in called:
                return True
    return False


def calls(node: ast.FunctionDef) -> set[str]:
    """Names of the functions that a function calls."""
    return {ast.unparse(inner.func) for inner in ast.walk(node) if isinstance(inner, ast.Call)}


def test_no_two_test_files_share_a_name() -> None:
    # outside packages pytest tells test modules apart by their bare names
    names = [
        p.name for p in TEST_FILES if p.name != "conftest.py" and not (p.parent / "__init__.py").exists()
    ]
    assert sorted({name for name in names if names.count(name) > 1}) == []


def test_the_top_of_the_repository_is_tidy() -> None:
    if not (ROOT / ".git").exists():  # an unpacked source archive holds less
        assert (ROOT / "tuner").is_dir()
        return
    listed = subprocess.run(["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True).stdout
    tops = {line.split("/")[0] for line in listed.splitlines()}
    allowed = {"README.md", "DEVELOPERS.md", "pyproject.toml", "tuner", "tests", "libraries", "outputs"}
    assert {top for top in tops if not top.startswith(".")} <= allowed


def test_the_guide_names_only_files_that_exist() -> None:
    guide = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")
    known = {path.name for folder in (PACKAGE, ROOT / "tests") for path in folder.rglob("*.py")}
    named = {Path(word).name for word in re.findall(r"[\w/]+\.py\b", guide)}
    assert sorted(named - known) == []


SPEAKING_NAMES = {"name", "smiles", "source", "note"}
"""Columns that mean the same in every table: usual name, structure, keys of sources.toml, remarks."""

TABLES = [p for p in data_files(data_folder()) if p.suffix in (".csv", ".toml")]


def known_sources() -> set[str]:
    return set(tomllib.loads((data_folder() / "sources.toml").read_text(encoding="utf-8"))["sources"])


def citations(path: Path) -> Iterator[tuple[str, str]]:
    """(place, citation) for every cell or key that is called `source`."""
    if path.suffix == ".csv":
        lines = [
            line
            for line in path.read_text(encoding="utf-8").splitlines()
            if line and not line.startswith("#")
        ]
        for row in csv.DictReader(lines):
            yield from ((f"{path.name} {next(iter(row.values()))}", row[k]) for k in row if k == "source")
        return
    yield from nested_citations(path.name, tomllib.loads(path.read_text(encoding="utf-8")))


def nested_citations(place: str, value: object) -> Iterator[tuple[str, str]]:
    if isinstance(value, dict):
        for key, inner in value.items():
            if key == "source" and isinstance(inner, str):
                yield place, inner
            else:
                yield from nested_citations(f"{place} {key}", inner)
    elif isinstance(value, list):
        for inner in value:
            yield from nested_citations(place, inner)


@pytest.mark.parametrize("path", TABLES, ids=lambda p: p.relative_to(data_folder()).as_posix())
def test_every_source_key_resolves(path: Path) -> None:
    known = known_sources()
    dangling = [
        f"{place}: {key}"
        for place, citation in citations(path)
        for key, _ in split_citation(citation)
        if key not in known
    ]
    assert dangling == []


def test_every_source_is_cited_somewhere() -> None:
    cited = {key for path in TABLES for _, citation in citations(path) for key, _ in split_citation(citation)}
    elsewhere = "".join(text for path, text in tracked_text() if path.suffix in (".py", ".json"))
    idle = sorted(key for key in known_sources() - cited if key not in elsewhere)
    assert idle == []


@pytest.mark.parametrize("path", TABLES, ids=lambda p: p.relative_to(data_folder()).as_posix())
def test_every_data_file_begins_with_what_its_columns_mean(path: Path) -> None:
    lines = path.read_text(encoding="utf-8").splitlines()
    comment = []
    for line in lines:
        if not line.startswith("#"):
            break
        comment.append(line)
    assert comment, "the file does not begin with a comment"
    fitted = path.parent.name == "acidity"  # written by the fit, whose modules say what stands in them
    if path.suffix == ".csv" and not fitted and "as in" not in " ".join(comment):
        columns = next(csv.reader([next(line for line in lines if line and not line.startswith("#"))]))
        words = set(re.findall(r"\w+", " ".join(comment)))
        silent = [
            c
            for c in columns
            if c not in words | SPEAKING_NAMES and not (c.endswith("_sd") and "_sd" in words)
        ]
        assert silent == []


def test_help_does_not_load_heavy_libraries() -> None:
    heavy = "{'rdkit', 'scipy', 'pandas', 'pymoo', 'numpy', 'xlsxwriter', 'jinja2'}"
    code = (
        "import sys; from tuner.cli import run; code = run(['--help']); "
        f"print(code, sorted({heavy} & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    assert done.stdout.splitlines()[-1] == "0 []"
