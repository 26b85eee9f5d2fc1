"""`thermal new`."""

from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.exits import exit_codes, say


def new(
    kind: Annotated[str, typer.Argument(help="billet, tube, plate or heater (without a coil).")],
    file: Annotated[Path | None, typer.Argument(help="Where to write it; printed if left out.")] = None,
) -> None:
    """Begin with a commented case."""
    with exit_codes():
        from thermal.case.starter import starter
        from thermal.errors import CaseError

        text = starter(kind)
        if file is None:
            say(text)
            return
        try:
            target = file.open("x", encoding="utf-8", newline="\n")
            try:
                with target:
                    target.write(text)
            except BaseException:
                file.unlink(missing_ok=True)  # no half of a file
                raise
        except FileExistsError:
            raise CaseError(f"{file}: is there already, name another file") from None
        except OSError as error:
            raise CaseError(f"{file}: cannot be written ({error.strerror})") from None
