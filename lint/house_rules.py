"""A house's own rules: the `.py` files of a folder, loaded as modules that nothing else can import by name.

They are programs. A folder is loaded where the user named it, or said that the file which names it is to be
trusted; see `settings`.
"""

from __future__ import annotations

import hashlib
import linecache
import os
import sys
import traceback
from collections.abc import Iterable, Sequence
from importlib.machinery import ModuleSpec
from importlib.util import module_from_spec
from pathlib import Path
from types import CodeType, ModuleType

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from .rule import Rule, rules_in

_REMEDY = "correct the file, or take it out of the folder"


class HouseRuleError(NetlistError):
    """A file of house rules that cannot be used, or a rule of it that crashed."""


def load_folder(folder: str | Path, known: Iterable[Rule]) -> tuple[Rule, ...]:
    """Return the rules of the `.py` files in a folder, by the file's name, then as written.

    known: the rules that are installed; a house rule must not take the id of one
    Names that begin with "_" or "." are no rule files; `from ._limits import ...` reaches the former.
    Raises HouseRuleError for the first file that cannot be used.
    """
    installed = {one.id: one for one in known}
    found: dict[str, Rule] = {}
    files = _files(Path(folder))
    package = _package(Path(folder))
    for path in files:
        rules = rules_in(_load(path, package))
        if not rules:
            raise _error(path, "there is no rule in this file", "begin the name of a file without rules by _")
        for one in rules:
            other = installed.get(one.id) or found.setdefault(one.id, one)
            if other is not one:  # the same one again is no clash: a file may import it from another
                raise _clash(one, other, path)
    return tuple(found.values())


def is_of_house(one: Rule) -> bool:
    """Tell whether a rule is a house's own, from a folder or from an installed package."""
    return one.function.__module__.partition(".")[0] != __name__.partition(".")[0]


def crash(one: Rule, problem: BaseException, netlist: str) -> HouseRuleError:
    """Return the error to tell where a house rule crashed while it was asked about `netlist`."""
    written = _written(one)
    place = _place(problem, Path(written.file).parent) or written
    return HouseRuleError(
        f"the house rule {one.id} crashed on {netlist}: {_words(problem)}",
        place,
        excerpt=_line(place),
        remedy="correct the rule; the netlist is not reported, for a verdict of it would be missing",
    )


def _files(folder: Path) -> Sequence[Path]:
    """Return the rule files of a folder, in an order that no file system has a say in."""
    try:
        names = sorted(os.listdir(folder))
    except (OSError, ValueError) as problem:
        reason = problem.strerror if isinstance(problem, OSError) else str(problem)
        raise _error(
            folder, f"the folder of house rules cannot be read: {reason}", "check the path"
        ) from None
    files = [folder / name for name in names if name.endswith(".py") and not name.startswith(("_", "."))]
    if not files:
        raise _error(
            folder, "there is no rule file in this folder", "name the folder that holds the .py files"
        )
    return files


def _package(folder: Path) -> str:
    """Return the name of the package that stands for a folder.

    It holds a blank, so no import statement can mean it, and it can hide no module of another name.
    """
    real = str(folder.resolve())
    name = f"house rules {hashlib.sha256(real.encode(errors='surrogateescape')).hexdigest()[:16]}"
    package = ModuleType(name)
    package.__path__ = [real]
    sys.modules[name] = package
    return name


def _load(path: Path, package: str) -> ModuleType:
    """Return the module of a file. It is compiled here: nothing is left beside it, nothing stale is found."""
    name = f"{package}.{path.stem.replace('.', ' ')}"
    module = module_from_spec(ModuleSpec(name, None, origin=str(path)))
    module.__file__ = str(path)
    sys.modules[name] = module
    try:
        exec(compile(path.read_bytes(), str(path), "exec", dont_inherit=True), vars(module))
    except KeyboardInterrupt:
        raise
    except BaseException as problem:  # a script may end the program, which must not look like a passed gate
        del sys.modules[name]
        raise _loading(path, problem) from problem
    return module


def _loading(path: Path, problem: BaseException) -> HouseRuleError:
    """Return the error to tell where a file could not be loaded."""
    if isinstance(problem, SyntaxError) and problem.filename == str(path):
        place = Place(str(path), problem.lineno or 0, problem.offset or 1)
        return HouseRuleError(f"not Python: {problem.msg}", place, excerpt=_line(place), remedy=_REMEDY)
    if isinstance(problem, OSError) and problem.filename == str(path) and not _place(problem, path.parent):
        return _error(path, f"the file cannot be read: {problem.strerror}", "check the permission to read it")
    place = _place(problem, path.parent) or Place(str(path), 0, 0)
    message = f"the file cannot be loaded: {_words(problem)}"
    return HouseRuleError(message, place, excerpt=_line(place), remedy=_REMEDY)


def _clash(one: Rule, other: Rule, path: Path) -> HouseRuleError:
    written = _written(one)
    place = written if written.file == str(path) else Place(str(path), 0, 0)
    return HouseRuleError(
        f"there is a rule {one.id} already, in {_written(other).file}",
        place,
        excerpt=_line(place),
        remedy="give it an id of its own; `pwmlint rules` lists those that are taken",
    )


def _written(one: Rule) -> Place:
    """Return where a rule's function begins, with its decorator."""
    code = getattr(one.function, "__code__", None)
    if not isinstance(code, CodeType):
        return Place(one.function.__module__, 0, 0)
    return Place(code.co_filename, code.co_firstlineno, 1)


def _error(path: Path, message: str, remedy: str) -> HouseRuleError:
    return HouseRuleError(message, Place(str(path), 0, 0), remedy=remedy)


def _words(problem: BaseException) -> str:
    return f"{type(problem).__name__}: {problem}".removesuffix(": ")


def _place(problem: BaseException, folder: Path) -> Place | None:
    """Return the innermost line of the traceback that lies in a file of `folder`."""
    real = folder.resolve()
    for frame in reversed(traceback.extract_tb(problem.__traceback__)):
        if frame.filename.endswith(".py") and Path(frame.filename).resolve().parent == real:
            return Place(frame.filename, frame.lineno or 0, 1)
    return None


def _line(place: Place) -> str:
    linecache.checkcache(place.file)
    return linecache.getline(place.file, place.line).rstrip("\r\n") if place.line else ""
