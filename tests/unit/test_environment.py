"""The files of ``envs`` agree with one another and install nothing unchecked."""

import ast
import re
import sys
from importlib.metadata import packages_distributions
from pathlib import Path

import pytest
import yaml

ROOT = Path(__file__).parents[2]
ENVS = ROOT / "envs"
LOCKS = ("build", "requirements", "dev", "cluster")
EXTRAS = ("dev", "cluster")


def wanted(name: str) -> set[str]:
    """Names of the packages that an ``.in`` file asks for."""
    lines = (ENVS / f"{name}.in").read_text().splitlines()
    found = (re.match(r"[a-z][a-z0-9-]*", line) for line in lines)
    return {match.group() for match in found if match}


def blocks(name: str) -> list[str]:
    """Each requirement of a lock with its hashes, on one line, without comments."""
    text = (ENVS / f"{name}.lock").read_text()
    text = re.sub(r"^ *#.*\n", "", text, flags=re.MULTILINE)
    return [line for line in text.replace("\\\n", "").splitlines() if line.strip()]


def pins(name: str) -> dict[str, str]:
    """Version by package of a lock."""
    return dict(re.match(r"([a-z0-9-]+)==([^ ;]+)", block).groups() for block in blocks(name))


def test_conda_users_get_the_packages_and_versions_of_the_lock():
    environment = yaml.safe_load((ENVS / "environment.yaml").read_text())
    python, *packages = environment["dependencies"]
    assert python == "python >=3.11,<3.14"
    locked = pins("requirements")
    assert packages == [f"{name} ={locked[name]}" for name in in_order()]


def in_order() -> list[str]:
    """Names of requirements.in as they stand there, so that the two files read alike."""
    lines = (ENVS / "requirements.in").read_text().splitlines()
    return [line.split()[0] for line in lines if line and not line.startswith("#")]


@pytest.mark.parametrize("name", LOCKS)
def test_each_lock_holds_what_is_asked_for(name):
    assert wanted(name)
    assert wanted(name) <= pins(name).keys()


@pytest.mark.parametrize("name", LOCKS)
def test_each_line_of_a_lock_has_a_version_and_a_hash(name):
    for block in blocks(name):
        assert re.fullmatch(r"[a-z0-9-]+==\S+( ; .*?)?( +--hash=sha256:[0-9a-f]{64})+ *", block)


@pytest.mark.parametrize("name", LOCKS)
def test_a_lock_holds_one_version_of_each_package(name):
    assert len(blocks(name)) == len(pins(name))


@pytest.mark.parametrize("name", EXTRAS)
def test_an_extra_lock_changes_no_version(name):
    base, extra = pins("requirements"), pins(name)
    common = base.keys() & extra.keys()
    assert common
    assert {name: extra[name] for name in common} == {name: base[name] for name in common}


def test_what_the_library_imports_is_asked_for():
    imported: set[str] = set()
    for path in (ROOT / "scripts").rglob("*.py"):
        for node in ast.walk(ast.parse(path.read_text())):
            if isinstance(node, ast.Import):
                imported |= {alias.name.split(".")[0] for alias in node.names}
            elif isinstance(node, ast.ImportFrom) and node.module and not node.level:
                imported.add(node.module.split(".")[0])
    providers = packages_distributions()
    others = imported - sys.stdlib_module_names - {"basinheat"}
    packages = {providers.get(name, [name])[0].lower().replace("_", "-") for name in others}
    assert "numpy" in packages
    assert packages <= wanted("requirements")


def test_the_build_tool_is_in_no_other_lock():
    others = set().union(*(pins(name) for name in LOCKS if name != "build"))
    assert not pins("build").keys() & others


def test_no_file_names_a_registry():
    for path in ENVS.iterdir():
        text = path.read_text()
        assert not re.search(r"https?:|file:|index-url|find-links|trusted-host", text), path.name


def test_executor_plugins_stay_out_of_the_plain_environment():
    assert not [name for name in pins("requirements") if "executor-plugin-" in name]
    assert "snakemake-executor-plugin-slurm" in pins("cluster")
