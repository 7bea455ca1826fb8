"""Maps written band after band, read back as a user would."""

import numpy as np
import pytest
import rasterio

from basinheat.delivery.bands import write_bands
from basinheat.geostat.bands import predict_bands
from basinheat.geostat.engine_tiles import TileKriging
from basinheat.geostat.models import Covariance
from basinheat.grid import Grid

GRID = Grid("EPSG:32631", 4e5, 6.1e6, 500.0, 150, 211)


@pytest.fixture(scope="module")
def engine():
    rng = np.random.default_rng(0)
    xy = rng.uniform(0, 1e5, (200, 2)) + np.array([4e5, 6e6])
    kriging = TileKriging(xy, Covariance("exponential", 25.0, 4e4, 1.0), 2.0)
    return kriging.solve(rng.normal(60, 8, 200))


def test_the_rasters_hold_the_map(engine, tmp_path):
    paths = tmp_path / "value.tif", tmp_path / "std.tif"
    write_bands(predict_bands(engine, *GRID.centres), GRID, *paths)
    assert sorted(tmp_path.iterdir()) == sorted(paths)
    east, north = GRID.centres
    told = engine.predict(np.dstack(np.meshgrid(east, north)).reshape(-1, 2), apart_m=500.0)
    for path, expected in zip(paths, (told.mean, np.sqrt(told.variance)), strict=True):
        with rasterio.open(path) as file:
            assert file.crs.to_epsg() == 32631
            assert tuple(file.bounds) == GRID.bounds
            np.testing.assert_allclose(file.read(1).ravel(), expected, rtol=1e-6)
            place = file.xy(3, 7)
        assert place == (east[7], north[3])


def test_what_breaks_off_leaves_no_raster(engine, tmp_path):
    def broken():
        yield next(predict_bands(engine, *GRID.centres))
        raise RuntimeError

    with pytest.raises(RuntimeError):
        write_bands(broken(), GRID, tmp_path / "value.tif", tmp_path / "std.tif")
    assert not list(tmp_path.glob("*.tif"))


def test_bands_hold_a_part_of_the_map_at_a_time(engine):
    rows = [len(band.mean) // GRID.cols for _, band in predict_bands(engine, *GRID.centres)]
    assert rows == [128, 22]
