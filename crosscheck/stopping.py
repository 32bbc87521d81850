"""Ctrl-C while native code computes: Python itself would hear of it only when that returns."""

from __future__ import annotations

import os
import signal
import socket
import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager

from crosscheck.exit_status import ExitStatus

# Time for an orderly end before the process is ended as it is [s]. Files are written whole or not at all.
GRACE = 1.0


@contextmanager
def prompt_stop() -> Iterator[None]:
    """Ends the process soon after Ctrl-C, whatever runs; orderly where that comes within GRACE.

    Nothing is done in other threads than the main one, nor where somebody else handles the signal.
    """
    usual = signal.getsignal(signal.SIGINT) is signal.default_int_handler
    if threading.current_thread() is not threading.main_thread() or not usual:
        yield
        return
    ours, signals = socket.socketpair()
    signals.setblocking(False)
    over = threading.Event()
    before = signal.set_wakeup_fd(signals.fileno(), warn_on_full_buffer=False)
    watch = threading.Thread(target=_watch, args=(ours, over), daemon=True)
    watch.start()
    try:
        yield
    finally:
        over.set()
        signal.set_wakeup_fd(before)
        signals.close()
        watch.join(GRACE)
        ours.close()


def _watch(ours: socket.socket, over: threading.Event) -> None:
    """Wait for the signal, then for the orderly end."""
    while received := ours.recv(64):
        if signal.SIGINT in received and not over.wait(GRACE):
            if sys.stderr.isatty():
                # a progress bar hides the cursor
                os.write(2, b"\x1b[?25h")
            os.write(2, b"crosscheck: stopped\n")
            os._exit(ExitStatus.INTERRUPTED)
