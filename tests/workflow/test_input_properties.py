"""Whatever the files and the config hold: tables whose rows are counted, or lines to act on.

The damage is that of `input_mutations.py`; what must hold stands in `input_promises.py`. The same
examples are drawn each time. `tests/benchmarks/fuzz_inputs.py` draws others for as long as asked.
"""

import tempfile
from dataclasses import replace
from pathlib import Path

import config_mutations
import input_mutations as mutations
import input_promises as promises
import yaml
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

ROOT = Path(__file__).parents[2]


def examples(number):
    """Draw so many examples, the same each time, however slow the machine.

    A failure is shown as drawn: to look for the smallest would take minutes.
    """
    return settings(
        max_examples=number,
        derandomize=True,
        deadline=None,
        database=None,
        phases=[Phase.explicit, Phase.generate],
        suppress_health_check=list(HealthCheck),
    )


def below(data):
    """Return what the generators of damage ask for their choices."""
    return lambda n: data.draw(st.integers(0, n - 1))


def run(inputs):
    """Return what comes of inputs; their folder is called alike each time, as faults name it."""
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        made = promises.outcome(promises.write(inputs, folder), folder)
    return replace(made, faults=[fault.replace(name, "folder") for fault in made.faults])


@examples(16)
@given(st.data())
def test_rows_of_hostile_cells_are_kept_refused_or_merged(data):
    inputs = mutations.well_formed(below(data))
    made = run(inputs)
    if made.prepared is not None:
        promises.conserved(made, inputs.sheets)
        promises.names_are_text(made, inputs.sheets["wells"])


@examples(20)
@given(st.data())
def test_files_damaged_down_to_their_bytes_end_in_tables_or_lines(data):
    run(mutations.malformed(below(data)))


@examples(50)
@given(st.data())
def test_configs_of_any_yaml_end_in_settings_or_lines(data):
    good = data.draw(st.sampled_from([config_mutations.rich_config, demo]))()
    inputs = mutations.good_inputs()
    inputs.raw = config_mutations.bad_yaml(below(data), good)
    run(inputs)


def demo():
    """The demo's config; its files are not there."""
    return yaml.safe_load((ROOT / "config" / "config.yaml").read_text(encoding="utf-8"))


@examples(6)
@given(st.data())
def test_the_same_input_gives_the_same_tables(data):
    inputs = mutations.malformed(below(data))
    promises.same(run(inputs), run(inputs))


@examples(4)
@given(st.data())
def test_the_order_of_columns_changes_nothing(data):
    draw = below(data)
    inputs = mutations.well_formed(draw)
    made = run(inputs)
    for name, sheet in inputs.sheets.items():
        order = mutations.shuffled(draw, list(range(len(sheet.header))))
        inputs.files[f"{name}.csv"] = mutations.with_columns(sheet, order).data()
    promises.same(made, run(inputs))


@examples(4)
@given(st.data())
def test_the_order_of_rows_changes_line_numbers_only(data):
    """Of rows that contradict each other the first counts (config/README.md): none do so here."""
    draw = below(data)
    sheets = mutations.good_sheets()
    for sheet in sheets.values():
        mutations.damage_cells(draw, sheet, columns=[sheet.header.index(numeric(sheet))])
    inputs = mutations.inputs_of(sheets)
    made = run(inputs)
    for sheet in sheets.values():
        sheet.rows = mutations.shuffled(draw, sheet.rows)
    promises.same(made, run(mutations.inputs_of(sheets)), but=["source_line"])


def numeric(sheet):
    """Return a column whose cells do not tell one row from another."""
    names = ("ground_elevation", "since_circulation", "porosity", "azimuth", "gradient", "reason")
    return next(name for name in names if name in sheet.header)


@examples(4)
@given(st.data())
def test_an_empty_form_of_decisions_changes_nothing(data):
    inputs = mutations.well_formed(below(data), without=("decisions",))
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        text = promises.write(inputs, folder)
        made = promises.outcome(text, folder)
        if made.prepared is not None:
            promises.template_is_without_effect(made, text, folder)


def test_undamaged_sheets_lose_no_row():
    """Without damage nearly all rows are kept; else the tests above would prove little."""
    inputs = mutations.good_inputs()
    made = run(inputs)
    assert made.faults == []
    promises.conserved(made, inputs.sheets)
    refused = made.prepared.rejected["table"].value_counts()
    assert refused["decisions"] == len(inputs.sheets["decisions"].rows)
    for name in promises.COUNTED:
        assert refused.get(name, 0) < len(inputs.sheets[name].rows) / 4
