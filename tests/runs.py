"""Real runs of a small invented basin, for the tests of the workflow."""

import hashlib
import os
import re
import shutil
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).parents[1]
RUN = "small"


def copy_project(folder):
    """Copy what a run needs of the project, so that a test may edit it; return its root."""
    root = Path(folder) / "project"
    ignored = shutil.ignore_patterns("__pycache__", "*.part")
    for name in ("workflow", "scripts", "config"):
        shutil.copytree(ROOT / name, root / name, ignore=ignored)
    (root / "envs").mkdir()
    for name in ("Snakefile", "envs/environment.yaml"):
        shutil.copy(ROOT / name, root / name)
    return root


def write_basin(folder):
    """Write a small basin and its config into a folder; return the config's path."""
    from basinheat.synthetic import make_basin

    basin = make_basin(seed=11, n_wells=40)
    return basin.write(folder, run=RUN, cell_size_m=10_000, depths_m=(1000,), isotherms_degc=(60,))


def command(root, *arguments):
    """Return the command of a run."""
    snakefile = str(Path(root) / "Snakefile")
    return [sys.executable, "-m", "snakemake", "--snakefile", snakefile, *map(str, arguments)]


def environment(root, **changes):
    """Return the environment variables that envs/run sets, and changes."""
    profile = str(Path(root) / "workflow" / "profiles" / "default")
    return {**os.environ, "SNAKEMAKE_PROFILE": profile, **changes}


def snakemake(root, folder, *arguments, **changes):
    """Run snakemake from a folder; fail with all that it said where it fails."""
    done = subprocess.run(
        command(root, *arguments),
        cwd=folder,
        env=environment(root, **changes),
        capture_output=True,
        text=True,
        timeout=900,
    )
    said = done.stdout + done.stderr
    assert done.returncode == 0, said
    return said


def planned(said):
    """Return the rules that a dry run would run."""
    if "Nothing to be done" in said:
        return set()
    table = re.search(r"^Job stats:\n(.*?)^total", said, re.M | re.S)[1]
    return set(re.findall(r"^(\w+) +\d+$", table, re.M)) - {"all"}


def digests(folder):
    """Return the SHA-256 of every file below a folder, by its relative path."""
    return {
        path.relative_to(folder).as_posix(): hashlib.sha256(path.read_bytes()).hexdigest()
        for path in sorted(Path(folder).rglob("*"))
        if path.is_file()
    }
