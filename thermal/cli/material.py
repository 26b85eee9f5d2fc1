"""`thermal material list` and `thermal material show`."""

from pathlib import Path
from typing import Annotated

import typer

from thermal.cli.exits import exit_codes, say

app = typer.Typer(
    help="Materials there are, and where their numbers come from.",
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)

AsJson = Annotated[bool, typer.Option("--json", help="Print JSON.")]


@app.command("list")
def list_materials(as_json: AsJson = False) -> None:
    """List the materials."""
    with exit_codes():
        import json

        from materials import get, names
        from thermal.report.materials import material_entry, material_list_text

        found = [get(name) for name in names()]
        if as_json:
            say(json.dumps([material_entry(each) for each in found], indent=2, ensure_ascii=False) + "\n")
        else:
            say(material_list_text(found))


@app.command()
def show(
    name: Annotated[str, typer.Argument(help="Key or alias of a material, or a file ending in .toml.")],
    as_json: AsJson = False,
) -> None:
    """Show every number of a material with its source."""
    with exit_codes():
        import json

        from materials import get
        from materials.database import load_file
        from thermal.report.materials import material_json, material_text

        material = load_file(Path(name)) if name.endswith(".toml") else get(name)
        if as_json:
            say(json.dumps(material_json(material), indent=2, ensure_ascii=False) + "\n")
        else:
            say(material_text(material))
