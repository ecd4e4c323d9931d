"""One writer at a time: `FILE.lock`, held by the system's own lock, so that it dies with its process."""

from __future__ import annotations

import contextlib
import errno
import os
import socket
from pathlib import Path

from gossan.base.errors import ResultError
from gossan.store.disk import beside

try:
    import fcntl
except ModuleNotFoundError:  # not a POSIX system: nothing guards against a second writer there
    fcntl = None  # type: ignore[assignment]

# what file systems without locks answer; there a run goes on unguarded rather than not at all
_NO_LOCKS = {errno.ENOLCK, errno.ENOTSUP, errno.ENOSYS}


class Lock:
    """A held lock on a result file.

    The text of the lock file (process and host) is for people. What counts is the system's lock on it,
    which a killed process cannot leave behind, not even where its number has been given to another.
    """

    def __init__(self, path: Path):
        """Take the lock of the result file at path; ResultError where another process has it."""
        self.path = beside(path, "lock")
        self._handle = self._taken(path)
        os.ftruncate(self._handle, 0)
        os.pwrite(self._handle, f"process {os.getpid()} on {socket.gethostname()}\n".encode(), 0)

    def _taken(self, path: Path) -> int:
        while True:
            handle = os.open(self.path, os.O_RDWR | os.O_CREAT, 0o644)
            try:
                if fcntl is not None:
                    fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
            except OSError as error:
                if error.errno not in _NO_LOCKS:
                    owner = os.pread(handle, 200, 0).decode(errors="replace").strip()
                    os.close(handle)
                    raise ResultError(f"{path} is being written by {owner or 'another process'}: "
                                      "wait until that run ends, or stop it") from None
            # the holder before may have deleted the file between our open and our lock: then ours is nobody's
            with contextlib.suppress(FileNotFoundError):
                if os.fstat(handle).st_ino == os.stat(self.path).st_ino:
                    return handle
            os.close(handle)

    def release(self) -> None:
        """Give the lock back and delete its file."""
        self.path.unlink(missing_ok=True)
        os.close(self._handle)
