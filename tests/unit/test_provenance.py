"""The digest of the code behind a rule: what changes it and what does not."""

import hashlib
import sys

import pytest

from basinheat import provenance

LIBRARY = {
    "fit.py": '"""Adapter."""\nfrom lib.stages import heat\n\nheat.run()\n',
    "draw.py": "import lib.pictures\n",
    "lib/__init__.py": '"""Library."""\n',
    "lib/stages/__init__.py": "",
    "lib/stages/heat.py": "from lib.numbers import double\n\n\ndef run():\n    double(1)\n",
    "lib/numbers.py": "def double(x):\n    return 2 * x\n",
    "lib/pictures.py": "def draw():\n    from lib import lazy\n\n    lazy.draw()\n",
    "lib/lazy.py": "COLOUR = 'red'\n",
    "lib/typed.py": "KIND = 1\n",
}


@pytest.fixture
def scripts(tmp_path):
    """Return a folder with two scripts and a small library."""
    for name, text in LIBRARY.items():
        path = tmp_path / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")
    return tmp_path


def edited(scripts, name, text):
    """Return the digests of both scripts after a file has been written anew."""
    provenance._module.cache_clear()
    (scripts / name).write_text(text, encoding="utf-8")
    return provenance.code_digest("fit.py", scripts), provenance.code_digest("draw.py", scripts)


def test_the_closure_holds_what_is_imported_and_the_parents(scripts):
    assert provenance.imported("fit.py", scripts) == [
        "fit.py",
        "lib/__init__.py",
        "lib/numbers.py",
        "lib/stages/__init__.py",
        "lib/stages/heat.py",
    ]
    assert "lib/lazy.py" in provenance.imported("draw.py", scripts), (
        "imports inside functions count"
    )


def test_an_edit_changes_the_scripts_that_import_it_and_no_other(scripts):
    fit, draw = edited(scripts, "fit.py", LIBRARY["fit.py"])
    other_fit, same_draw = edited(scripts, "lib/numbers.py", "def double(x):\n    return x + x\n")
    assert other_fit != fit
    assert same_draw == draw


@pytest.mark.parametrize(
    "text",
    [
        "# why\ndef double(x):\n    return 2 * x  # twice\n",
        'def double(x):\n    """Twice."""\n    return 2 * x\n',
        '"""Numbers."""\n\ndef double(x):\n\n    return (2 * x)\n',
    ],
    ids=["comment", "docstring", "layout"],
)
def test_words_change_nothing(scripts, text):
    before = edited(scripts, "fit.py", LIBRARY["fit.py"])
    assert edited(scripts, "lib/numbers.py", text) == before


def test_what_only_a_type_checker_reads_changes_nothing(scripts):
    head = "from typing import TYPE_CHECKING\n"
    body = "def double(x):\n    return 2 * x\n"
    edited(scripts, "lib/numbers.py", head + body)
    guarded = f"{head}if TYPE_CHECKING:\n    from lib.typed import KIND\n{body}"
    edited(scripts, "lib/numbers.py", guarded)
    assert "lib/typed.py" not in provenance.imported("fit.py", scripts)


def test_a_docstring_as_the_whole_body_may_come_and_go(scripts):
    before = edited(scripts, "lib/lazy.py", 'class Fault(Exception):\n    """One."""\n')
    assert edited(scripts, "lib/lazy.py", 'class Fault(Exception):\n    """Two."""\n') == before
    assert edited(scripts, "lib/lazy.py", "class Fault(Exception):\n    pass\n") == before


def test_file_digests_name_no_folder(tmp_path):
    inside, outside = tmp_path / "in" / "a.csv", tmp_path / "b.csv"
    inside.parent.mkdir()
    inside.write_bytes(b"1")
    outside.write_bytes(b"2")
    assert provenance.file_digests([outside, inside], inside.parent) == {
        "a.csv": hashlib.sha256(b"1").hexdigest(),
        "b.csv": hashlib.sha256(b"2").hexdigest(),
    }


def test_every_rule_has_a_digest_of_its_own():
    digests = provenance.code_digests()
    assert len(set(digests.values())) == len(digests) >= 10


def test_versions_name_python_and_the_packages():
    versions = provenance.versions()
    assert versions["python"] == ".".join(map(str, sys.version_info[:3]))
    assert {"numpy", "scipy", "rasterio"} <= set(versions)
