"""Make an invented basin from a seed."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pandas as pd

from basinheat.synthetic import dirt as dirty
from basinheat.synthetic import files, paperwork, readings
from basinheat.synthetic.mud import MudProperties
from basinheat.synthetic.truth import Truth
from basinheat.synthetic.wells import draw_paths, place_wells


@dataclass(frozen=True)
class Basin:
    """An invented basin: its truth, and the papers that reached the office.

    Parameters
    ----------
    truth : Truth
        What is true anywhere.
    mud : MudProperties
        What governed the cooling of the wells.
    wells : pandas.DataFrame
        True wells, one a row: well, field, easting_m, northing_m, ground_elevation_m,
        water_depth_m, datum_elevation_m, depth_m, year, operator.
    sets : pandas.DataFrame
        True temperatures, a row per well and depth: well, kind, depth_m (vertical, below ground
        or sea floor), measured_depth_m (along the hole, below rig floor), temperature_degc
        (formation), surface_temperature_degc, runs, timed, bit_in.
    felt : pandas.DataFrame
        A row per reading, before noise: set (row of sets), run, true times, cooling_k, felt_degc,
        mud_temperature_degc.
    tables : dict of str to pandas.DataFrame
        The CSV files as text: wells, readings, layers, surveys.
    dirt : pandas.DataFrame
        What was done to which row: code, table, well, line (in the file, the header being 1),
        column, value, expected (rejected, merged, noticed or kept).
    """

    truth: Truth
    mud: MudProperties
    wells: pd.DataFrame
    sets: pd.DataFrame
    felt: pd.DataFrame
    tables: dict[str, pd.DataFrame]
    dirt: pd.DataFrame

    def write(self, folder: str | Path, **config: object) -> Path:
        """Write the four CSV files, dirt.csv, topography.tif and a config.yaml that reads them.

        Parameters
        ----------
        folder : path
            Made when absent.
        **config
            Passed on to :func:`basinheat.synthetic.files.config_text`.

        Returns
        -------
        pathlib.Path
            The config file.
        """
        files.write(self.tables, self.dirt, Path(folder))
        files.write_topography(self.truth.geography, Path(folder))
        path = Path(folder) / "config.yaml"
        path.write_text(files.config_text(**config), encoding="utf-8")
        return path


def make_basin(
    seed: int,
    n_wells: int = 300,
    hard: bool = True,
    dirt: bool = True,
    truth: Truth | None = None,
    mud: MudProperties | None = None,
) -> Basin:
    """Make an invented basin.

    Parameters
    ----------
    seed : int
        The same seed gives the same basin; `dirt` does not change what is true.
    n_wells : int
        Number of wells, at least 20.
    hard : bool
        Noted times partly wrong, mud cooling common to a well, untimed wells older and cooler,
        tops off by 10 m, some operators rounding to 5 degF. Otherwise none of these.
    dirt : bool
        Spoil some rows (see :mod:`basinheat.synthetic.dirt`).
    truth, mud : Truth, MudProperties, optional
        Put in place of the drawn ones.

    Returns
    -------
    Basin
        The basin.
    """
    if n_wells < 20:
        raise ValueError("n_wells: at least 20")
    names = ("truth", "mud", "wells", "paths", "sets", "felt", "readings", "layers", "dirt")
    streams = np.random.SeedSequence(seed).spawn(len(names))
    rng = {name: np.random.default_rng(s) for name, s in zip(names, streams, strict=True)}
    truth = truth or Truth.draw(rng["truth"])
    mud = mud or MudProperties.draw(rng["mud"])
    wells = place_wells(rng["wells"], n_wells, truth.geography)
    wells["well"] = [f"BW-{i:04d}" for i in range(1, n_wells + 1)]
    paths = draw_paths(rng["paths"], wells)
    sets = readings.plan_sets(rng["sets"], wells)
    sets = readings.true_sets(sets, wells, paths, truth)
    felt = readings.feel(rng["felt"], sets, mud, hard)
    tables = {
        "wells": paperwork.note_wells(wells, paths),
        "readings": paperwork.note_readings(rng["readings"], felt, sets, wells, hard),
        "layers": paperwork.note_layers(rng["layers"], truth, wells, paths, hard),
        "surveys": paperwork.note_surveys(wells, paths),
    }
    spoiled = dirty.nothing()
    if dirt:
        tables, spoiled = dirty.spoil(rng["dirt"], tables)
    return Basin(
        truth=truth,
        mud=mud,
        wells=wells,
        sets=sets.assign(well=wells["well"].to_numpy()[sets.well]),
        felt=felt,
        tables=tables,
        dirt=spoiled,
    )
