"""The folder of a netlist as a git revision had it, written out: netlist, brief, parts list, includes.

With it comes the configuration that holds for it, and what that names.
"""

from __future__ import annotations

import os
import posixpath
import tomllib
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import cast

from ..found_files import CONFIGURATION, REPOSITORY
from .git import Entry, GitError, Repository

MOST_FILES = 5_000
MOST_BYTES = 200_000_000

LARGEST_BESIDE = 64_000_000
"""Bytes of a file beside the netlist: a larger one is nothing that a netlist includes, and left out."""

_LARGEST_CONFIGURATION = 1_000_000

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
    entries = {entry.path: entry for entry in repository.entries(tree, [folder])}
    entries |= _configured(repository, tree, folder, entries)
    if inside not in entries:
        raise _missing(revision, inside, entries, repository)
    wanted = _wanted(repository, entries, inside)
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


def _configured(
    repository: Repository, tree: str, folder: str, beside: Mapping[str, Entry]
) -> dict[str, Entry]:
    """Return the configuration above the netlist's folder, where that holds, and what it names."""
    above = _above(folder)
    if not above or posixpath.join(folder, CONFIGURATION) in beside:
        return {}
    names = [posixpath.join(one, CONFIGURATION) for one in above]
    found = {entry.path: entry for entry in repository.entries(tree, names)}
    nearest = next((name for name in names if name in found), None)
    if nearest is None or found[nearest].mode == _LINK or found[nearest].size > _LARGEST_CONFIGURATION:
        return {}
    (text,) = repository.contents([found[nearest]])
    named = [posixpath.normpath(posixpath.join(posixpath.dirname(nearest), one)) for one in _texts(text)]
    entries = repository.entries(tree, [nearest, *filter(_is_plain, named)])
    return {entry.path: entry for entry in entries}


def _above(folder: str) -> list[str]:
    """Return the folders above a folder, the nearest first and the repository's top, "", last."""
    found: list[str] = []
    while folder:
        folder = posixpath.dirname(folder)
        found.append(folder)
    return found


def _texts(toml: bytes) -> list[str]:
    """Return every text in a file of TOML, any of which may be a path; none where it cannot be read."""
    try:
        pending: list[object] = [tomllib.loads(toml.decode())]
    except ValueError:  # its reader tells what is wrong
        return []
    found: list[str] = []
    while pending:
        one = pending.pop()
        if isinstance(one, dict):
            pending += cast("dict[str, object]", one).values()
        elif isinstance(one, list):
            pending += cast("list[object]", one)
        elif isinstance(one, str) and "\0" not in one:
            found.append(one)
    return found


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


def _wanted(repository: Repository, entries: Mapping[str, Entry], inside: str) -> dict[str, Entry]:
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
        if entry is not None and _is_plain(path) and (path == inside or entry.size <= LARGEST_BESIDE):
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
    refused = ("", ".", "..", REPOSITORY)
    return not any(step.casefold() in refused or any(sign in step for sign in foreign) for step in steps)


def _bound(files: int, size: int) -> None:
    if files > MOST_FILES or size > MOST_BYTES:
        raise GitError(
            f"the netlist's folder holds more than {MOST_FILES:,} files or {MOST_BYTES:,} bytes",
            "keep the netlist and what it includes in a folder of their own, or check the revision out",
        )


def _write(files: Iterable[tuple[str, bytes]], target: Path) -> None:
    try:
        (target / REPOSITORY).touch()
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
