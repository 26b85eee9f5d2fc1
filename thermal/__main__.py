"""`python -m thermal` and the script `thermal`."""

import os
import signal
import sys
from io import TextIOWrapper
from typing import TextIO


def main() -> None:
    """Run the command line."""
    # Being told to end is an interrupt like any other: what there is of a run is kept.
    signal.signal(signal.SIGTERM, signal.default_int_handler)
    try:
        _run()
    except KeyboardInterrupt:
        print("interrupted, nothing was written", file=sys.stderr)
        sys.exit(130)
    except OSError as error:
        # Printing failed outside a command, in --help for example.
        from thermal.cli.exits import BAD_INPUT, drop_output, tell

        drop_output()
        tell(f"the answer cannot be printed ({error.strerror})")
        sys.exit(BAD_INPUT)


def _run() -> None:
    from thermal.cli.main import app

    # A stream that was closed before the start takes everything and shows nothing.
    sys.stdout, sys.stderr = sys.stdout or _nowhere(), sys.stderr or _nowhere()
    for stream in (sys.stdout, sys.stderr):
        # A terminal that has no ° or µ shows a question mark instead of ending the run.
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="replace")
    app(prog_name="thermal")


def _nowhere() -> TextIO:
    return open(os.open(os.devnull, os.O_WRONLY), "w", encoding="utf-8", closefd=False)


if __name__ == "__main__":
    main()
