"""What a change runs again: all that it can change, and nothing else."""

import os

import pytest
import yaml
from runs import copy_project, planned, snakemake, write_basin

AFTER_CORRECTION = {
    "correct_temperatures",
    "estimate_resistances",
    "fit_sources",
    "fit_gradients",
    "krige_heat_flow",
    "compare_corrections",
    "krige_conductivity",
    "derive_maps",
    "cross_validate",
    "write_rasters",
    "write_geopackage",
    "write_report",
    "write_well_pages",
    "write_manifest",
}
AFTER_COLUMNS = {
    "write_rasters",
    "write_geopackage",
    "write_report",
    "write_well_pages",
    "write_manifest",
}


class Project:
    """A finished run of a small basin, in a copy of the project that may be edited."""

    def __init__(self, folder):
        self.root = copy_project(folder)
        self.here = folder / "basin"
        self.config = write_basin(self.here)
        self.said = snakemake(self.root, self.here, *self._arguments(), "--cores", 2)

    def _arguments(self):
        return "--configfile", self.config.name

    def would_run(self):
        """Return the rules that would run now."""
        return planned(snakemake(self.root, self.here, *self._arguments(), "--dry-run"))

    def setting(self, section, **values):
        """Change settings of one section (and the order of all keys, which means nothing)."""
        config = yaml.safe_load(self.config.read_text(encoding="utf-8"))
        config[section] = {**config.get(section, {}), **values}
        self.config.write_text(yaml.safe_dump(config), encoding="utf-8")

    def edit(self, module, old, new):
        """Edit a module of the library."""
        path = self.root / "scripts" / "basinheat" / module
        text = path.read_text(encoding="utf-8")
        assert old in text, f"{module} has changed: choose another line to edit"
        path.write_text(text.replace(old, new, 1), encoding="utf-8")


@pytest.fixture(scope="module")
def finished(tmp_path_factory):
    """Return a finished run."""
    return Project(tmp_path_factory.mktemp("reruns"))


@pytest.fixture
def project(finished):
    """Return the finished run, and put back afterwards what the test edits."""
    before = finished.config.read_bytes()
    scripts = finished.root / "scripts"
    files = {path: path.read_bytes() for path in scripts.rglob("*.py")}
    yield finished
    finished.config.write_bytes(before)
    for path, content in files.items():
        if path.read_bytes() != content:
            path.write_bytes(content)


def test_a_run_says_where_its_delivery_is(finished):
    told = finished.said.split("Done. Look at:")[1].split()
    assert {"results/small/wells", "results/small/base/delivery"} <= set(told)
    assert (finished.here / "results/small/base/delivery/manifest.json").is_file()


def test_a_second_run_does_nothing(project):
    assert project.would_run() == set()


def test_another_correction_runs_from_the_correction_on(project):
    project.setting("correction", order=["equilibrium", "harrison1983"])
    assert project.would_run() == AFTER_CORRECTION


def test_another_judgement_changes_no_map(project):
    project.setting("validation", neighbours=5)
    assert project.would_run() == {
        "cross_validate",
        "write_report",
        "write_well_pages",
        "write_manifest",
    }


def test_more_wells_drawn_change_pages_only(project):
    project.setting("report", wells_drawn=5)
    assert project.would_run() == {"write_report", "write_well_pages", "write_manifest"}


def test_a_scenario_adds_its_own_jobs_only(project):
    project.setting("scenarios", cool={"correction": {"reading_std_k": 2.0}})
    assert project.would_run() == AFTER_CORRECTION | {"assign_surface_temperature", "define_grid"}


@pytest.mark.parametrize(
    ("module", "expected"),
    [
        ("gradient.py", {"fit_gradients", "write_geopackage", "write_manifest"}),
        ("products.py", {"derive_maps", "cross_validate"} | AFTER_COLUMNS),
    ],
)
def test_an_edit_runs_what_imports_it_and_what_follows(project, module, expected):
    project.edit(module, "from __future__ import annotations\n", "import math\n\nmath.pi\n")
    assert project.would_run() == expected


def test_an_edit_of_a_data_file_runs_what_reads_it(project):
    catalogues = project.root / "scripts" / "basinheat" / "conductivity" / "catalogues"
    catalogue = catalogues / "beardsmore2001.csv"
    before, stat = catalogue.read_bytes(), catalogue.stat()
    catalogue.write_bytes(before + b"\n")
    try:
        # the first look tells which rocks the catalogue knows
        expected = (AFTER_CORRECTION - {"correct_temperatures"}) | {"look_at_inputs"}
        assert project.would_run() == expected
    finally:
        catalogue.write_bytes(before)
        os.utime(catalogue, ns=(stat.st_atime_ns, stat.st_mtime_ns))


def test_a_comment_runs_nothing(project):
    line = "from __future__ import annotations\n"
    project.edit("products.py", line, f"# A thought.\n{line}")
    project.edit("tables/contract.py", line, f"{line}\n\n# Another one.\n")
    assert project.would_run() == set()


def test_a_touched_input_runs_nothing(project):
    for name in ("readings.csv", "wells.csv", "topography.tif"):
        os.utime(project.here / name)
    assert project.would_run() == set()


def test_a_changed_input_runs_all(project):
    path = project.here / "readings.csv"
    before, stat = path.read_bytes(), path.stat()
    lines = before.splitlines(keepends=True)
    path.write_bytes(b"".join(lines[:-1]))
    try:
        everything = AFTER_CORRECTION | {
            "prepare_wells",
            "look_at_inputs",
            "assign_surface_temperature",
            "define_grid",
        }
        assert project.would_run() == everything
    finally:
        path.write_bytes(before)
        os.utime(path, ns=(stat.st_atime_ns, stat.st_mtime_ns))
