"""Where a number comes from."""

from dataclasses import dataclass
from typing import Literal, get_args

Kind = Literal["measured", "recommended", "estimated", "assumed", "memory"]
KINDS: tuple[str, ...] = get_args(Kind)


@dataclass(frozen=True, slots=True)
class Source:
    """Citation of one number or table.

    key : entry of the bibliography ; locator : table, equation, clause or page in it ;
    kind : measured, recommended (evaluated tables, standards), estimated (fitted or derived), assumed,
    memory (recalled from the named work, no document at hand when it was typed).
    """

    key: str
    locator: str
    kind: Kind


@dataclass(frozen=True, slots=True)
class Reference:
    """One entry of the bibliography; year and publisher are empty where they are not known."""

    key: str
    title: str
    authors: str
    year: str
    publisher: str
    note: str
