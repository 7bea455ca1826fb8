"""How the code is laid out: three layers, one direction, thin adapters, readable files."""

import ast
import re
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
SCRIPTS = ROOT / "scripts"
LIBRARY = SCRIPTS / "basinheat"
ADAPTERS = sorted(SCRIPTS.glob("*.py"))
MODULES = sorted(LIBRARY.rglob("*.py"))
RULES = sorted((ROOT / "workflow" / "rules").glob("*.smk"))
NUMERICS = [
    path
    for path in MODULES
    if re.fullmatch(
        r"geostat/(?!engine_pykrige|engines).*|heatflow/(joint|points|reduction)\.py|"
        r"corrections/(?!__init__|gather|stage|calibration/stage|judging/(?!regional_line|verdicts)).*|"
        r"rock/(?!beds|resistances).*|"
        r"conductivity/(heat_production|mixing|conditions|porosity)\.py|"
        r"wellpages/(cooling|scale)\.py|(datums|geotherm|rebuild|trajectory)\.py",
        path.relative_to(LIBRARY).as_posix(),
    )
]


def dotted(path):
    """Return the name by which a module is imported."""
    return ".".join(path.relative_to(SCRIPTS).with_suffix("").parts)


def name_of(path):
    """Return how a file is called in the names of tests."""
    return path.relative_to(SCRIPTS).as_posix() if path.is_relative_to(SCRIPTS) else path.name


def imports(path):
    """Return the modules a file imports, and the lines of relative imports."""
    tree = ast.parse(path.read_text(encoding="utf-8"))
    nodes = [node for node in ast.walk(tree) if isinstance(node, ast.Import | ast.ImportFrom)]
    names = {alias.name for node in nodes if isinstance(node, ast.Import) for alias in node.names}
    names |= {node.module for node in nodes if isinstance(node, ast.ImportFrom) and node.module}
    return names, [n.lineno for n in nodes if isinstance(n, ast.ImportFrom) and n.level]


def test_the_numerics_are_found():
    assert len(NUMERICS) >= 50


@pytest.mark.parametrize("path", NUMERICS, ids=name_of)
def test_numerics_know_arrays_only(path):
    known = {"numpy", "scipy", "numba", "threadpoolctl", "basinheat", *sys.stdlib_module_names}
    names, _ = imports(path)
    assert {name.split(".")[0] for name in names} <= known
    ours = {name for name in names if name.startswith("basinheat.")}
    rooms = {dotted(module.parent) for module in NUMERICS}
    assert ours <= {"basinheat.errors", *rooms, *map(dotted, NUMERICS)}


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_the_library_knows_nothing_of_the_workflow(path):
    names, relative = imports(path)
    assert "snakemake" not in {name.split(".")[0] for name in names}
    assert relative == [], "the digest of the code follows absolute imports only"
    tree = ast.parse(path.read_text(encoding="utf-8"))
    assert "snakemake" not in {node.id for node in ast.walk(tree) if isinstance(node, ast.Name)}


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_files_are_read_in_one_sitting(path):
    assert len(path.read_text(encoding="utf-8").splitlines()) <= 400
    assert path.stem not in ("helpers", "utils", "common", "misc")


@pytest.mark.parametrize("path", ADAPTERS, ids=name_of)
def test_adapters_only_read_call_and_write(path):
    text = path.read_text(encoding="utf-8")
    tree = ast.parse(text)
    decisions = (
        ast.If, ast.For, ast.While, ast.Try, ast.With, ast.FunctionDef, ast.ClassDef, ast.Lambda,
        ast.IfExp, ast.comprehension, ast.BinOp,
    )  # fmt: skip
    assert [node.lineno for node in ast.walk(tree) if isinstance(node, decisions)] == []
    statements = [line for line in text.splitlines() if line.strip()]
    assert 6 <= len(statements) <= 40
    assert ast.get_docstring(tree)
    assert len(tree.body) <= 20, "statements, the docstring and the imports among them"


def test_rules_and_adapters_share_their_names():
    named = re.findall(r"^rule (\w+):", "".join(p.read_text("utf-8") for p in RULES), re.M)
    assert sorted(named) == [path.stem for path in ADAPTERS]


@pytest.mark.parametrize("path", RULES, ids=name_of)
def test_every_rule_looks_like_every_other(path):
    text = path.read_text(encoding="utf-8")
    assert text.startswith("# "), "the contract of the file comes first"
    assert all(f"# {word}" in text for word in ("Reads", "Writes", "Settings"))
    for rule in re.split(r"^(?=rule )", text, flags=re.M)[1:]:
        name = re.match(r"rule (\w+):", rule)[1]
        directives = re.findall(r"^    (\w+):", rule, re.M)
        assert directives == [
            *("input", "output", "log", "conda", "threads"),
            *("resources", "params", "message", "script"),
        ]
        assert f"/logs/{name}.log" in rule
        assert f'code_digest("{name}.py")' in rule or "code_digests()" in rule
        assert f"../../scripts/{name}.py" in rule
        assert "mem_mb=" in rule and "runtime=" in rule


def test_sub_packages_export_only_their_own():
    for path in LIBRARY.rglob("__init__.py"):
        package = ".".join(path.parent.relative_to(SCRIPTS).parts)
        names, _ = imports(path)
        foreign = {n for n in names if n.startswith("basinheat") and not n.startswith(package)}
        assert foreign == set(), path
    top = ast.parse((LIBRARY / "__init__.py").read_text(encoding="utf-8"))
    assert len(top.body) == 1 and ast.get_docstring(top)
