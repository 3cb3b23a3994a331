"""The command line: arguments in, exit code out; nothing outside this room prints."""

import gc
import os
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import NoReturn

from enclosure_check.cli.codes import ExitCode, UsageError
from enclosure_check.cli.output import PROGRAM, CannotWriteError, all_is_written, say


def run() -> NoReturn:
    """Run one command as a process of its own, and end that."""
    code = main()
    if _may_leave_at_once():
        os._exit(code)  # Python would first take down every module, to no use.
    sys.exit(code)


def _may_leave_at_once() -> bool:
    """Tell whether nothing is left to do as the process ends: all is written, nobody watches."""
    watched = sys.gettrace() or sys.getprofile() or sys.flags.inspect or sys.warnoptions
    return not watched and all_is_written()


def main(argv: Sequence[str] | None = None) -> int:
    """Run one command.

    Parameters
    ----------
    argv
        Arguments without the program's name; those of the process when left out.

    Returns
    -------
    int
        An `ExitCode`.
    """
    try:
        with _quick_start(whole_process=argv is None):
            from enclosure_check.cli.arguments import parser

            arguments = parser().parse_args(argv)
            arguments.whole_process = argv is None
            return int(arguments.run(arguments))
    except SystemExit as ended:  # argparse, after --help, --version or wrong usage
        return ended.code if isinstance(ended.code, int) else int(ExitCode.BAD_INPUT)
    except (CannotWriteError, UsageError) as error:
        say(f"{PROGRAM}: {error}")
        return int(ExitCode.BAD_INPUT)
    except KeyboardInterrupt:
        return int(ExitCode.INTERRUPTED)
    except Exception:
        import traceback

        traceback.print_exc()
        say(f"{PROGRAM}: internal error, no result; the lines above say where")
        return int(ExitCode.INTERNAL_ERROR)


@contextmanager
def _quick_start(whole_process: bool) -> Iterator[None]:
    """Spare what a short run has no use for.

    The cyclic garbage collector would mostly look at modules as they load, and again as the
    process ends. Matrices here are small: threads for linear algebra take longer to start than
    they save. Validation uses no plug-ins of other packages.
    """
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")
    os.environ.setdefault("PYDANTIC_DISABLE_PLUGINS", "__all__")
    enabled = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if whole_process:
            gc.freeze()
        if enabled:
            gc.enable()
