"""Text tables as people write them: real lines, any encoding, one bad record at a time."""

import pytest

from basinheat.errors import UserError
from basinheat.readers import headers, read_raw
from basinheat.readers.cells import dates, numbers, words
from basinheat.settings.inputs import TableFile


def read(tmp_path, data, wanted=("well", "depth"), **spec):
    path = tmp_path / "table.csv"
    path.write_bytes(data if isinstance(data, bytes) else data.encode())
    return read_raw(path, TableFile(file="table.csv", **spec), wanted)


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
    """The fast way and the careful way must not differ."""
    rows = [(f"W {i}", str(i * 1.5), "x;y") for i in range(500)]
    plain = "well,depth,more\n" + "".join(",".join(row) + "\n" for row in rows)
    quoted = "well,depth,more\n" + "".join(",".join(f'"{c}"' for c in row) + "\n" for row in rows)
    first, second = read(tmp_path, plain), read(tmp_path, quoted)
    assert first.cells.equals(second.cells)
    assert (first.lines == second.lines).all()


def test_lines_before_the_header(tmp_path):
    table = read(tmp_path, "Exported 1998\n\nwell;depth\nA;1\n", delimiter=";", skip_lines=2)
    assert table.lines.tolist() == [4]


def test_wrong_number_of_cells(tmp_path):
    table = read(tmp_path, "well,depth\nA,1\nB\nC,3,4\nD,4,\n")
    assert table.cells["well"].tolist() == ["A", "D"]
    assert [(line, code) for line, _, code, _ in table.broken] == [
        (3, "wrong_number_of_cells"),
        (4, "wrong_number_of_cells"),
    ]


@pytest.mark.parametrize("rows_after", [1, 500])
def test_an_open_quote_costs_one_record(tmp_path, rows_after):
    rest = "".join(f"W{i},{i}\n" for i in range(rows_after))
    table = read(tmp_path, f'well,depth\n"A,1\n{rest}')
    assert len(table.cells) == rows_after
    assert table.lines.tolist() == list(range(3, 3 + rows_after))
    assert [(line, code) for line, _, code, _ in table.broken] == [(2, "unclosed_quote")]


@pytest.mark.parametrize(
    "encoding", ["utf-8", "utf-8-sig", "cp1252", "latin-1", "utf-16", "utf-16-le-bom"]
)
def test_encodings(tmp_path, encoding):
    text = "well,depth\nBrønn Ærø-1,1\nMåløy 2,2\n"
    data = (
        b"\xff\xfe" + text.encode("utf-16-le")
        if encoding.endswith("bom")
        else text.encode(encoding)
    )
    table = read(tmp_path, data)
    assert table.cells["well"].tolist() == ["Brønn Ærø-1", "Måløy 2"]


def test_a_stated_encoding_counts(tmp_path):
    """0x91 is æ in code page 850 and a quotation mark in 1252 (the code pages' own tables)."""
    table = read(tmp_path, "well,depth\nSæl,1\n".encode("cp850"), encoding="cp850")
    assert table.cells["well"].tolist() == ["Sæl"]


def test_faults_of_whole_files(tmp_path):
    with pytest.raises(UserError, match="no column"):
        read(tmp_path, "well,dept\nA,1\n")
    with pytest.raises(UserError, match="2 times"):
        read(tmp_path, "well,depth,depth\nA,1,2\n")
    with pytest.raises(UserError, match="no headers"):
        read(tmp_path, "")
    with pytest.raises(UserError, match="not known"):
        read(tmp_path, "well,depth\n", encoding="latin-99")
    with pytest.raises(UserError, match="one character"):
        read(tmp_path, "well,depth\n", delimiter="::")


def test_headers(tmp_path):
    path = tmp_path / "table.csv"
    path.write_text("\ufeff well , depth\nA,1\n", encoding="utf-8")
    assert headers(path, TableFile(file="")) == ["well", "depth"]


def series(*cells):
    import pandas as pd

    return pd.Series(list(cells), dtype="str")


def test_missing_words():
    values, wrong = numbers(series("0", "0.00", "7", "-999.2500", "N/A", "?"), ["0", "?"])
    assert values.tolist()[2] == 7.0
    assert [value == value for value in values] == [False, False, True, False, False, False]
    assert not wrong.any()
    assert words(series(" 0012 ", "?"), ["?"]).tolist() == ["0012", ""]


def test_a_comma_is_never_guessed():
    assert numbers(series("1,234"), [])[1].tolist() == [True]
    assert numbers(series("1,234"), [], decimal=",")[0].tolist() == [1.234]
    assert numbers(series("1,234", "1,5"), [], thousands=",")[0].tolist()[0] == 1234.0
    assert numbers(series("1,5"), [], thousands=",")[1].tolist() == [True]
    assert numbers(series("1.234,5"), [], decimal=",", thousands=".")[0].tolist() == [1234.5]


def test_what_is_no_number():
    values, wrong = numbers(series("12m", "inf", "1e400", "\u22125", "1e3"), [])
    assert wrong.tolist() == [True, True, True, False, False]
    assert values.tolist()[3:] == [-5.0, 1000.0]


def test_dates():
    found, wrong = dates(series("1984", "1984-06", "1984-06-04", "04.06.1984", "6/4/84", ""), None)
    assert found.tolist() == ["1984", "1984-06", "1984-06-04", "1984-06-04", "", ""]
    assert wrong.tolist() == [False, False, False, False, True, False]
    assert dates(series("6/4/1984"), "%m/%d/%Y")[0].tolist() == ["1984-06-04"]
