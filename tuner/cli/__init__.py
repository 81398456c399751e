"""Which command was typed, and what is said when it cannot be done?"""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence

from tuner.errors import TunerError

EXIT_OK, EXIT_FAULT, EXIT_INTERRUPTED = 0, 2, 130

PARSER_PREFIX = "Value error, "
"""What the command parser puts before its own words on a choice that there is not."""


def main(arguments: Sequence[str] | None = None) -> None:
    """Run one command line and end the process: 0 done, 2 something the user can mend, 130 interrupted.

    Every fault is one line on standard error, without a traceback.
    """
    sys.exit(run(arguments))


def run(arguments: Sequence[str] | None = None) -> int:
    """Run one command line; gives the exit code."""
    from tuner.cli.app import app

    try:
        code = app(args=None if arguments is None else list(arguments), standalone_mode=False)
        sys.stdout.flush()
        if code == EXIT_INTERRUPTED:  # the command parser turns an interruption into this code
            raise KeyboardInterrupt
        return code if isinstance(code, int) else EXIT_OK
    except TunerError as fault:
        return _fault(fault.text)
    except KeyboardInterrupt:
        print("tuner: interrupted; nothing was left half-written", file=sys.stderr)
        return EXIT_INTERRUPTED
    except BrokenPipeError:  # the reader of a pipe has gone, as `| head` does: no fault of anybody
        return _reader_gone()
    except SystemExit as ending:
        if isinstance(ending.__context__, BrokenPipeError):  # the command parser ends with 1 there
            return _reader_gone()
        raise
    except Exception as fault:
        words = getattr(fault, "format_message", None)
        if words is None:
            raise
        text = " ".join(str(words()).split()).rstrip(".").replace(PARSER_PREFIX, "")
        return _fault(f"{text} (tuner --help lists what there is)")


def _reader_gone() -> int:
    """Send what is still to be written nowhere, so that the interpreter does not stumble on it at its end."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    return EXIT_OK


def _fault(text: str) -> int:
    """One line on standard error."""
    print(f"tuner: {text}", file=sys.stderr)
    return EXIT_FAULT
