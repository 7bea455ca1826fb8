"""Text that breaks pages, spreadsheets, paths, terminals or readers of lines."""

from .base import case, good_readings, good_wells, inputs, plus, renamed, with_columns
from .model import ledger, refused, rows

WELLS = good_wells()
READINGS = good_readings()


def quoted(name: str) -> str:
    """A cell of delimited text."""
    return '"' + name.replace('"', '""') + '"'


def called(name: str, why: str, hostile: str, **more):
    """A case in which N03 has another name, in both files."""
    return case(
        name,
        why,
        ledger(values={(hostile, "total_depth_m"): 1340, (hostile, "measured_depth_m"): 670}),
        wells=WELLS.replace("N03", quoted(hostile)),
        readings=READINGS.replace("N03", quoted(hostile)),
        **more,
    )


NAMES = [
    called(
        "text_of_a_script",
        "A name holds a script, which a careless page would run.",
        "<script>alert('N03')</script>",
    ),
    called(
        "text_of_html",
        "A name was pasted from a web page, tags, entities and all.",
        '<b title="x">N03</b>&nbsp;&lt;2&gt;</td></tr></table>',
    ),
    called(
        "text_of_a_formula",
        "A name starts with an equals sign; a spreadsheet would work it out.",
        '=HYPERLINK("http://example.org","N03")',
    ),
    called("text_starting_with_plus", "A prefix of the operator is a plus sign.", "+N03+2"),
    called("text_starting_with_at", "A name is that of a user.", "@SUM(A1:A9)"),
    called("text_starting_with_minus", "A name starts with a dash.", "-2+3"),
    called(
        "text_of_a_path_up",
        "A name looks like a path, so that a file named for it would lie elsewhere.",
        "../../../N03",
    ),
    called(
        "text_with_path_separators",
        "Names of quadrants and blocks have slashes, stars and colons: no file can have them.",
        r"34/8-A\12:*?|x",
    ),
    called("text_with_quotes", "A name has a nickname in quotes.", """O'Hara "Big" 'N03'"""),
    called(
        "text_with_a_line_break",
        "A name was typed over two lines of its cell.",
        "Big Field\nN03",
    ),
    called(
        "text_with_marks_of_direction",
        "A name was typed among right-to-left text, and the marks stayed.",
        "N03\u200f\u202e30N\u202c",
    ),
    called("text_of_emoji", "Somebody marked the best well.", "N03 🔥👍🏽"),
    called(
        "text_of_another_script",
        "Names are written in the letters of the country.",
        "Скважина №3 第三号井 بئر",
    ),
    called(
        "text_of_ten_thousand_letters", "A whole report was pasted into the name.", "N03" * 3334
    ),
    called(
        "text_of_a_template",
        "Marks that templates, shells and printf would fill in.",
        "{{ 7*7 }} ${HOME} $(id) `id` %s %(x)s {0} <%= 1 %>",
    ),
    called(
        "text_of_markdown",
        "Bars, stars and brackets would break a table or make a link.",
        "N03 | **x** | [y](z) `c`",
    ),
    called(
        "text_that_moves_the_cursor",
        "Escape codes of a terminal were copied along with the name.",
        "N03\x1b[2J\x1b[31m\x07",
    ),
    called(
        "text_with_other_line_separators",
        "Form feeds and the separators of other systems stand inside a name.",
        "N03\x0b\x0c\x1c\x85\u2028x",
    ),
    called("text_starting_with_a_hash", "A name starts like a comment.", "#3"),
    called("text_of_a_truth_value", "A name is a word that YAML reads as something else.", "no"),
    called("text_of_an_exponent", "A name looks like a number with an exponent.", "12E5"),
    called("text_of_a_date", "A name looks like a date.", "3-12"),
]

LONG = "7" * 10_000

PLACES = [
    case(
        "text_of_nul_bytes_in_a_number",
        "A disk fault put NUL bytes into a temperature.",
        ledger({("readings", "not_a_number", 34): 1}),
        readings=plus(READINGS, "N15,2500,84\x00\x00,equilibrium,,"),
    ),
    case(
        "text_of_nul_bytes_at_the_end",
        "The machine lost its power, and the file was filled up with NUL bytes.",
        ledger({("readings", "wrong_number_of_cells", 34): 1}),
        readings=READINGS.encode() + bytes(4096),
    ),
    case(
        "text_of_nul_bytes_in_a_name",
        "A database of fixed fields pads its names with NUL bytes.",
        ledger(values={("N03", "total_depth_m"): 1340}),
        wells=WELLS.replace("N03", "N03\x00\x00\x00"),
        readings=READINGS.replace("N03", "N03\x00\x00\x00"),
    ),
    case(
        "text_of_ten_thousand_digits",
        "A key was held down in a column of numbers.",
        ledger(rows("readings", "not_a_number|temperature_impossible|depth_impossible", 34, 2)),
        readings=plus(READINGS, f"N15,2500,{LONG},,,", f"N15,{LONG},84.9,,,"),
    ),
    case(
        "text_of_markup_where_a_number_belongs",
        "A refused cell is shown in the report: there it must do no harm.",
        ledger(rows("readings", "not_a_number", 34, 3)),
        readings=plus(
            READINGS,
            "N15,2500,<img src=x onerror=alert(1)>,,,",
            "N15,2500,=1+1,,,",
            "N15,2500,@SUM(A1),,,",
        ),
    ),
    case(
        "text_of_a_script_among_unknown_wells_and_kinds",
        "Refused rows carry hostile names into the ledger.",
        ledger({("readings", "unknown_well", 34): 1, ("readings", "unknown_kind", 35): 1}),
        readings=plus(
            READINGS, "<script>x()</script>,2500,84.9,,,", "N15,2500,84.9,=cmd|' /C x'!A1,,"
        ),
    ),
    case(
        "text_hostile_in_a_log_run",
        "The name of a run holds tags, and is shown with the reading.",
        ledger(readings=33),
        readings=plus(
            with_columns(READINGS, "log_run"), 'N15,2500,78,bht,10,4,"</td><script>x()</script>"'
        ),
    ),
    case(
        "text_hostile_in_a_header",
        "The header the config wants is missing, and a hostile one stands in its place.",
        refused("readings.csv", "temperature"),
        readings=renamed(READINGS, {"temperature": '"temp\x1b[31m\nerature<b>"'}),
    ),
    case(
        "text_hostile_in_a_header_of_ten_thousand_letters",
        "A whole report was pasted above one column.",
        refused("readings.csv", "temperature"),
        readings=renamed(READINGS, {"temperature": "temperature " * 900}),
    ),
    case(
        "text_hostile_in_the_name_of_the_run",
        "The run's name would put its results outside of their folder.",
        refused("run", "../evil"),
        config={"run": "../evil"},
    ),
    case(
        "text_hostile_in_the_credits",
        "The owner of the data has an ampersand in its name, and tags.",
        ledger(),
        config={"credits": "Smith & Sons <script>x()</script> {{ 7*7 }}"},
    ),
    case(
        "text_hostile_in_the_name_of_a_file",
        "Files are named with blanks, brackets, quotes and letters of all sorts.",
        ledger(),
        files={'a b/it\'s [new] & "good" {x} $y Ø.csv': READINGS},
        config=inputs(readings={"file": 'a b/it\'s [new] & "good" {x} $y Ø.csv'}),
    ),
]

CASES = [*NAMES, *PLACES]
