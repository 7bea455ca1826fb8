"""Text tables as people write them: real lines, any encoding, one bad record at a time."""

import csv

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from basinheat.errors import UserError
from basinheat.readers import csv_lines, headers, look, read_raw
from basinheat.settings.inputs import TableFile


def read(tmp_path, data, wanted=("well", "depth"), **spec):
    path = tmp_path / "table.csv"
    path.write_bytes(data if isinstance(data, bytes) else data.encode())
    return read_raw(path, TableFile(file="table.csv", **spec), wanted)


def notes(table):
    return dict(table.notes)


def test_lines_are_those_of_the_file(tmp_path):
    text = 'well,depth,note\nA,1,"two\nlines"\n\nB,2,\n,,\nC,3,5" casing\n'
    table = read(tmp_path, text)
    assert table.cells["well"].tolist() == ["A", "B", "C"]
    assert table.lines.tolist() == [2, 5, 7]
    assert table.broken == []


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("last", [True, False])
def test_ends_of_lines(tmp_path, end, last):
    text = end.join(["well,depth", "A,1", "B,2"]) + (end if last else "")
    table = read(tmp_path, text)
    assert table.cells["depth"].tolist() == ["1", "2"]
    assert table.lines.tolist() == [2, 3]


def test_plain_and_quoted_tables_read_alike(tmp_path):
    rows = [(f"W {i}", str(i * 1.5), "x;y") for i in range(500)]
    plain = "well,depth,more\n" + "".join(",".join(row) + "\n" for row in rows)
    quoted = "well,depth,more\n" + "".join(",".join(f'"{c}"' for c in row) + "\n" for row in rows)
    first, second = read(tmp_path, plain), read(tmp_path, quoted)
    assert first.cells.equals(second.cells)
    assert (first.lines == second.lines).all()


CELLS = (
    *("A", "", '"q"', '"a,b"', '"a""b"', "1.5", " ", '5"', '"open', 'a"b"c', '""', '"x"y'),
    *(' "z"', "\ufeff", "é", '"', "\u2028", "\xa0"),
)
LINES = st.lists(
    st.one_of(
        st.text(st.sampled_from('aB0 ,;"\t\ufeff\u00e9.'), max_size=12).map(lambda text: [text]),
        st.lists(st.sampled_from(CELLS), min_size=1, max_size=5),
        st.lists(st.sampled_from(CELLS), min_size=3, max_size=3),
    ),
    max_size=20,
)


@settings(deadline=None, max_examples=300)
@given(LINES, st.sampled_from(["\n", "\r\n", "\r"]), st.sampled_from([",", ";", " ", "\t"]))
def test_the_fast_way_and_the_careful_way_read_alike(lines, end, delimiter):
    """The careful way, which judges every line, is the check of the fast one."""
    text = [delimiter.join(line) + end for line in lines]
    text = csv_lines.single_blanks(text) if delimiter == " " else text
    places = [0, 2]
    fast = csv_lines.records(text, 0, delimiter, 3, places)
    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(csv_lines, "_LONGEST_PLAIN", 0)  # then no line is plain
        careful = csv_lines.records(text, 0, delimiter, 3, places)
    assert [column.tolist() for column in fast[0]] == [column.tolist() for column in careful[0]]
    assert fast[1].tolist() == careful[1].tolist()
    assert fast[2] == careful[2]


CELL = st.text(st.characters(exclude_characters="\r\0", exclude_categories=["Cs"]), max_size=8)


@settings(deadline=None, max_examples=200)
@given(st.lists(st.tuples(CELL, CELL, st.integers()), max_size=20))
def test_what_the_csv_library_writes_is_read_back(tmp_path_factory, rows):
    """Python's writer is the outside check; blank rows are none."""
    path = tmp_path_factory.mktemp("csv") / "table.csv"
    with path.open("w", encoding="utf-8", newline="") as file:
        csv.writer(file).writerows([("well", "depth", "more"), *rows])
    table = read_raw(path, TableFile(file=""), ["well", "depth", "more"])
    short = [row for row in rows if sum(cell.count("\n") for cell in row[:2]) < 15]
    if len(short) == len(rows):
        assert table.broken == []
        assert table.cells.to_numpy().tolist() == [[a, b, str(c)] for a, b, c in rows]


def test_titles_above_the_headers_are_passed_over(tmp_path):
    text = "Exported, 1998, by\n\nwell;depth\nA;1\n"
    for spec in ({}, {"delimiter": ";"}, {"skip_lines": 2}):
        table = read(tmp_path, text, **spec)
        assert table.lines.tolist() == [4]
        assert notes(table)["header_line"] == "3"


def test_headers_further_down_than_fifty_lines_are_stated(tmp_path):
    text = "prose\n" * 50 + "well,depth\nA,1\n"
    with pytest.raises(UserError, match="no column"):
        read(tmp_path, text)
    assert read(tmp_path, text, skip_lines=50).lines.tolist() == [52]


@pytest.mark.parametrize(
    ("mark", "name"), [(",", "comma"), (";", "semicolon"), ("\t", "tab"), ("|", "bar")]
)
def test_the_delimiter_is_found(tmp_path, mark, name):
    table = read(tmp_path, f"well{mark}depth\nA{mark}1\n")
    assert table.cells["depth"].tolist() == ["1"]
    assert notes(table)["delimiter"] == name


def test_the_delimiter_is_the_one_that_parts_the_headers_needed(tmp_path):
    text = "well;depth, m;lat, deg, N\nA, 1;5,5;60,1\n"
    table = read(tmp_path, text, ["well", "depth, m"])
    assert table.cells.to_numpy().tolist() == [["A, 1", "5,5"]]


def test_runs_of_blanks(tmp_path):
    text = '  well    depth\n A        1\n "B 2"\t 2  \n\nC 3 4\n'
    table = read(tmp_path, text, delimiter=" ")
    assert table.cells.to_numpy().tolist() == [["A", "1"], ["B 2", "2"]]
    assert table.lines.tolist() == [2, 3]
    assert [(line, code) for line, _, code, _ in table.broken] == [(5, "wrong_number_of_cells")]


def test_headers_of_two_lines(tmp_path):
    table = read(tmp_path, 'well,"Depth\n(ft)"\nA,1\n', ["well", " Depth (ft) "])
    assert table.lines.tolist() == [3]
    assert table.cells.to_numpy().tolist() == [["A", "1"]]


def test_wrong_number_of_cells(tmp_path):
    table = read(tmp_path, "well,depth\nA,1\nB\nC,3,4\nD,4,\n")
    assert table.cells["well"].tolist() == ["A", "D"]
    assert [(line, code) for line, _, code, _ in table.broken] == [
        (3, "wrong_number_of_cells"),
        (4, "wrong_number_of_cells"),
    ]


@pytest.mark.parametrize("rows_after", [0, 1, 500])
def test_an_open_quote_costs_one_record(tmp_path, rows_after):
    rest = "".join(f"W{i},{i}\n" for i in range(rows_after))
    table = read(tmp_path, f'well,depth\n"A,1\n{rest}')
    assert len(table.cells) == rows_after
    assert table.lines.tolist() == list(range(3, 3 + rows_after))
    assert [(line, code) for line, _, code, _ in table.broken] == [(2, "unclosed_quote")]


TEXT = "well,depth\nBrønn Ærø-1,1\nMåløy 2,2\n"


@pytest.mark.parametrize(
    "data",
    [
        *(TEXT.encode(name) for name in ("utf-8", "utf-8-sig", "cp1252", "latin-1", "utf-16")),
        *(TEXT.encode(name) for name in ("utf-16-le", "utf-16-be", "utf-32")),
        b"\xff\xfe" + TEXT.encode("utf-16-le"),
        b"\xfe\xff" + TEXT.encode("utf-16-be"),
        b"\xef\xbb\xbf" + TEXT.encode("cp1252"),
    ],
)
def test_encodings(tmp_path, data):
    assert read(tmp_path, data).cells["well"].tolist() == ["Brønn Ærø-1", "Måløy 2"]


def test_a_large_file_in_utf16_shows_its_headers(tmp_path):
    path = tmp_path / "table.csv"
    path.write_bytes((TEXT + "x,1\n" * 300_000).encode("utf-16"))
    assert headers(path, TableFile(file="")) == ["well", "depth"]


def test_a_stated_encoding_counts(tmp_path):
    """0x91 is æ in code page 850 and a quotation mark in 1252 (the code pages' own tables)."""
    table = read(tmp_path, "well,depth\nSæl,1\n".encode("cp850"), encoding="cp850")
    assert table.cells["well"].tolist() == ["Sæl"]


def test_padding_and_the_end_of_a_dos_file(tmp_path):
    table = read(tmp_path, b"well,depth\nA\0\0,1\n\x1a")
    assert table.cells["depth"].tolist() == ["1"]
    assert table.broken == []


@pytest.mark.parametrize(
    ("data", "words"),
    [
        ("well,dept\nA,1\n", 'no column "depth"'),
        ("well,depth,depth\nA,1,2\n", "2 times"),
        ("", "no headers"),
        ("\n \n", "no headers"),
        ("<!DOCTYPE html>\n<html>well,depth</html>\n", "HTML"),
        (b"PK\x03\x04\x14\x00well,depth", "zip"),
        (b"%PDF-1.4\nwell,depth\n", "PDF"),
        (b"\xd0\xcf\x11\xe0\xa1\xb1", "Office"),
        (b"II*\x00\x08\x00\x00\x00,\n", "NUL"),
    ],
)
def test_faults_of_whole_files(tmp_path, data, words):
    with pytest.raises(UserError, match=words) as caught:
        read(tmp_path, data)
    assert len(caught.value.faults) == 1
    assert "table.csv" in caught.value.faults[0]


@pytest.mark.parametrize("encoding", ["latin-99", "hex", "rot13", "a\0b", "undefined-8"])
def test_encodings_that_are_none(tmp_path, encoding):
    with pytest.raises(UserError, match="not known"):
        read(tmp_path, "well,depth\n", encoding=encoding)


@pytest.mark.parametrize("delimiter", ["::", '"', "\n"])
def test_delimiters_that_are_none(tmp_path, delimiter):
    with pytest.raises(UserError, match="one character"):
        read(tmp_path, "well,depth\n", delimiter=delimiter)


def test_headers(tmp_path):
    path = tmp_path / "table.csv"
    path.write_text("\ufeff well , depth\nA,1\n", encoding="utf-8")
    assert headers(path, TableFile(file="")) == ["well", "depth"]


@pytest.mark.parametrize(("rows", "empty"), [("", True), ("\n,,\n", True), ("A,1\n", False)])
def test_a_file_without_rows(tmp_path, rows, empty):
    path = tmp_path / "table.csv"
    path.write_text(f"well,depth\n{rows}", encoding="utf-8")
    assert look(path, TableFile(file="")).empty is empty


@pytest.mark.parametrize("name", ["table.ods", "table.xls", "table", "log.las"])
def test_other_formats(tmp_path, name):
    with pytest.raises(UserError, match=r"inputs\.las|\.xlsx"):
        headers(tmp_path / name, TableFile(file=""))


def test_a_blank_cell_behind_every_row(tmp_path):
    table = read(tmp_path, "well,depth\n" + "".join(f"W{i},{i},\n" for i in range(50)))
    assert table.cells["depth"].tolist() == [str(i) for i in range(50)]
    assert table.broken == []
    assert np.array_equal(table.lines, np.arange(2, 52))


def test_more_columns_than_the_fast_way_takes(tmp_path):
    names = ["well", "depth", *(f"c{i}" for i in range(950))]
    text = ",".join(names) + "\n" + ",".join(["A", "1", *["x"] * 950]) + "\n"
    assert read(tmp_path, text).cells.to_numpy().tolist() == [["A", "1"]]
    names = names[:890]
    text = ",".join(names) + "\n" + ",".join(["A", "1", *["x"] * 888]) + "\n"
    assert read(tmp_path, text).cells.to_numpy().tolist() == [["A", "1"]]
