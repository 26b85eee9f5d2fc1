"""`python -m thermal` and the script `thermal`."""

import sys
from io import TextIOWrapper


def main() -> None:
    """Run the command line."""
    try:
        _run()
    except KeyboardInterrupt:
        print("interrupted, nothing was written", file=sys.stderr)
        sys.exit(130)
    except OSError as error:
        # Printing failed outside a command, in --help for example.
        from thermal.cli.exits import BAD_INPUT, drop_output

        drop_output()
        print(f"the answer cannot be printed ({error.strerror})", file=sys.stderr)
        sys.exit(BAD_INPUT)


def _run() -> None:
    from thermal.cli.main import app

    for stream in (sys.stdout, sys.stderr):
        # A terminal that has no ° or µ shows a question mark instead of ending the run.
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="replace")
    app(prog_name="thermal")


if __name__ == "__main__":
    main()
