"""Questions as a file to fill in, and the answers read back from it."""

from __future__ import annotations

import json
import tomllib
from collections.abc import Mapping, Sequence
from pathlib import Path

from reporter.errors import RecordError
from reporter.intake.foreign.model import Question


def questions_toml(file: str, questions: Sequence[Question], given: Mapping[str, str] | None = None) -> str:
    """The questions about a file as TOML, each with an empty answer, below them the answers already given."""
    lines = [
        f"# What can be read two ways in {json.dumps(file, ensure_ascii=False)}. Write one of the answers between the",
        "# quotation marks, then: fluebook map FILE --answers THIS_FILE --save NAME.map.toml",
    ]
    for question in questions:
        where = question.place.text()
        lines += [
            "",
            "[[question]]",
            f"key = {_quoted(question.key)}",
            f"asks = {_quoted(question.asks)}",
            f"found = {_quoted(f'{where}: {question.found}' if where else question.found)}",
            *(
                f"# {_quoted(o.answer)}{': ' + ' '.join(o.meaning.split()) if o.meaning else ''}"
                for o in question.options
            ),
            'answer = ""',
        ]
    open_ = {question.key for question in questions}
    for key, answer in (given or {}).items():
        if key not in open_:
            lines += ["", "[[question]]  # answered before", f"key = {_quoted(key)}", f"answer = {_quoted(answer)}"]
    return "\n".join(lines) + "\n"


def _quoted(text: str) -> str:
    return json.dumps(text, ensure_ascii=False).replace("\x7f", "\\u007f")


def read_answers(path: str | Path) -> dict[str, str]:
    """The answers of a file of questions, by key; those left empty are left out.

    Raises
    ------
    RecordError
        The file cannot be read, or has another form.
    """
    file = Path(path)
    try:
        data = tomllib.loads(file.read_text(encoding="utf-8"))
        found = {str(row["key"]): str(row.get("answer", "")) for row in data.get("question", [])}
        found |= {str(key): str(value) for key, value in data.get("answers", {}).items()}
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as error:
        raise RecordError(f"the answers cannot be read: {error}", file.name) from None
    except (KeyError, TypeError, AttributeError):
        raise RecordError("each [[question]] needs key and answer", file.name) from None
    return {key: answer for key, answer in found.items() if answer.strip()}
