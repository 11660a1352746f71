"""One bibliography: every source named in the core is in it, and nothing in it is idle."""

import ast
import importlib
import io
import re
import tokenize
from pathlib import Path

import pytest

from core.data import read_table
from core.references import REFERENCES
from core.working import Card
from tests.published import FOLDER, STATUSES, rows

ROOT = Path(__file__).resolve().parents[2]
CORE = sorted((ROOT / "core").rglob("*.py"))
TABLES = sorted((ROOT / "core" / "data").glob("*.tsv"))
NO_KEY = {"definition", "common practice, no source"}
REFERENCE_STATUSES = {"checked", "secondary", "from memory"}
BRACKETS = re.compile(r"\[([A-Z][A-Z0-9]+(?:[.-][A-Z0-9]+)*(?:, [A-Z][A-Z0-9]+(?:[.-][A-Z0-9]+)*)*)\]")
UNITS = {"WSFU", "NTU", "BV"}  # capitals in brackets that are units


def prose(path: Path) -> str:
    """Comments and strings of a file: where keys stand in brackets and indexing does not."""
    source = path.read_text(encoding="utf-8")
    kinds = (tokenize.COMMENT, tokenize.STRING)
    tokens = tokenize.generate_tokens(io.StringIO(source).readline)
    return "\n".join(token.string for token in tokens if token.type in kinds)


def keys_in_brackets(path: Path) -> set[str]:
    """Keys written as [KEY] or [KEY, OTHER]."""
    found = {key for group in BRACKETS.findall(prose(path)) for key in group.split(", ")}
    return {key for key in found if len(key) > 2} - UNITS


def named_sources(path: Path) -> set[str]:
    """Texts handed over as source=..., or set as a default of an attribute called source."""
    found = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.keyword) and node.arg == "source" and isinstance(node.value, ast.Constant):
            found.add(node.value.value)
    return found


def core_modules() -> list[str]:
    """Names of all modules of the core."""
    names = [".".join(path.relative_to(ROOT).with_suffix("").parts) for path in CORE]
    return [name.removesuffix(".__init__") for name in names]


@pytest.mark.parametrize("path", CORE, ids=lambda path: str(path.relative_to(ROOT)))
def test_every_key_resolves(path):
    """A key in brackets, or given as a source, is in the bibliography."""
    assert keys_in_brackets(path) - set(REFERENCES) == set()
    assert {source for source in named_sources(path) if source} - NO_KEY - set(REFERENCES) == set()


@pytest.mark.parametrize("path", TABLES, ids=lambda path: path.name)
def test_every_row_of_a_table_has_a_source(path):
    """A table in core.data names source and status on each row, with words that are known."""
    table = read_table(path.stem)

    assert table.rows
    for row in table.rows:
        assert row["source"] in {*REFERENCES, *NO_KEY}, row
        assert all(row[name] in {*STATUSES, "-"} for name in row if name.endswith("status")), row


@pytest.mark.parametrize("name", core_modules())
def test_every_card_has_a_source(name):
    """A formula shows where it comes from: a key of the bibliography, a definition, or that there is none."""
    things = vars(importlib.import_module(name)).values()

    cards = [card for thing in things if isinstance(card := getattr(thing, "card", None), Card)]
    assert [card for card in cards if card.source not in {*REFERENCES, *NO_KEY}] == []


def test_no_key_is_idle():
    """What is in the bibliography is used in the core; otherwise it goes."""
    texts = [path.read_text(encoding="utf-8") for path in (*CORE, *TABLES) if path.name != "references.py"]
    used = set(re.findall(r"[A-Z][A-Z0-9]*(?:[.-][A-Z0-9]+)*", "\n".join(texts)))

    assert set(REFERENCES) - used == set()


def test_bibliography_is_sound():
    """Keys are sorted and of one form, citations say something, and how well each was read is stated."""
    assert list(REFERENCES) == sorted(REFERENCES)
    for key, reference in REFERENCES.items():
        assert BRACKETS.fullmatch(f"[{key}]"), key
        assert len(reference.citation) > 15
        assert reference.status in REFERENCE_STATUSES


@pytest.mark.parametrize("path", sorted(FOLDER.glob("*.tsv")), ids=lambda path: path.name)
def test_published_tables_are_sound(path):
    """Ids are unique in a table; each row has a source, and a tolerance that can be read."""
    table = rows(path.stem)

    assert len({row.id for row in table}) == len(table)
    for row in table:
        assert row.source
        assert row.tolerance == "exact" or re.fullmatch(r"[\d.e-]+ (rel|abs)", row.tolerance), row.id
