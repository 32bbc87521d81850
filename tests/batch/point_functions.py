"""Functions of points for the tests of batches, importable in worker processes."""

from __future__ import annotations

import ctypes
import os
import time


def square(context, what):
    """Exactly reproducible and cheap."""
    return {"square": what * what, "threads": os.environ["OPENBLAS_NUM_THREADS"], "context": context}


def slow_square(context, what):
    """Slow enough to be interrupted."""
    time.sleep(context)
    return {"square": what * what}


def trouble(context, what):
    """What the word says; a number is squared."""
    if what == "segmentation fault":
        ctypes.string_at(0)
    if what == "hang":
        time.sleep(1000)
    if what == "exception":
        raise ValueError("no such number")
    if what == "not finite":
        return {"square": float("nan")}
    if what == "print":
        os.write(1, b"noise\n")
        return {"square": 0}
    return {"square": what * what}


def own_process(context, what):
    """Number of the process that solved it."""
    return os.getpid()


class NotThere:
    """Cannot be unpickled in a worker."""

    def __reduce__(self):
        return (__import__, ("no_such_module_anywhere",))
