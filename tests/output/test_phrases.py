"""The fixed phrases: each used, none forbidden, a firm's own laid over them."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from reporter.errors import OutputError
from reporter.output.phrases import load_phrases
from reporter.resources import PACKAGE, templates_folder

#: Words no output may use of a result (the project's own rule; "passenger" or "bypass" are not meant).
FORBIDDEN = re.compile(r"\b(pass(es|ed)?|fail(s|ed|ure)?|complian(t|ce)|violat(es|ed|ion)s?|verdict)\b", re.IGNORECASE)


def test_no_phrase_holds_a_forbidden_word() -> None:
    assert [words for words in load_phrases().words.values() if FORBIDDEN.search(words)] == []


def test_every_phrase_is_used_somewhere() -> None:
    files = [*PACKAGE.rglob("*.py"), *templates_folder().rglob("*.html")]
    text = "\n".join(path.read_text(encoding="utf-8") for path in files)
    unused = [
        name
        for name in load_phrases().words
        if f'"{name}"' not in text and f"'{name}'" not in text and not _built(name, text)
    ]
    assert unused == []


def test_every_phrase_that_is_asked_for_is_there() -> None:
    files = [*PACKAGE.rglob("*.py"), *templates_folder().rglob("*.html")]
    asked = {
        name
        for path in files
        for name in re.findall(r'(?:phrases|words|said|spoken)\("([a-z_]+\.[a-z_]+)"', path.read_text(encoding="utf-8"))
    }
    assert len(asked) > 60
    assert sorted(asked - set(load_phrases().words)) == []


def _built(name: str, text: str) -> bool:
    """Whether a name is put together in code: ``title.<section>``, ``limit.<relation>_met``, or a whole table."""
    table, entry = name.split(".", 1)
    if table == "title" or f'.all("{table}")' in text:
        return True
    stem = re.sub(r"(_not)?_met$|_role$", "", entry)
    if f'"{table}.{{' in text and f'"{stem}"' in text:
        return True
    parts = entry.split("_")
    return any(f'"{table}.{"_".join(parts[:cut])}_{{' in text for cut in range(1, len(parts)))


def test_the_comparison_is_worded_as_fixed() -> None:
    phrases = load_phrases()
    assert phrases("limit.at_most_met") == "at or below the limit as entered"
    assert phrases("limit.at_most_not_met") == "above the limit as entered"
    assert phrases("limit.not_compared", reason="no citation") == "not compared: no citation"


def test_a_firms_own_words_replace_the_shipped_ones(tmp_path: Path) -> None:
    (tmp_path / "phrases.toml").write_text('[title]\nreport = "Measurement report"\n', encoding="utf-8")
    phrases = load_phrases(tmp_path)
    assert phrases("title.report") == "Measurement report"
    assert phrases("title.runs") == load_phrases()("title.runs")


@pytest.mark.parametrize("text", ['[title]\nreprot = "x"\n', "[title\n", '[limit]\nnot_compared = "{nobody}"\n'])
def test_a_wrong_phrase_file_is_refused_with_its_name(tmp_path: Path, text: str) -> None:
    (tmp_path / "phrases.toml").write_text(text, encoding="utf-8")
    with pytest.raises(OutputError) as caught:
        load_phrases(tmp_path)("limit.not_compared", reason="x")
    assert caught.value.place == "phrases.toml"


def test_an_unknown_name_is_an_error() -> None:
    with pytest.raises(OutputError):
        load_phrases()("limit.nothing")
