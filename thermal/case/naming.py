"""What the stages of a schedule are called in words."""

from collections import Counter
from collections.abc import Sequence

KINDS = ("heat", "hold", "transfer")


def numbered(kinds: Sequence[str]) -> tuple[str, ...]:
    """Kind of every stage, with a running number where the kind occurs more than once: heat 1, hold, heat 2."""
    total, seen = Counter(kinds), Counter[str]()
    names = []
    for kind in kinds:
        seen[kind] += 1
        names.append(f"{kind} {seen[kind]}" if total[kind] > 1 else kind)
    return tuple(names)


def stages_in_words(document: dict[str, object]) -> tuple[str, ...]:
    """Names of the stages of a case as read from TOML; an empty one where a stage is of no known kind."""
    stages = document.get("schedule")
    if not isinstance(stages, list):
        return ()
    kinds = [stage.get("stage") if isinstance(stage, dict) else None for stage in stages]
    names = iter(numbered([kind for kind in kinds if kind in KINDS]))
    return tuple(next(names) if kind in KINDS else "" for kind in kinds)
