"""`thermal material list`, `show` and `audit`."""

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from thermal.cli.exits import BAD_INPUT, exit_codes, say

if TYPE_CHECKING:
    from materials.finding import Finding
    from materials.library import Library

app = typer.Typer(
    help="Materials, linings and gases there are, and where their numbers come from.",
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)

AsJson = Annotated[bool, typer.Option("--json", help="Print JSON.")]
Folder = Annotated[
    Path | None,
    typer.Option("--materials", metavar="DIR", help="Folder of your own materials (laid out like the shipped data)."),
]


@app.command("list")
def list_materials(as_json: AsJson = False, materials: Folder = None) -> None:
    """List the materials, linings and gases."""
    with exit_codes():
        import json

        from materials.library import Library
        from thermal.report.materials import list_entries, list_text

        library = Library.of(materials)
        if as_json:
            say(json.dumps(list_entries(library), indent=2, ensure_ascii=False) + "\n")
        else:
            say(list_text(library))


@app.command()
def show(
    name: Annotated[str, typer.Argument(help="A key or alias, or a file ending in .toml.")],
    as_json: AsJson = False,
    materials: Folder = None,
) -> None:
    """Show every number of a material, lining or gas with its source."""
    with exit_codes():
        import json

        from materials.database import load_any
        from materials.library import Library
        from thermal.report.materials import item_json, item_text

        library = Library.of(materials)
        item = load_any(Path(name)) if name.endswith(".toml") else library.any(name)
        if as_json:
            say(json.dumps(item_json(item), indent=2, ensure_ascii=False) + "\n")
        else:
            say(item_text(item))


@app.command()
def audit(
    names: Annotated[
        list[str] | None,
        typer.Argument(metavar="[NAME|FILE.toml]...", help="Keys, aliases or files; everything there is if left out."),
    ] = None,
    as_json: AsJson = False,
    materials: Folder = None,
) -> None:
    """Check the data for what cannot be and what is odd; exit code 2 if something fails."""
    with exit_codes():
        import json

        from materials.library import Library
        from thermal.report.materials import audit_entries, audit_text

        library = Library.of(materials)
        findings = [_audited(name, library) for name in names or library.everything()]
        if as_json:
            say(json.dumps(audit_entries(findings), indent=2, ensure_ascii=False) + "\n")
        else:
            say(audit_text(findings))
        if any(each.verdict == "fails" for group in findings for each in group):
            raise typer.Exit(BAD_INPUT)


def _audited(name: str, library: "Library") -> list["Finding"]:
    """Findings about one name or file; a file that is refused is a finding of its own."""
    from materials.audit import audit
    from materials.database import load_any
    from materials.errors import MaterialError, UnknownName
    from materials.finding import Finding

    try:
        return audit(load_any(Path(name)) if name.endswith(".toml") else library.any(name))
    except UnknownName:
        raise
    except MaterialError as error:
        return [Finding(name, "reading", str(error), "a file in the format of the shipped ones", "fails")]
