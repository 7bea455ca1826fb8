"""What a result was made from: the code, the inputs and the versions."""

from __future__ import annotations

import ast
import functools
import hashlib
import platform
from collections.abc import Iterable
from importlib import metadata
from pathlib import Path

SCRIPTS = Path(__file__).resolve().parents[1]
_PACKAGES = (
    "matplotlib",
    "numba",
    "numpy",
    "pandas",
    "pyarrow",
    "pykrige",
    "pyogrio",
    "pyproj",
    "rasterio",
    "scipy",
    "snakemake",
)
_Documented = ast.Module | ast.ClassDef | ast.FunctionDef | ast.AsyncFunctionDef


def code_digest(script: str, scripts: Path = SCRIPTS) -> str:
    """Return a digest of the code that a script runs: its own and all that it imports from here.

    Comments, docstrings and layout do not count; data files are not seen (they are rule inputs).

    Parameters
    ----------
    script : str
        File name of the script, in the folder of scripts.
    scripts : Path, optional
        Folder of the scripts and of the library.

    Returns
    -------
    str
        16 hexadecimal digits.
    """
    parts = [f"{path} {_module(scripts / path)[0]}" for path in imported(script, scripts)]
    return hashlib.sha256("\n".join(parts).encode()).hexdigest()[:16]


def code_digests(scripts: Path = SCRIPTS) -> dict[str, str]:
    """Return the digest of the code behind every rule, by the rule's name."""
    names = sorted(path.name for path in scripts.glob("*.py"))
    return {name.removesuffix(".py"): code_digest(name, scripts) for name in names}


def imported(script: str, scripts: Path = SCRIPTS) -> list[str]:
    """Return the files that running a script can import from the folder of scripts, sorted.

    Imports inside functions count, and so do the ``__init__`` of every parent package.
    """
    todo, seen = {script}, set()
    while todo:
        path = todo.pop()
        seen.add(path)
        names = _module(scripts / path)[1]
        todo |= {file for name in names for file in _files(name, scripts)} - seen
    return sorted(seen)


def file_digest(path: str | Path) -> str:
    """Return the SHA-256 of a file, in hexadecimal."""
    with open(path, "rb") as file:
        return hashlib.file_digest(file, "sha256").hexdigest()


def file_digests(paths: Iterable[str | Path], folder: str | Path) -> dict[str, str]:
    """Return the SHA-256 of files by their path relative to a folder, sorted by path.

    A file outside the folder goes by its name alone: where it lay is nobody's business.
    """
    digests = {}
    for path in map(Path, paths):
        resolved, root = path.resolve(), Path(folder).resolve()
        inside = resolved.is_relative_to(root)
        name = resolved.relative_to(root).as_posix() if inside else path.name
        digests[name] = file_digest(path)
    return dict(sorted(digests.items()))


def versions() -> dict[str, str]:
    """Return the versions of Python and of the packages that shape the numbers."""
    found = {"python": platform.python_version()}
    for package in _PACKAGES:
        try:
            found[package] = metadata.version(package)
        except metadata.PackageNotFoundError:
            continue
    return found


class _ForTypesOnly(ast.NodeTransformer):
    """Leaves out what only a type checker reads: ``if TYPE_CHECKING:``."""

    def visit_If(self, node: ast.If) -> ast.AST:
        named = isinstance(node.test, ast.Name) and node.test.id == "TYPE_CHECKING"
        return ast.Pass() if named else self.generic_visit(node)


@functools.cache
def _module(path: Path) -> tuple[str, frozenset[str]]:
    """Return the digest of one file and the names it imports."""
    tree = _ForTypesOnly().visit(ast.parse(path.read_text(encoding="utf-8")))
    names: set[str] = set()
    for node in ast.walk(tree):
        if isinstance(node, ast.Import):
            names.update(alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom) and node.module and not node.level:
            names.add(node.module)
            names.update(f"{node.module}.{alias.name}" for alias in node.names)
        if isinstance(node, _Documented) and ast.get_docstring(node, clean=False) is not None:
            node.body = node.body[1:] or [ast.Pass()]
    # Unparsed, since the dump of a tree differs between versions of Python.
    digest = hashlib.sha256(ast.unparse(tree).encode()).hexdigest()
    return digest, frozenset(names)


def _files(name: str, scripts: Path) -> list[str]:
    """Return the files that importing a dotted name runs: its module and the parents' inits."""
    parts = name.split(".")
    found = []
    for count in range(1, len(parts) + 1):
        stem = "/".join(parts[:count])
        candidates = (f"{stem}/__init__.py", f"{stem}.py")
        found += [file for file in candidates if (scripts / file).is_file()]
    return found
