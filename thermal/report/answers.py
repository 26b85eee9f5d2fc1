"""The answer to a question as plain text and as JSON."""

import json
import math
from pathlib import Path

from thermal.case import Case
from thermal.questions.answer import Answer, Value
from thermal.report.advice import Caution, cautions, expectation
from thermal.report.text import bullets, columns, paragraph
from thermal.report.versions import versions


def answer_text(answer: Answer[object], case: Case, folder: Path | None) -> str:
    """Sentence, tables and what belongs to them; folder is where the files are, None where none were written."""
    parts = [paragraph(answer.setup.title), paragraph(answer.sentence)]
    parts += [f"{paragraph(table.heading)}\n{columns(table.rows)}" for table in answer.tables]
    if answer.notes:
        parts.append(f"Notes\n{bullets(answer.notes)}")
    parts.append(f"What to expect\n{bullets(expectation(case))}")
    if folder is not None:
        parts.append(paragraph(f"Files: {folder}"))
    short = [each.short for each in _cautions(answer)]
    parts.append(f"Cautions, in short (in full with --json)\n{bullets(short)}")
    return "\n\n".join(parts) + "\n"


def answer_json(answer: Answer[object], case: Case) -> str:
    """The answer as JSON text; figures that do not exist are null."""
    told: dict[str, Value] = {
        "question": answer.question,
        "title": answer.setup.title,
        "sentence": answer.sentence,
        "met": answer.met,
        **answer.values,
        "notes": list(answer.notes),
        "assumptions": list(answer.setup.assumptions),
        "expectation": list(expectation(case)),
        "cautions": [each.full for each in _cautions(answer)],
        "versions": dict(versions()),
    }
    return json.dumps(_plain(told), indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def _cautions(answer: Answer[object]) -> list[Caution]:
    """Those of all the pieces, each once."""
    return list(dict.fromkeys(each for setup, hottest in answer.pieces for each in cautions(setup, hottest)))


def _plain(value: Value) -> Value:
    """The same without numbers JSON does not know."""
    match value:
        case float():
            return value if math.isfinite(value) else None
        case list():
            return [_plain(each) for each in value]
        case dict():
            return {name: _plain(each) for name, each in value.items()}
        case _:
            return value
