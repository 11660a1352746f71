"""The two documents are true, and the rules of the app that they state are kept."""

import argparse
import ast
import contextlib
import importlib
import importlib.util
import io
import re
import shlex
import subprocess
import sys
from pathlib import Path

import pytest

from pwa.__main__ import _parser

ROOT = Path(__file__).resolve().parents[2]
DOCUMENTS = {name: (ROOT / name).read_text(encoding="utf-8") for name in ("README.md", "DEVELOPERS.md")}
EXAMPLE = re.compile(r"^```python\n(.*?)^```\n\n((?:    [^\n]*\n)+)", re.MULTILINE | re.DOTALL)
QUOTED = re.compile(r"`([^`\n]+)`")
LINKED = re.compile(r"\]\(([^)\s]+)\)|src=\"([^\"]+)\"")
BLOCK = re.compile(r"^    (.+)$", re.MULTILINE)
PATH = re.compile(r"\.?\w[\w.-]*(/[\w.-]+)+/?|[\w-]+\.(md|py|toml|tsv|json)|\.[\w-]+")
DOTTED = re.compile(r"(core|pwa|tests)(\.\w+)+")
MADE = {".venv", ".venv-test", ".cache", "build", "test-output"}  # by running, so not in the repository
LARGEST_PICTURE = 150_000  # bytes
LONGEST = 250  # lines

SCREENS = sorted([*(ROOT / "pwa" / "screens").glob("*.py"), *(ROOT / "pwa" / "components").glob("*.py")])
STATE = sorted((ROOT / "pwa" / "state").glob("*.py"))
BARE_COMPONENTS = {"pwa/components/guard.py", "pwa/routes.py"}  # the guard itself, and the root that holds the views
SHOWN = {"ft.Control", "ft.View"}  # what a component gives; a dialog belongs to the component that opens it


def in_repository(path: str) -> bool:
    """Whether a path is there, or is made by running and named as ignored."""
    top = path.split("/")[0]
    ignored = (ROOT / ".gitignore").read_text(encoding="utf-8").split()
    return (ROOT / path).exists() or (top in MADE and f"{top}/" in ignored)


def paths_named(text: str) -> set[str]:
    """Paths in backticks, in commands and in links; what the example prints is none."""
    text = EXAMPLE.sub("", text)
    words = {word for code in [*QUOTED.findall(text), *BLOCK.findall(text)] for word in code.split()}
    links = {one or other for one, other in LINKED.findall(text)}
    found = {word for word in words if PATH.fullmatch(word)} | links
    return {path for path in found if not path.startswith("http")}


def commands_named(text: str) -> list[list[str]]:
    """What the documents tell to run, word by word, remarks left out."""
    lines = [line for code in [*QUOTED.findall(text), *BLOCK.findall(text)] for line in code.split(" && ")]
    words = [shlex.split(line, comments=True) for line in lines if re.search(r"\b(bash|python\S*|pip|ruff) ", line)]
    return [[word for word in command if not re.fullmatch(r"[A-Z]+=\S*", word)] for command in words]


def test_the_example_prints_what_is_shown():
    """The example of the README, run as it stands, prints what stands under it."""
    ((code, shown),) = EXAMPLE.findall(DOCUMENTS["README.md"])

    done = subprocess.run([sys.executable, "-"], input=code, cwd=ROOT, capture_output=True, text=True, encoding="utf-8")
    assert done.stderr == ""
    assert done.stdout == re.sub("^    ", "", shown, flags=re.MULTILINE)


@pytest.mark.parametrize("name", DOCUMENTS)
def test_named_paths_exist(name):
    """Every file and folder that a document names is there."""
    named = paths_named(DOCUMENTS[name])

    assert len(named) > 5
    assert {path for path in named if not in_repository(path)} == set()


@pytest.mark.parametrize("name", DOCUMENTS)
def test_named_modules_and_names_exist(name):
    """Every dotted name (core.units.convert) can be imported, and its attribute is there."""
    named = {word for code in QUOTED.findall(DOCUMENTS[name]) for word in code.split() if DOTTED.fullmatch(word)}

    for word in named:
        module, _, attribute = word.rpartition(".")
        if importlib.util.find_spec(module) is not None and hasattr(importlib.import_module(module), attribute):
            continue
        assert importlib.util.find_spec(word) is not None, word


@pytest.mark.parametrize("name", DOCUMENTS)
def test_named_commands_can_be_run(name):
    """A script is there, a module has an entry, and our own commands take what they are given."""
    commands = commands_named(DOCUMENTS[name])

    assert commands
    for program, *rest in commands:
        if program == "bash":
            assert (ROOT / rest[0]).read_text(encoding="utf-8").startswith("#!"), rest
            arguments = rest[1:] if rest[0] == "pwa/run" else []
        elif program == "python" and rest[0] == "-m":
            assert has_entry(rest[1]), rest
            arguments = rest[2:] if rest[1] == "pwa" else []
        else:
            assert program == ".venv-test/bin/ruff", program
            continue
        assert accepted(arguments), arguments


def has_entry(module: str) -> bool:
    """Whether `python -m` can run it."""
    found = importlib.util.find_spec(module)
    if found is not None and found.submodule_search_locations is not None:
        found = importlib.util.find_spec(f"{module}.__main__")
    return found is not None and '__name__ == "__main__"' in Path(found.origin).read_text(encoding="utf-8")


def accepted(arguments: list[str]) -> bool:
    """Whether `python -m pwa` takes them."""
    try:
        with contextlib.redirect_stderr(io.StringIO()):
            return isinstance(_parser().parse_args(arguments or ["run"]), argparse.Namespace)
    except SystemExit:
        return False


def test_the_checks_of_commands_can_fail():
    """A command that is gone, and a module that is gone, are noticed."""
    assert not accepted(["polish"])
    assert not has_entry("tests.bench.stock")
    assert not in_repository("core/nothing.py")


def test_every_bench_is_listed():
    """DEVELOPERS.md names each bench that can be run."""
    names = [f"tests.bench.{path.stem}" for path in (ROOT / "tests" / "bench").glob("*.py")]
    benches = {name for name in names if not name.endswith("__init__") and has_entry(name)}

    assert benches
    assert {name for name in benches if f"python -m {name}`" not in DOCUMENTS["DEVELOPERS.md"]} == set()


def test_the_documents_are_short():
    """The picture is light, and neither document is longer than somebody reads."""
    picture = (ROOT / "docs" / "phone.png").read_bytes()

    assert picture.startswith(b"\x89PNG")
    assert len(picture) < LARGEST_PICTURE
    assert all(text.count("\n") < LONGEST for text in DOCUMENTS.values())


# The rules of the app


def parsed(path: Path) -> ast.Module:
    """The tree of a file."""
    return ast.parse(path.read_text(encoding="utf-8"))


def where(path: Path) -> str:
    """A file as it is named in the documents."""
    return path.relative_to(ROOT).as_posix()


def dotted(node: ast.AST) -> str:
    """`ft.component` for its node; "" for anything that is not a name."""
    if isinstance(node, ast.Call):
        return dotted(node.func)
    if isinstance(node, ast.Attribute):
        return f"{dotted(node.value)}.{node.attr}"
    return node.id if isinstance(node, ast.Name) else ""


def functions(tree: ast.AST) -> list[ast.FunctionDef]:
    """Functions of a file that are not inside another."""
    return [node for node in ast.iter_child_nodes(tree) if isinstance(node, ast.FunctionDef)]


def decorators(node: ast.FunctionDef | ast.ClassDef) -> set[str]:
    """Names of what a function or class is decorated with."""
    return {dotted(each).rpartition(".")[2] for each in node.decorator_list}


def observables() -> set[str]:
    """Classes of the state that tell a component when they change."""
    classes = [node for path in STATE for node in ast.walk(parsed(path)) if isinstance(node, ast.ClassDef)]
    return {node.name for node in classes if "observable" in decorators(node)}


def is_component(function: ast.FunctionDef, watched: set[str]) -> bool:
    """Whether it must be a component: it uses a hook, or shows an observable that is handed to it."""
    if function.name.startswith(("use_", "_")):
        return False
    hooks = {dotted(node.func) for node in ast.walk(function) if isinstance(node, ast.Call)}
    annotations = {
        name for arg in function.args.args if arg.annotation for name in re.findall(r"\w+", ast.unparse(arg.annotation))
    }
    shows = function.returns is not None and ast.unparse(function.returns) in SHOWN
    uses = any(name.rpartition(".")[2].startswith("use_") for name in hooks)
    return uses or (shows and bool(annotations & watched))


def calls(path: Path) -> list[ast.Call]:
    """Every call in a file."""
    return [node for node in ast.walk(parsed(path)) if isinstance(node, ast.Call)]


def test_every_component_is_guarded():
    """What uses a hook or shows an observable is guarded: a failure shows in its place, and the app lives on."""
    watched = observables()
    made = {(where(path), each.name): each for path in SCREENS for each in functions(parsed(path))}
    components = {place for place, each in made.items() if is_component(each, watched)}

    assert {"PartState", "FieldState"} <= watched
    assert len(components) > 10
    assert {place for place in components if "guarded" not in decorators(made[place])} == set()


def test_no_component_goes_round_the_guard():
    """`ft.component` stands in the guard and at the root alone."""
    nodes = [(path, node) for path in (ROOT / "pwa").rglob("*.py") for node in ast.walk(parsed(path))]
    bare = {
        where(path) for path, node in nodes if isinstance(node, ast.FunctionDef) and "component" in decorators(node)
    }

    assert bare == BARE_COMPONENTS


def test_every_text_field_is_a_box():
    """Flet's text field is made in the box alone, and so is the keyboard that marks a number field."""
    made = {where(path) for path in SCREENS for call in calls(path) if dotted(call).endswith("TextField")}
    keyboards = {where(path) for path in SCREENS if "KeyboardType." in path.read_text(encoding="utf-8")}

    assert made == {"pwa/components/box.py"}
    assert keyboards == {"pwa/components/box.py"}


def test_what_can_be_tapped_has_a_name():
    """A bare container, row or column with a click is made in `Tappable` alone."""
    nameless = ("ft.Container", "ft.GestureDetector", "ft.Row", "ft.Column", "ft.Stack")
    taps = {"on_click", "on_tap"}
    made = [(where(path), call) for path in SCREENS for call in calls(path) if dotted(call) in nameless]

    assert {place for place, call in made if taps & {each.arg for each in call.keywords}} == {"pwa/components/words.py"}
