"""What layers say of their rock beside a lithology: formations, elements, dip, net to gross."""

import numpy as np
import pytest
from ingest_case import codes, prepare


def layers(tmp_path, text, **spec):
    (tmp_path / "l.csv").write_text(text)
    return prepare(tmp_path, inputs={"layers": [{"file": "l.csv", **spec}]})


def test_tops_of_formations_alone_are_enough(tmp_path):
    out = layers(
        tmp_path,
        "well,top,formation\nN00,5,Upper\nN00,505,Lower\nN01,5,Upper\nN01,605,\n",
        shape="tops",
    )
    rows = out.layers[out.layers["well"] == "N00"]
    assert rows["formation"].tolist() == ["Upper", "Lower"]
    assert rows["lithology"].tolist() == ["", ""]
    assert rows["base_m"].tolist()[0] == 500.0
    assert codes(out, table="layers") == ["no_rock"]


def test_heat_is_as_told_else_from_elements_else_from_gamma_ray(tmp_path):
    out = layers(
        tmp_path,
        "well,top,base,lithology,heat_production,uranium,thorium,potassium,density,gamma_ray\n"
        "N00,5,100,shale,3.3,3.1,9.5,2.2,2700,60\n"
        "N00,100,200,shale,,3.1,9.5,2.2,2.4,60\n"
        "N00,200,300,shale,,3.1,9.5,,2.7,60\n"
        "N00,300,400,shale,,,,,,\n"
        "N00,400,500,shale,,3.1,9.5,2.2,,\n",
        units={"density": "g/cm^3"},
    )
    found = out.layers["heat_production_uw_m3"].to_numpy()
    # F4b: 1.475712 at 2400 kg/m3 (Rybach 1976, 1988, from memory); F5_60: 0.93536 (Buecker and
    # Rybach 1996, read); the last density is what is assumed where none is stated
    assert found == pytest.approx([3.3, 1.475712, 0.93536, np.nan, 1.475712], nan_ok=True)
    assert codes(out, table="values") == ["density_dropped"]  # 2700 g/cm3 is none


def test_dip_and_net_to_gross_are_kept_in_their_units(tmp_path):
    out = layers(
        tmp_path,
        "well,top,base,lithology,net_to_gross,dip\n"
        "N00,5,100,sandstone,60,30\nN00,100,200,sandstone,160,95\n",
        units={"net_to_gross": "percent"},
    )
    assert out.layers["net_to_gross"].to_numpy() == pytest.approx([0.6, np.nan], nan_ok=True)
    assert out.layers["dip_deg"].to_numpy() == pytest.approx([30.0, np.nan], nan_ok=True)
    assert codes(out, table="values") == ["dip_dropped", "net_to_gross_dropped"]
