"""The option --set."""

from typing import Annotated

import typer

Changes = Annotated[
    list[str] | None,
    typer.Option("--set", metavar="PATH=VALUE", help='Change a value, such as supply.power="80 kW".'),
]


def overrides(changes: list[str] | None) -> dict[str, object]:
    """Dotted path -> value of every --set.

    Raises
    ------
    CaseError : a change is not path=value.
    """
    from thermal.errors import CaseError

    found: dict[str, object] = {}
    for change in changes or []:
        path, equals, value = change.partition("=")
        if not (equals and path.strip() and value.strip()):
            raise CaseError(f"--set    '{change}' is not path=value, write for example supply.power=\"80 kW\"")
        found[path.strip()] = value.strip()
    return found
