"""Files of a git revision, read from its object store: no file of the working tree is looked at.

git is called with lists of arguments, never through a shell, and only to read: no filter, hook, pager or
helper of the repository runs, and nothing is fetched.
"""

from __future__ import annotations

import os
import re
import shutil
import subprocess
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import NamedTuple

_TIMEOUT = 60  # s
_LONGEST_REVISION = 400

_OBJECT = re.compile(rb"[0-9a-f]{40,64}\n")

_ENVIRONMENT = {
    "LC_ALL": "C",
    "GIT_OPTIONAL_LOCKS": "0",
    "GIT_TERMINAL_PROMPT": "0",
    "GIT_NO_LAZY_FETCH": "1",
    "GIT_NO_REPLACE_OBJECTS": "1",
}


class GitError(Exception):
    """What cannot be had from git: `message` is a sentence, `remedy` what to do about it."""

    def __init__(self, message: str, remedy: str) -> None:
        super().__init__(message)
        self.message = message
        self.remedy = remedy


class Entry(NamedTuple):
    """One file of a revision: git's mode ("100644", "120000" for a link), its object, its size, its path."""

    mode: str
    object: str
    size: int
    path: str


@dataclass(frozen=True, slots=True)
class Repository:
    """The repository that a folder belongs to; `prefix` is the folder's path in it, "boards/" or empty."""

    folder: Path
    prefix: str

    @classmethod
    def around(cls, folder: Path) -> Repository:
        """Return the repository around a folder; raise GitError where there is none."""
        try:
            prefix = _run(folder, ["rev-parse", "--show-prefix"])
        except _FailedError as failure:
            dubious = b"dubious ownership" in failure.told
            raise GitError(
                "git does not trust this repository, which belongs to somebody else"
                if dubious
                else "the current folder belongs to no git repository",
                "tell git that the folder is safe"
                if dubious
                else "run pwmlint inside the repository, or name a file",
            ) from None
        return cls(folder, os.fsdecode(prefix).removesuffix("\n"))

    def tree(self, revision: str) -> str:
        """Return the object of a revision's tree; raise GitError for what names no revision."""
        # No revision begins with a hyphen (git-check-ref-format), so none can pass for an option.
        if revision and not revision.startswith("-") and len(revision) <= _LONGEST_REVISION:
            try:
                found = _run(self.folder, ["rev-parse", "--verify", "--quiet", f"{revision}^{{tree}}"])
            except (_FailedError, ValueError):  # ValueError: a NUL character
                found = b""
            if _OBJECT.fullmatch(found):
                return found.decode().strip()
        raise GitError(
            f"the repository has no revision {revision}" if revision else "no revision before the colon",
            "name a commit, branch or tag, such as HEAD~1:board.edf",
        )

    def entries(self, tree: str, paths: Sequence[str]) -> list[Entry]:
        """Return those of `paths` that a tree has, in git's order; of a folder all below it; "" is all."""
        arguments = ["ls-tree", "-r", "-z", "-l", "--full-tree", tree]
        listed = _run(self.folder, arguments if "" in paths else [*arguments, "--", *paths], literal=True)
        entries: list[Entry] = []
        for line in filter(None, listed.split(b"\0")):
            head, _, path = line.partition(b"\t")
            mode, kind, name, size = head.decode().split()
            if kind == "blob":
                entries.append(Entry(mode, name, int(size), os.fsdecode(path)))
        return entries

    def contents(self, entries: Sequence[Entry]) -> list[bytes]:
        """Return the bytes of files, as they were committed."""
        if not entries:
            return []
        names = "".join(f"{entry.object}\n" for entry in entries).encode()
        stream = _run(self.folder, ["cat-file", "--batch"], given=names)
        found: list[bytes] = []
        start = 0
        for _ in entries:
            end = stream.index(b"\n", start) + 1
            words = stream[start:end].split()
            if len(words) != 3:
                raise GitError(
                    "an object of the revision is not at hand",
                    "fetch the whole revision: this copy of the repository is a partial one",
                )
            length = int(words[2])
            found.append(stream[end : end + length])
            start = end + length + 1
        return found


class _FailedError(GitError):
    """git said no; `told` is what it printed."""

    def __init__(self, told: bytes) -> None:
        super().__init__("git cannot read the revision", "look for damage with git fsck")
        self.told = told


def _run(folder: Path, arguments: Sequence[str], *, given: bytes = b"", literal: bool = False) -> bytes:
    """Run git in a folder and return what it prints; raise _FailedError where it says no."""
    program = shutil.which("git")
    if program is None:
        raise GitError("git is not installed", "install git, or check the revision out and name its file")
    options = ["--no-pager", "-c", "protocol.allow=never", *(["--literal-pathspecs"] if literal else [])]
    try:
        done = subprocess.run(
            [program, *options, *arguments],
            cwd=folder,
            env={**os.environ, **_ENVIRONMENT},
            input=given,
            capture_output=True,
            timeout=_TIMEOUT,
            check=False,
        )
    except subprocess.TimeoutExpired:
        raise GitError(
            f"git did not answer within {_TIMEOUT} s", "check the revision out and name its file"
        ) from None
    except OSError as error:
        raise GitError(f"git cannot be run: {error.strerror}", "check the installation of git") from None
    if done.returncode:
        raise _FailedError(done.stderr)
    return done.stdout
