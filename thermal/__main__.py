"""`python -m thermal` and the script `thermal`."""

import sys
from io import TextIOWrapper


def main() -> None:
    """Run the command line."""
    from thermal.cli.main import app

    for stream in (sys.stdout, sys.stderr):
        # A terminal that has no ° or µ shows a question mark instead of ending the run.
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="replace")
    app(prog_name="thermal")


if __name__ == "__main__":
    main()
