"""The edge of the program: every error becomes one message and the exit status of the contract.

0 measured; 1 a fault of the program's own; 2 wrong use or bad input; 3 nothing to measure; 4 doubtful (strict).
An interrupt ends with 130, as shells expect (common practice, no source).
"""

from __future__ import annotations

import os
import sys

from ..errors import SwingtrackError

INTERRUPTED = 130
# The matrices here are tall and narrow: threads of the linear algebra cost more than they give (seven times slower
# on two busy cores), and --jobs is the way to use more cores. Read when numpy is first loaded.
ONE_THREAD = ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS")


def run(arguments: list[str] | None = None) -> int:
    """Run one command and return its exit status; no traceback unless --debug is among the arguments."""
    given = list(sys.argv[1:] if arguments is None else arguments)
    debug = "--debug" in given
    if debug:
        given.remove("--debug")
    for name in ONE_THREAD:
        os.environ.setdefault(name, "1")
    from .app import app

    try:
        app(args=given, prog_name="swingtrack", standalone_mode=True)
    except SystemExit as ended:
        return ended.code if isinstance(ended.code, int) else 0
    except SwingtrackError as error:
        if debug:
            raise
        tell(error)
        return error.exit_status
    except KeyboardInterrupt:
        sys.stderr.write("Interrupted; nothing was written.\n")
        return INTERRUPTED
    except BrokenPipeError:  # whoever read our output has gone; that is theirs to say
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except MemoryError:
        sys.stderr.write("Out of memory.\nTry a shorter part of the clip (--from, --to) or a smaller file.\n")
        return 2
    except Exception as error:
        if debug:
            raise
        sys.stderr.write(
            f"A fault of swingtrack's own: {type(error).__name__}: {error}\n"
            "Please run it again with --debug and report what it prints, with the input if you can share it.\n"
        )
        return 1
    return 0


def tell(error: SwingtrackError, *, about: str = "") -> None:
    """Write an error's message to stderr: what was found, what is needed, what to try, a line each."""
    lines = [line for line in (error.found, error.needed, error.try_this) if line]
    if about and lines and about not in lines[0]:
        lines[0] = f"{about}: {lines[0]}"
    text = "\n  ".join(lines)
    # Names and contents of files are not ours: control characters in them must not reach the terminal.
    shown = "".join(sign if sign.isprintable() or sign in "\n " else "?" for sign in text)
    sys.stderr.write(shown + "\n")
