"""Rules of the house: which way imports run, what is public, how long a module may be, and the words that it uses."""

import ast
import importlib
import inspect
import re
import subprocess
import sys
from pathlib import Path

import pytest

import pipeflex
from pipeflex.formulas import FORMULAS
from pipeflex.model.words import Judgement, Standing, State, Verdict
from pipeflex.quantities import KINDS, SYMBOLS

PACKAGE = Path(pipeflex.__file__).parent
ROOT = PACKAGE.parent
MODULES = sorted(PACKAGE.rglob("*.py"))
NAMES = {path: ".".join(path.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__") for path in MODULES}
HEAVY = {"pint", "plotly", "ipywidgets", "anywidget", "IPython"}
LONGEST = 450

LAYERS = (
    {"quantities"},
    {"present"},
    {"errors"},
    {"steam", "notation", "unit_names", "units", "formulas", "trace"},
    {"model"},
    {"data", "mechanics"},
    {"codes"},
    {"files", "methods"},
    {"sheet"},
    {"desks"},
    {"cli", "__main__"},
)
RANK = {name: rank for rank, layer in enumerate(LAYERS) for name in layer}
APART = {
    "mechanics": {"model", "codes", "data"},
    "data": {"mechanics"},
    "methods": {"files"},
    "steam": {"units", "formulas", "trace"},
    "formulas": {"units", "trace", "steam"},
    "trace": {"units", "steam"},
}
"""What a part leaves alone though its layer would let it."""


def parsed(path):
    return ast.parse(path.read_text("utf-8"))


def imported(path):
    """Modules that a file imports anywhere in it, with their names as far as they can be modules."""
    package = NAMES[path].split(".") if path.name == "__init__.py" else NAMES[path].split(".")[:-1]
    for node in ast.walk(parsed(path)):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            base = package[: len(package) - node.level + 1] if node.level else []
            module = ".".join([*base, *([node.module] if node.module else [])])
            yield module
            yield from (f"{module}.{alias.name}" for alias in node.names)


def part(name):
    """Part of the package that a module belongs to: "model" of "pipeflex.model.pipe"."""
    pieces = name.split(".")
    return pieces[1] if len(pieces) > 1 and pieces[0] == "pipeflex" else ""


@pytest.mark.parametrize("path", MODULES, ids=NAMES.get)
def test_imports_run_one_way(path):
    own = part(NAMES[path])
    if not own:
        return
    assert own in RANK, f"{own} stands in no layer"
    for name in imported(path):
        other = part(name)
        if other in RANK and other != own:
            assert RANK[other] <= RANK[own], f"{NAMES[path]} imports {name}"
            assert other not in APART.get(own, ()), f"{NAMES[path]} imports {name}"


@pytest.mark.parametrize(
    "path", [p for p in MODULES if part(NAMES[p]) in ("mechanics", "codes", "methods")], ids=NAMES.get
)
def test_physics_knows_no_display_library(path):
    assert not {name.partition(".")[0] for name in imported(path)} & HEAVY


def test_only_the_border_of_units_imports_pint():
    found = {NAMES[p] for p in MODULES if any(name.partition(".")[0] == "pint" for name in imported(p))}
    assert {part(name) for name in found} <= {"units", "unit_names"}


def fresh(code):
    """Output of a new interpreter that starts with this package's folder."""
    done = subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True, cwd=ROOT)
    return done.stdout


@pytest.mark.parametrize(
    "work",
    [
        "import pipeflex",
        "import pipeflex; dir(pipeflex)",
        "import pipeflex.methods, pipeflex.codes, pipeflex.data.materials",
    ],
)
def test_importing_loads_no_display_library(work):
    assert fresh(f"{work}\nimport sys\nprint(*({HEAVY} & sys.modules.keys()))") == "\n"


def test_importing_reads_no_table():
    code = "import pipeflex, pipeflex.methods, pipeflex.codes; from pipeflex.data import tables; "
    assert fresh(code + "print(tables._read.cache_info().currsize)") == "0\n"


def test_public_names():
    assert pipeflex.__all__ == sorted(pipeflex.__all__)
    assert len(set(pipeflex.__all__)) == len(pipeflex.__all__)
    public = {
        name for name in vars(pipeflex) if not name.startswith("_") and not inspect.ismodule(getattr(pipeflex, name))
    }
    assert public - set(pipeflex.__all__) <= {"Any", "import_module"}
    assert set(pipeflex.__all__) <= set(dir(pipeflex))
    with pytest.raises(AttributeError, match="no attribute"):
        pipeflex.no_such_name  # noqa: B018


@pytest.mark.parametrize("name", pipeflex.__all__)
def test_a_public_name_is_there_and_says_what_it_is(name):
    found = getattr(pipeflex, name)
    if callable(found):
        said = inspect.getdoc(found)
        assert said
        assert not said.startswith(f"{name}(")  # the signature that a dataclass writes for want of words


@pytest.mark.parametrize("path", MODULES, ids=NAMES.get)
def test_a_module_is_short_and_says_what_it_is(path):
    assert len(path.read_text("utf-8").splitlines()) <= LONGEST
    assert ast.get_docstring(parsed(path))


@pytest.mark.parametrize("path", MODULES, ids=NAMES.get)
def test_public_functions_and_classes_say_what_they_are(path):
    made = [n for n in parsed(path).body if isinstance(n, (ast.FunctionDef, ast.ClassDef))]
    silent = [n.name for n in made if not n.name.startswith("_") and not ast.get_docstring(n)]
    assert not silent


@pytest.mark.parametrize("path", MODULES, ids=NAMES.get)
def test_nothing_is_printed_or_asked_outside_the_command_line(path):
    if part(NAMES[path]) == "cli":
        return
    calls = {n.func.id for n in ast.walk(parsed(path)) if isinstance(n, ast.Call) and isinstance(n.func, ast.Name)}
    assert not calls & {"print", "input", "exec", "breakpoint"}


# ------------------------------------------------------------------------------------------ formulas and symbols


def formulas():
    for name in ("section", "expansion", "cantilever", "support"):
        importlib.import_module(f"pipeflex.mechanics.{name}")
    importlib.import_module("pipeflex.codes.b31_3")
    importlib.import_module("pipeflex.codes.b31_3_flexibility")
    return FORMULAS


@pytest.mark.parametrize("name", sorted(formulas()))
def test_formulas_speak_in_symbols_and_cite_a_source(name):
    entry = FORMULAS[name]
    assert entry.symbol in SYMBOLS
    assert set(entry.parameters) <= SYMBOLS.keys()
    named = {node.id for node in ast.walk(entry.tree) if isinstance(node, ast.Name)}
    functions = {"sqrt", "min", "max", "abs", "tan", "pi"}
    assert named - functions == set(entry.parameters)
    assert len(entry.ref) > 5
    assert entry.words
    assert inspect.getdoc(entry.function)
    kind = SYMBOLS[entry.symbol].kind
    unit = {"length": "[m]", "force": "[N]", "stress": "[Pa]", "moment": "[N m]", "area": "[m2]", "strain": "[-]",
            "mass per length": "[kg/m]", "weight per length": "[N/m]", "section modulus": "[m3]"}.get(kind)  # fmt: skip
    if unit:
        assert unit in inspect.getdoc(entry.function), f"{name} does not say its unit {unit}"


@pytest.mark.parametrize("key", sorted(SYMBOLS))
def test_symbols(key):
    symbol = SYMBOLS[key]
    assert key.isidentifier()
    assert symbol.kind in KINDS
    assert symbol.meaning
    assert not symbol.meaning.endswith(".")
    assert symbol.glyph
    assert symbol.same_as is None or symbol.same_as in SYMBOLS


def test_one_glyph_has_one_meaning_in_a_formula():
    for entry in formulas().values():
        glyphs = [SYMBOLS[p].glyph for p in entry.parameters]
        assert len(set(glyphs)) == len(glyphs), entry.name


# ------------------------------------------------------------------------------------------------------- words


STATES = {str(word) for words in (Verdict, Judgement, Standing, State) for word in words}
SYNONYMS = re.compile(
    r"\b(pass(es|ed)?|fail(s|ed|ure)?|OK|okay|not ok|satisf(y|ies|ied)|acceptable|unacceptable|adequate|inadequate"
    r"|compliant|non-?compliant|overstress(ed)?|safe)\b",
    re.I,
)
PLAIN_USES = re.compile(r"safe only|%s failed", re.I)
"""Limits of a rule and a line of a log, which judge no design."""
LONE = {"PASS", "FAIL", "OK", "Pass", "Fail", "Ok", "Okay", "Passed", "Failed"}
"""Single words that could only be a verdict."""


def texts(path):
    """Texts of a module that a user may read; docstrings and keys of one word are left out."""
    tree = parsed(path)
    docs = {id(node.value) for node in ast.walk(tree) if isinstance(node, ast.Expr)}
    for node in ast.walk(tree):
        text = node.value if isinstance(node, ast.Constant) and id(node) not in docs else None
        if isinstance(text, str) and (" " in text or text in LONE):
            yield node.lineno, text


USER_PARTS = ("methods", "sheet", "desks", "codes", "data", "model", "files", "cli", "errors", "present", "units")


@pytest.mark.parametrize("path", [p for p in MODULES if part(NAMES[p]) in USER_PARTS], ids=NAMES.get)
def test_states_have_one_word_each(path):
    """A verdict is said in the words of `pipeflex.model.words`, and in no others."""
    found = [
        (line, text) for line, text in texts(path)
        if SYNONYMS.search(PLAIN_USES.sub("", text)) and text not in STATES
    ]  # fmt: skip
    assert not found


def test_state_words_are_written_once():
    """Other modules take the words from `words`; they do not type them again."""
    typed = []
    for path in MODULES:
        if NAMES[path] == "pipeflex.model.words":
            continue
        for node in ast.walk(parsed(path)):
            if isinstance(node, ast.Constant) and node.value in {str(v) for v in (*Verdict, *Standing)}:
                typed.append((NAMES[path], node.lineno, node.value))
    assert not typed


FORBIDDEN = re.compile(
    r"/(home|root|tmp|work|Users)/\w|[A-Z]:\\\\Users"  # paths of one machine
    r"|\bcourse notes|\bTODO\b|\bFIXME\b|\bXXX\b"
    r"|\bissue #?\d|\b(AI|LLM|chatbot|language model)\b"
)
KEPT = [p for folder in ("pipeflex", "tests", "tables", "notebooks") for p in sorted((ROOT / folder).rglob("*"))
        if p.suffix in (".py", ".toml", ".csv", ".css", ".js", ".md", ".html", ".ipynb", ".j2")
        and "__pycache__" not in p.parts]  # fmt: skip
KEPT += [p for p in sorted(ROOT.glob("*")) if p.suffix in (".md", ".toml")]


@pytest.mark.parametrize("path", KEPT, ids=lambda p: p.relative_to(ROOT).as_posix())
def test_the_project_speaks_only_of_itself(path):
    if path == Path(__file__):
        return
    lines = path.read_text("utf-8").splitlines()
    assert not [(n, line[:120]) for n, line in enumerate(lines, 1) if FORBIDDEN.search(line)]
