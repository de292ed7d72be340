"""A cache that can be thrown away: content-addressed, atomic, and absent rather than in the way."""

from __future__ import annotations

import os
import tempfile
import time
from contextlib import suppress
from hashlib import sha256
from pathlib import Path

# Part of every key; raise it when what is stored changes its form.
FORM = "1"

_DAY = 24 * 3600.0


def cache_key(*parts: str) -> str:
    """The key of something that depends on these parts and on nothing else; ("ab", "c") is not ("a", "bc")."""
    digest = sha256(FORM.encode())
    for part in parts:
        data = part.encode("utf-8", "surrogatepass")
        digest.update(b"%d:" % len(data) + data)
    return digest.hexdigest()


class Cache:
    """Bytes by key, in memory and in a folder. A folder that cannot be read or written leaves the memory alone.

    `folder` None keeps everything in memory. Nothing here raises for what a disk does: the caller computes anew.
    """

    def __init__(self, folder: Path | None = None) -> None:
        self._folder = folder
        self._memory: dict[str, bytes] = {}

    def get(self, key: str) -> bytes | None:
        """What was put there; None when it is not there or not whole."""
        if key in self._memory:
            return self._memory[key]
        path = self._path(key)
        if path is None:
            return None
        try:
            data = _opened(path.read_bytes())
        except OSError:
            return None
        if data is not None:
            self._memory[key] = data
            with suppress(OSError):
                # Reading does not renew the access time on most systems; `prune` goes by this.
                if time.time() - path.stat().st_mtime > _DAY:
                    os.utime(path)
        return data

    def put(self, key: str, data: bytes) -> None:
        """Keep this under its key; another process sees the whole of it or nothing."""
        self._memory[key] = data
        path = self._path(key)
        if path is None:
            return
        with suppress(OSError):
            path.parent.mkdir(parents=True, exist_ok=True)
            _write_whole(path, _sealed(data))

    def prune(self, days: float = 90.0) -> int:
        """Remove from the folder what nobody has asked for in so many days; how many there were."""
        if self._folder is None:
            return 0
        oldest, removed = time.time() - days * _DAY, 0
        for path in self._folder.glob("??/*"):
            with suppress(OSError):
                if path.stat().st_mtime < oldest:
                    path.unlink()
                    removed += 1
        return removed

    def _path(self, key: str) -> Path | None:
        return None if self._folder is None else self._folder / key[:2] / key[2:]


def _write_whole(path: Path, data: bytes) -> None:
    handle, name = tempfile.mkstemp(dir=path.parent, prefix=".new-")
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
        os.replace(name, path)
    except OSError:
        with suppress(OSError):
            os.unlink(name)
        raise


def _sealed(data: bytes) -> bytes:
    return sha256(data).digest() + data


def _opened(stored: bytes) -> bytes | None:
    # A full disk or a crash can leave a part of a file; the digest in front tells.
    digest, data = stored[:32], stored[32:]
    return data if sha256(data).digest() == digest else None
