"""The launcher makes its environment once, whole, and stays out of the way.

A stand-in for uv takes the place of the network: it writes down what it is asked to install and
puts commands into the environment that print how they were called. One test uses pip itself.
"""

from __future__ import annotations

import base64
import hashlib
import os
import shutil
import signal
import subprocess
import sys
import time
import zipfile
from pathlib import Path

import pytest

LAUNCHER = Path(__file__).parents[2] / "envs" / "run"
LOCKS = ("build", "requirements", "dev", "cluster")

STAND_IN = r"""#!/bin/sh
[ "$1" = --version ] && exit
while [ "$1" != --python ]; do shift; done
bin=$(dirname "$2")
for lock; do :; done
basename "$lock" .lock >>"$INSTALLED"
touch "$bin/begun"
[ ! -e "$FAIL" ] || exit 1
while [ -e "$HOLD" ]; do sleep 0.02; done
for name in snakemake pytest; do
    printf '#!/bin/sh\nprintf "%%s\\n" "$@"\n' >"$bin/$name"
    chmod +x "$bin/$name"
done
"""


class Project:
    """A root that holds a launcher and small locks, and a folder to call it from."""

    def __init__(self, folder: Path) -> None:
        self.root = folder / "the root"
        self.here = folder / "elsewhere"
        self.commands = folder / "commands"
        self.installed = folder / "installed"
        self.hold = folder / "hold"
        self.fail = folder / "fail"
        for path in (self.root / "envs", self.here, self.commands):
            path.mkdir(parents=True)
        shutil.copy(LAUNCHER, self.root / "envs" / "run")
        for name in LOCKS:
            self.write_lock(name, "# nothing\n")
        self.write_command("uv", STAND_IN)
        self.environ = {
            "PATH": f"{self.commands}:/usr/bin:/bin",
            "HOME": str(folder / "home"),
            "BASINHEAT_PYTHON": sys.executable,
            "INSTALLED": str(self.installed),
            "HOLD": str(self.hold),
            "FAIL": str(self.fail),
        }

    @property
    def venv(self) -> Path:
        return self.root / ".venv"

    @property
    def installs(self) -> list[str]:
        return self.installed.read_text().split() if self.installed.exists() else []

    def write_lock(self, name: str, text: str) -> None:
        (self.root / "envs" / f"{name}.lock").write_text(text)

    def write_command(self, name: str, text: str) -> None:
        path = self.commands / name
        path.write_text(text)
        path.chmod(0o755)

    def start(self, *arguments: str, before: tuple[str, ...] = (), **environ: str):
        return subprocess.Popen(
            [*before, str(self.root / "envs" / "run"), *arguments],
            cwd=self.here,
            env=self.environ | environ,
            stdin=subprocess.DEVNULL,
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
            text=True,
            start_new_session=True,
        )

    def run(self, *arguments: str, status: int = 0, **options) -> str:
        """Standard output of a call that must end with ``status``; else its standard error."""
        process = self.start(*arguments, **options)
        out, err = process.communicate(timeout=60)
        assert process.returncode == status, err
        return out if status == 0 else err


@pytest.fixture
def project(tmp_path: Path) -> Project:
    return Project(tmp_path)


def wait_for(condition) -> None:
    deadline = time.monotonic() + 30
    while not condition():
        assert time.monotonic() < deadline, "waited in vain"
        time.sleep(0.02)


def test_becomes_the_command_in_the_folder_it_was_called_from(project):
    code = "import os, sys; print(sys.prefix, os.getcwd(), *sys.argv[1:], sep='\\n'); sys.exit(0)"
    printed = project.run("python", "-c", code, "two words", "*").splitlines()
    assert printed == [str(project.venv), str(project.here), "two words", "*"]
    assert "7" in project.run("sh", "-c", "echo 7 >&2; exit 7", status=7)


def test_a_link_to_the_launcher_finds_the_root(project):
    link = project.here / "basinheat"
    link.symlink_to(project.root / "envs" / "run")
    subprocess.run([link, "true"], env=project.environ, check=True, capture_output=True)
    assert (project.venv / "basinheat.stamp").exists()


def test_a_complete_environment_is_left_alone(project):
    project.run("true")
    assert project.installs == ["build", "requirements"]
    project.run("true")
    assert project.installs == ["build", "requirements"]


@pytest.mark.parametrize("name", ["requirements", "build"])
def test_a_changed_lock_makes_the_environment_anew(project, name):
    project.run("true")
    (project.venv / "left over").touch()
    project.write_lock(name, "# changed\n")
    project.run("true")
    assert project.installs == ["build", "requirements"] * 2
    assert not (project.venv / "left over").exists()


def test_a_moved_environment_is_made_anew(project):
    project.run("true")
    project.root = project.root.rename(project.root.with_name("moved"))
    assert project.run("python", "-c", "import sys; print(sys.prefix)").strip() == str(project.venv)
    assert project.installs == ["build", "requirements"] * 2


@pytest.mark.parametrize("extra", ["dev", "cluster"])
def test_an_extra_lock_only_adds(project, extra):
    project.run("true")
    (project.venv / "kept").touch()
    project.run(f"--{extra}", "true")
    project.run(f"--{extra}", "true")
    project.run("true")
    assert project.installs == ["build", "requirements", extra]
    project.write_lock(extra, "# changed\n")
    project.run(f"--{extra}", "true")
    assert project.installs == ["build", "requirements", extra, extra]
    assert (project.venv / "kept").exists()


@pytest.mark.parametrize("arguments", [(), ("--dev",)])
def test_a_killed_install_is_redone(project, arguments):
    if arguments:
        project.run("true")
    project.hold.touch()
    before = len(project.installs)
    process = project.start(*arguments, "true")
    wait_for(lambda: len(project.installs) > before)
    wait_for((project.venv / "bin" / "begun").exists)
    os.killpg(process.pid, signal.SIGKILL)
    process.communicate()
    project.hold.unlink()
    (project.venv / "half").touch()
    before = len(project.installs)
    project.run(*arguments, "true")
    assert project.installs[before:] == ["build", "requirements", *(a[2:] for a in arguments)]
    assert not (project.venv / "half").exists()


def test_a_failed_install_is_told_and_redone(project):
    project.fail.touch()
    process = project.start("echo", "ran")
    assert "ran" not in process.communicate(timeout=60)[0]
    assert process.returncode != 0
    project.fail.unlink()
    assert project.run("echo", "ran") == "ran\n"


@pytest.mark.parametrize("kill_the_first", [False, True])
def test_a_second_call_waits_for_the_install_of_the_first(project, kill_the_first):
    project.hold.touch()
    first = project.start("echo", "first")
    wait_for((project.venv / "bin" / "begun").exists)
    second = project.start("echo", "second")
    assert "waiting" in second.stderr.readline()
    if kill_the_first:  # what it started lives on, and must be waited for all the same
        first.kill()
        time.sleep(0.2)
    assert second.poll() is None
    assert project.installs == ["build"]
    project.hold.unlink()
    assert second.communicate(timeout=60)[0] == "second\n"
    assert second.returncode == 0
    assert first.communicate(timeout=60)[0] == ("" if kill_the_first else "first\n")
    assert project.installs == ["build", "requirements"]


def test_the_environment_lies_where_asked(project):
    code = "import sys; print(sys.prefix)"
    elsewhere = project.here / "an environment"
    assert project.run("python", "-c", code, BASINHEAT_VENV="an environment").strip() == str(
        elsewhere
    )
    assert not project.venv.exists()


def test_a_folder_of_someone_else_is_refused_untouched(project):
    (project.here / "precious").touch()
    message = project.run("true", status=1, BASINHEAT_VENV=str(project.here))
    assert "was not made by envs/run" in message
    assert [path.name for path in project.here.iterdir()] == ["precious"]


def test_a_root_that_cannot_be_written_gets_a_cache_folder(project, tmp_path):
    before: tuple[str, ...] = ()
    if os.geteuid() == 0:  # root writes into any folder but one mounted read-only
        script = 'mount --bind -o ro "$0" "$0" && exec "$@"'
        before = ("unshare", "--mount", "sh", "-c", script, str(project.root))
        if not shutil.which("unshare") or subprocess.run([*before, "true"]).returncode:
            pytest.skip("root may not mount a folder read-only here")
    else:
        project.root.chmod(0o555)
    code = "import sys; print(sys.prefix)"
    prefix = Path(project.run("python", "-c", code, before=before, XDG_CACHE_HOME=str(tmp_path)))
    assert prefix.parent == tmp_path / "basinheat"
    assert not project.venv.exists()


def test_a_name_that_is_no_python_is_passed_over(project):
    project.write_command("python3", "#!/bin/sh\necho 'no such version' >&2\nexit 127\n")
    project.write_command("python3.13", "#!/bin/sh\necho Python 3.10.1\n")
    project.write_command("python3.12", f'#!/bin/sh\nexec "{sys.executable}" "$@"\n')
    assert project.run("python", "-c", "print('works')", BASINHEAT_PYTHON="") == "works\n"


@pytest.mark.parametrize("version", ["2.7.18", "3.10.13", "3.14.0"])
def test_another_python_is_refused_in_one_line(project, version):
    project.write_command("other", f"#!/bin/sh\necho Python {version}\n")
    message = project.run("true", status=1, BASINHEAT_PYTHON="other")
    assert message.count("\n") == 1
    assert "3.11" in message
    assert "other" in message
    assert not project.venv.exists()


def test_snakemake_gets_the_snakefile_first(project):
    printed = project.run("snakemake", "--cores", "all", "-s", "mine").splitlines()
    assert printed == [
        *("--snakefile", str(project.root / "Snakefile")),
        *("--cores", "all", "-s", "mine"),
    ]


def test_snakemake_heeds_the_last_snakefile(tmp_path):
    for name in ("ours", "mine"):
        (tmp_path / name).write_text(f"rule {name}:\n    shell: 'true'\n")
    command = ["snakemake", "--snakefile", "ours", "-s", "mine", "--list-rules"]
    environ = {k: v for k, v in os.environ.items() if k != "SNAKEMAKE_PROFILE"}
    called = subprocess.run(
        [sys.executable, "-m", *command],
        cwd=tmp_path,
        env=environ,
        check=True,
        capture_output=True,
        text=True,
    )
    assert called.stdout.split() == ["mine"]


@pytest.mark.parametrize(
    ("arguments", "added"),
    [
        ((), True),
        (("-x", "-k", "here.txt"), True),
        (("here.txt",), False),
        (("-x", "here.txt::test_one"), False),
    ],
)
def test_pytest_gets_the_tests_unless_it_has_a_path(project, arguments, added):
    (project.here / "here.txt").touch()
    printed = project.run("pytest", *arguments).splitlines()
    root = str(project.root)
    assert printed == [
        *("-c", f"{root}/.pytest.ini", "--rootdir", root, *arguments),
        *((f"{root}/tests", f"{root}/scripts/basinheat") if added else ()),
    ]


def test_the_profile_and_the_caches_are_set(project):
    show = (
        "from os import environ as e; print(e['SNAKEMAKE_PROFILE'], e['MPLCONFIGDIR'], sep='\\n')"
    )
    profile, matplotlib = project.run("python", "-c", show).splitlines()
    assert profile == str(project.root / "workflow/profiles/default")
    assert project.venv in Path(matplotlib).parents
    assert project.run("python", "-c", show, SNAKEMAKE_PROFILE="mine").startswith("mine\n")


@pytest.mark.parametrize("arguments", [(), ("--dev",), ("--unknown", "true")])
def test_a_call_that_says_nothing_is_told_the_usage(project, arguments):
    assert "usage" in project.run(*arguments, status=1)
    assert not project.venv.exists()


def test_pip_installs_what_matches_its_hash_and_nothing_else(project, tmp_path):
    if subprocess.run([sys.executable, "-c", "import ensurepip"]).returncode:
        pytest.skip("this Python cannot put pip into an environment")
    project.write_command("uv", "#!/bin/sh\nexit 127\n")  # a uv that does not run is none
    offline = {"PIP_NO_INDEX": "1", "PIP_FIND_LINKS": str(tmp_path), "PIP_CONFIG_FILE": os.devnull}
    project.write_lock("requirements", f"tiny==1.0 --hash=sha256:{write_wheel(tmp_path, '1.0')}\n")
    project.write_lock("dev", f"tiny==2.0 --hash=sha256:{write_wheel(tmp_path, '2.0')[::-1]}\n")
    code = "import tiny; print(tiny.VERSION)"
    assert project.run("python", "-c", code, **offline) == "1.0\n"
    assert "DO NOT MATCH" in project.run("--dev", "true", status=1, **offline)


def write_wheel(folder: Path, version: str) -> str:
    """Write a wheel that holds a module of one line; give its SHA-256."""
    information = f"tiny-{version}.dist-info"
    files = {
        "tiny.py": f"VERSION = {version!r}\n",
        f"{information}/METADATA": f"Metadata-Version: 2.1\nName: tiny\nVersion: {version}\n",
        f"{information}/WHEEL": "Wheel-Version: 1.0\nRoot-Is-Purelib: true\nTag: py3-none-any\n",
    }
    record = ""
    for name, text in files.items():
        digest = base64.urlsafe_b64encode(hashlib.sha256(text.encode()).digest())
        record += f"{name},sha256={digest.decode().rstrip('=')},{len(text)}\n"
    path = folder / f"tiny-{version}-py3-none-any.whl"
    with zipfile.ZipFile(path, "w") as archive:
        for name, text in (files | {f"{information}/RECORD": record}).items():
            archive.writestr(name, text)
    return hashlib.sha256(path.read_bytes()).hexdigest()
