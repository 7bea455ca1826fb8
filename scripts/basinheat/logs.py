"""How a job speaks: messages to its log, a user's fault as plain lines, one BLAS thread."""

from __future__ import annotations

import logging
import os
import sys
import traceback
from pathlib import Path
from types import TracebackType

from threadpoolctl import threadpool_limits

from basinheat.errors import UserError


def log_to(path: str | Path) -> None:
    """Send messages and warnings to a log, and end on an error without a traceback on screen.

    A UserError ends the job with its lines, on the screen and in the log. Any other error leaves
    its traceback in the log and one line on the screen.

    Sums over several BLAS threads differ in their last bits with the number of threads, so the
    number is set to one for every job: results must not depend on the cores of a machine.

    Parameters
    ----------
    path : str or Path
        Log file, written anew.
    """
    Path(path).parent.mkdir(parents=True, exist_ok=True)
    logging.basicConfig(
        level=logging.INFO,
        format="%(levelname)s %(message)s",
        handlers=[logging.FileHandler(path, mode="w", encoding="utf-8")],
        force=True,
    )
    logging.captureWarnings(True)
    sys.excepthook = _end
    _one_blas_thread()


def _end(kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
    """Write the error where it belongs (Python ends with exit code 1 afterwards)."""
    if isinstance(error, UserError):
        logging.error("%s", error)
        print(error, file=sys.stderr)
        return
    logging.error("%s", "".join(traceback.format_exception(kind, error, trace)))
    print(f"{kind.__name__}: {error} (traceback in the log)", file=sys.stderr)


def _one_blas_thread() -> None:
    """Limit the libraries that are loaded, and through the environment those loaded later."""
    for name in ("OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS", "OMP_NUM_THREADS"):
        os.environ[name] = "1"
    threadpool_limits(limits=1, user_api="blas")
