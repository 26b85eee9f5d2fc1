"""What can go wrong on the ground floor, as exceptions whose text is one sentence for the user."""

import re

LONGEST = 2000
"""Characters of a sentence that are shown."""

LONGEST_WORD = 250
"""Characters of a word in it, a path for example."""


def one_line(sentence: str) -> str:
    """A sentence as it may be printed whatever it quotes: on one line, no control characters, of bounded length."""
    if len(sentence) > LONGEST_WORD:
        sentence = re.sub(rf"\S{{{LONGEST_WORD},}}", lambda word: _shortened(word.group(), LONGEST_WORD), sentence)
    return "".join(sign if sign.isprintable() else ascii(sign)[1:-1] for sign in _shortened(sentence, LONGEST))


def _shortened(text: str, most: int) -> str:
    """Without its middle where it is too long: the beginning says where, the end what is allowed."""
    return text if len(text) <= most else f"{text[: most // 2]} ... {text[-(most // 2 - 5) :]}"


class MaterialError(ValueError):
    """A material, gas or lining is unknown, its file is wrong, or a property was asked out of range."""

    def __init__(self, sentence: str) -> None:
        super().__init__(one_line(sentence))


class UnknownName(MaterialError):
    """No material, gas or lining has this name."""


class UnitError(MaterialError):
    """A text is not a quantity of the wanted dimension."""
