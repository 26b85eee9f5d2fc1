"""`thermal check`."""

from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.changes import Changes, overrides
from thermal.cli.exits import exit_codes, say
from thermal.cli.material import Folder


def check(
    case: Annotated[Path, typer.Argument(help="Case file (TOML).")], changes: Changes = None, materials: Folder = None
) -> None:
    """Check a case without running it: assumptions, skin depths, mesh and field."""
    with exit_codes():
        from thermal.build import build
        from thermal.case import load_case
        from thermal.report.plan import plan_text

        loaded = load_case(case, overrides(changes), materials=materials)
        say(plan_text(build(loaded), loaded))
