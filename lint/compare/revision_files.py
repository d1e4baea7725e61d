"""The folder of a netlist as a git revision had it, written out: netlist, brief, parts list, includes."""

from __future__ import annotations

import os
import posixpath
from collections.abc import Iterable, Mapping
from pathlib import Path

from .git import Entry, GitError, Repository

MOST_FILES = 5_000
MOST_BYTES = 200_000_000

LARGEST_BESIDE = 64_000_000
"""Bytes of a file beside the netlist: a larger one is nothing that a netlist includes, and left out."""

_LINK = "120000"
_LONGEST_LINK = 4096
_MOST_LINKS = 40

# How files begin that stand for a larger one, which is kept elsewhere.
_POINTER = b"version https://git-lfs"


def write_folder(revision: str, path: str, target: Path) -> Path:
    """Write the folder of `path`, as `revision` had it, below `target`; return where the netlist is.

    `path` counts from the top of the repository, as git has it, or from the current folder where it begins
    with `./` or `../`. Every file keeps its path in the repository. Raises GitError.
    """
    repository = Repository.around(Path.cwd())
    tree = repository.tree(revision)
    inside = _inside(path, repository.prefix)
    folder = posixpath.dirname(inside)
    entries = {entry.path: entry for entry in repository.entries(tree, folder)}
    if inside not in entries:
        raise _missing(revision, inside, entries, repository)
    wanted = _wanted(repository, entries, folder, inside)
    if inside not in wanted:
        raise GitError(f"{inside} is a link that leads out of its folder", "name the file that it leads to")
    objects = {entry.object: entry for entry in wanted.values()}
    contents = dict(zip(objects, repository.contents(list(objects.values())), strict=True))
    if contents[wanted[inside].object].startswith(_POINTER):
        raise GitError(
            f"{inside} is kept outside the repository, which holds a pointer to it only",
            "check the revision out with its large files, and name the file",
        )
    _write(((path, contents[entry.object]) for path, entry in wanted.items()), target)
    return target / inside


def _inside(path: str, prefix: str) -> str:
    """Return a path from the top of the repository."""
    if os.sep == "\\":
        path = path.replace("\\", "/")
    relative = path.startswith(("./", "../"))
    found = posixpath.normpath(posixpath.join(prefix if relative else "", path))
    if not path or path.endswith("/") or posixpath.isabs(found) or found.split("/")[0] in ("..", "."):
        raise GitError(
            f"{path} is no file inside the repository" if path else "no path after the colon",
            "name the file by its path from the top of the repository, or from here with ./",
        )
    return found


def _missing(revision: str, inside: str, entries: Mapping[str, Entry], repository: Repository) -> GitError:
    if any(path.startswith(f"{inside}/") for path in entries):
        return GitError(f"{inside} is a folder in revision {revision}", "name the netlist in it")
    hint = f"; from the current folder it reads {revision}:./{posixpath.basename(inside)}"
    return GitError(
        f"revision {revision} has no file {inside}",
        "name the file by its path from the top of the repository" + (hint if repository.prefix else ""),
    )


def _wanted(
    repository: Repository, entries: Mapping[str, Entry], folder: str, inside: str
) -> dict[str, Entry]:
    """Return what to write, links replaced by what they lead to; those that lead out are left out."""
    links = [one for one in entries.values() if one.mode == _LINK and one.size <= _LONGEST_LINK]
    _bound(len(entries), sum(one.size for one in links))
    leads = {
        one.path: posixpath.normpath(posixpath.join(posixpath.dirname(one.path), os.fsdecode(text)))
        for one, text in zip(links, repository.contents(links), strict=True)
    }
    wanted: dict[str, Entry] = {}
    for path in entries:
        entry = _followed(path, entries, leads)
        if entry is None or not _is_plain(path) or not path.startswith(f"{folder}/" if folder else ""):
            continue
        if path == inside or entry.size <= LARGEST_BESIDE:
            wanted[path] = entry
    _bound(len(wanted), sum(entry.size for entry in wanted.values()))
    return wanted


def _followed(path: str, entries: Mapping[str, Entry], leads: Mapping[str, str]) -> Entry | None:
    """Return the file that a path leads to, None where a link leads out of the folder or in a ring."""
    for _ in range(_MOST_LINKS):
        entry = entries.get(path)
        if entry is None or entry.mode != _LINK:
            return entry
        path = leads.get(path, "")
    return None


def _is_plain(path: str) -> bool:
    """Tell whether each step of a path is a name: a tree made by hand may hold anything."""
    steps = path.split("/")
    foreign = ("\\", ":") if os.name == "nt" else ()
    return not any(step in ("", ".", "..") or any(sign in step for sign in foreign) for step in steps)


def _bound(files: int, size: int) -> None:
    if files > MOST_FILES or size > MOST_BYTES:
        raise GitError(
            f"the netlist's folder holds more than {MOST_FILES:,} files or {MOST_BYTES:,} bytes",
            "keep the netlist and what it includes in a folder of their own, or check the revision out",
        )


def _write(files: Iterable[tuple[str, bytes]], target: Path) -> None:
    try:
        for path, content in files:
            place = target / path
            place.parent.mkdir(parents=True, exist_ok=True)
            with place.open("xb") as stream:
                stream.write(content)
    except (OSError, ValueError) as error:
        reason = (error.strerror if isinstance(error, OSError) else None) or str(error)
        raise GitError(
            f"the revision cannot be written to a temporary folder: {reason}",
            "check the room for temporary files, or check the revision out and name its file",
        ) from None
