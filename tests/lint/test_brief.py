import time
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.errors import NetlistError
from pwmlint.lint.brief import Brief, BriefError, read_brief
from pwmlint.lint.quantity import Spread
from pwmlint.lint.toml_places import TomlPlaces

ORCHARD = """\
# The drive of the frost fans
[design]
name = "orchard frost-fan drive"
ambient = "-10 degC .. 50 degC"
derating = "nasa"

[rails.VBAT]
voltage = "21 V .. 29 V"
[rails."+12V"]
voltage = "12 V"
tolerance = "2 %"
load = "0 A .. 6 A"

[controllers.U1]
topology = "single-ended"
switching_frequency = "45 kHz .. 55 kHz"   # at each switch
dead_time = "1.5 us .. 4 us"
maximum_duty = "45 %"
soft_start = "5 ms .. 50 ms"
current_limit = "6.6 A .. 9 A"
output = "+12V"
pins = [
    "1IN+",
    "1IN-",
]
shut_off_by_dead_time = true
"""

Write = Callable[[str | bytes], Path]


@pytest.fixture
def write(tmp_path: Path) -> Write:
    def _write(text: str | bytes) -> Path:
        path = tmp_path / "fan.brief.toml"
        path.write_bytes(text.encode() if isinstance(text, str) else text)
        return path

    return _write


def refused(path: Path) -> BriefError:
    with pytest.raises(BriefError) as caught:
        read_brief(path)
    return caught.value


def test_a_whole_brief(write: Write) -> None:
    brief = read_brief(write(ORCHARD))
    assert brief.name == "orchard frost-fan drive"
    assert brief.ambient == Spread(-10.0, 20.0, 50.0, "degC")
    assert brief.derating == "nasa"
    assert list(brief.rails) == ["VBAT", "+12V"]
    rail = brief.rails["+12V"]
    assert rail.voltage == Spread.exact(12.0, "V")
    assert rail.tolerance == 0.02
    assert rail.load == Spread(0.0, 3.0, 6.0, "A")
    assert (rail.place.line, rail.place.column) == (9, 2)
    told = brief.controllers["U1"]
    assert told.topology == "single-ended"
    assert told.switching_frequency == Spread(45e3, 50e3, 55e3, "Hz")
    assert told.dead_time == Spread(1.5e-6, 2.75e-6, 4e-6, "s")
    assert told.maximum_duty == Spread.exact(0.45, "")
    assert told.soft_start == Spread(0.005, 0.0275, 0.05, "s")
    assert told.current_limit == Spread(6.6, 7.8, 9.0, "A")
    assert told.output == "+12V"
    assert told.pins == ("1IN+", "1IN-")
    assert told.shut_off_by_dead_time is True
    assert (told.place.line, told.place.column) == (14, 2)


def test_an_empty_brief_says_nothing(write: Write) -> None:
    path = write("")
    assert read_brief(path) == Brief(str(path), "", None, None, {}, {})
    told = read_brief(write("[controllers.U1]\n")).controllers["U1"]
    assert told.topology is None
    assert told.pins is None
    assert told.shut_off_by_dead_time is False


@pytest.mark.parametrize(
    ("voltage", "tolerance", "low", "high"),
    [("12 V", "2 %", 11.76, 12.24), ("-15 .. -12 V", "10 %", -16.5, -10.8), ("5 V", None, 5.0, 5.0)],
)
def test_the_band_of_a_rail(
    write: Write, voltage: str, tolerance: str | None, low: float, high: float
) -> None:
    text = f'[rails.V]\nvoltage = "{voltage}"\n' + (f'tolerance = "{tolerance}"\n' if tolerance else "")
    rail = read_brief(write(text)).rails["V"]
    assert (rail.band.minimum, rail.band.maximum) == pytest.approx((low, high))
    assert rail.band.nominal == rail.voltage.nominal


@pytest.mark.parametrize("circuit", ["mains", "primary", "secondary"])
def test_the_circuit_of_a_rail(write: Write, circuit: str) -> None:
    brief = read_brief(write(f'[rails.L]\nvoltage = "230 V"\ncircuit = "{circuit}"\n'))
    assert brief.rails["L"].circuit == circuit


def test_a_rail_may_be_of_no_circuit(write: Write) -> None:
    assert read_brief(write(ORCHARD)).rails["VBAT"].circuit is None


def test_an_unknown_circuit_is_refused_with_a_suggestion(write: Write) -> None:
    problem = refused(write('[rails.L]\nvoltage = "230 V"\ncircuit = "secundary"\n'))
    assert 'unknown circuit "secundary"' in str(problem)
    assert problem.place[1:] == (3, 11)
    assert problem.expected == "mains, primary or secondary"
    assert problem.remedy == 'did you mean "secondary"?'


def test_tables_may_be_written_inline(write: Write) -> None:
    brief = read_brief(write('rails = { VBAT = { voltage = "24 V" } }\ndesign.name = "cider press"\n'))
    assert brief.rails["VBAT"].voltage.nominal == 24.0
    assert brief.name == "cider press"


@pytest.mark.parametrize(
    ("old", "new", "line", "column", "message", "hint"),
    [
        ("topology", "topolgy", 15, 1, 'unknown key "topolgy" in [controllers.U1]', "topology"),
        ("ambient", "ambeint", 4, 1, 'unknown key "ambeint" in [design]', "ambient"),
        ("load", "Load", 12, 1, 'unknown key "Load"', "load"),
        ("[rails.VBAT]", "[rail.VBAT]", 7, 2, 'unknown key "rail"', "rails"),
        ('"single-ended"', '"push-pul"', 15, 12, 'unknown topology "push-pul"', "push-pull"),
        ('"nasa"', '"nsa"', 5, 12, 'unknown derating "nsa"', "nasa"),
        ('"45 %"', '"4 V"', 18, 17, '"V" is no unit of this quantity', "ratio such as 45 %"),
        ('"1.5 us .. 4 us"', '"1.5 us .. 4 V"', 17, 24, '"V" is no unit', "a time such as 5 ms"),
        ('"45 kHz', '"45 V', 16, 24, '"V" is no unit', "a frequency such as 50 kHz"),
        ('"45 %"', '"145 %"', 18, 16, "out of its range", "at least 0 and at most 1"),
        ('"45 kHz', '"0 Hz', 16, 23, "out of its range", "at least 1 Hz"),
        ('"6.6 A', '"0 A', 20, 17, "out of its range", "at least 1e-09 A"),
        ('"21 V .. 29 V"', '"1e300 V"', 8, 11, "out of its range", "at most 1e+07 V"),
        ('"0 A', '"-1 A', 12, 8, "out of its range", "at least 0 A and at most 1e+07 A"),
        (
            '"2 %"',
            "0.02",
            11,
            13,
            '"tolerance" is not what belongs there',
            'a text with a unit such as "12 V"',
        ),
        ('"2 %"', '"1 .. 2 %"', 11, 13, "is a range", 'a single value such as "2 %"'),
        ('"12 V"\ntol', '"12"\ntol', 10, 12, '"12" has no unit', "a voltage such as 12 V"),
        ('"21 V .. 29 V"', '"29 V .. 21 V"', 8, 12, "backwards", "the lower end first"),
        ("= true", '= "yes"', 26, 25, "not what belongs there", "true or false"),
        ('output = "+12V"', 'output = ""', 21, 10, "is empty", "a text in quotes"),
        ('output = "+12V"', "output = 12", 21, 10, "not what belongs there", "a text in quotes"),
        ('    "1IN-",\n', "    12,\n", 22, 8, "is no list of texts", "1IN+"),
        ('[\n    "1IN+",\n    "1IN-",\n]', "[]", 22, 8, "is no list of texts", "1IN+"),
        ('[\n    "1IN+",\n    "1IN-",\n]', '"1IN+"', 22, 8, "not what belongs there", "a list of texts"),
        ("[rails.VBAT]\nvoltage", "[rails]\nVBAT", 8, 8, "not what belongs there", "a table [rails.VBAT]"),
        ('voltage = "21 V .. 29 V"\n', "", 7, 2, "the rail VBAT has no voltage", 'voltage = "12 V"'),
        (
            'name = "orchard frost-fan drive"',
            "name = 494",
            3,
            8,
            "not what belongs there",
            "a text in quotes",
        ),
    ],
)
def test_mistakes_have_their_place(
    write: Write, old: str, new: str, line: int, column: int, message: str, hint: str
) -> None:
    assert old in ORCHARD
    error = refused(write(ORCHARD.replace(old, new, 1)))
    assert (error.place.line, error.place.column) == (line, column)
    assert message in error.message
    assert hint in error.expected + error.remedy
    assert f":{line}:{column}: " in str(error)
    assert error.excerpt


def test_all_mistakes_are_shown_in_one_run(write: Write) -> None:
    text = ORCHARD.replace('"nasa"', '"nsa"').replace("topology", "topolgy").replace('"2 %"', '"2 V"')
    error = refused(write(text))
    assert [error.place.line, *(other.place.line for other in error.also)] == [5, 11, 15]
    many = "[design]\n" + "".join(f"key{number} = 1\n" for number in range(50))
    assert len(refused(write(many)).also) == 19


@pytest.mark.parametrize(
    ("text", "line", "column", "message"),
    [
        ("voltage = 12 V\n", 1, 14, "not TOML"),
        ('[rails.V]\nvoltage = "12 V', 2, 16, "not TOML"),
        ("pins = [\n", 2, 1, "not TOML"),
        ("[design]\n[design]\n", 2, 8, "not TOML"),
        ("a = " + "9" * 2_000, 1, 1, "a line of 2,004 characters"),
        ("a = " + "[\n" * 3_000, 0, 0, "nested too deeply"),
        ("a." * 3_000 + "b = 1", 1, 1, "a line of"),
    ],
)
def test_what_is_not_toml(write: Write, text: str, line: int, column: int, message: str) -> None:
    error = refused(write(text))
    assert message in error.message
    assert error.place.line == line
    assert error.place.column == pytest.approx(column, abs=1)


def test_files_that_cannot_be_read(write: Write, tmp_path: Path) -> None:
    assert "no such file" in str(refused(tmp_path / "missing.toml"))
    assert "folder" in str(refused(tmp_path))
    assert "larger than 1,000,000 bytes" in str(refused(write("#" * 79 + "\n" * 1_000_000)))
    assert "binary" in str(refused(write(b"\x7fELF\x00\x01\x02")))
    assert "cannot be read" in str(refused(Path("bad\0name.toml")))


def test_a_brief_is_a_kind_of_netlist_error(tmp_path: Path) -> None:
    assert isinstance(refused(tmp_path), NetlistError)


def test_line_ends_and_marks_of_other_systems(write: Write) -> None:
    text = ORCHARD.replace("\n", "\r\n").replace('"2 %"', '"2 V"')
    assert (refused(write(b"\xef\xbb\xbf" + text.encode())).place.line) == 11
    assert read_brief(write(ORCHARD.replace("us", "µs").encode("cp1252"))).controllers["U1"].dead_time


def test_places_of_unusual_toml() -> None:
    text = '''\
top = """
[not.a.table]
key = 1
"""
other = \'\'\'
[nor.this]
\'\'\'
  [ spaced . "quoted.name" ]  # a comment with ] and "
  dotted.'literal key' = { inner = [1, 2] } # ]
list = [
  "a = 1", # "
  [3],
]
after = 1
[[many]]
x = 2
[[ many ]]
y = 1
x = 2
'''
    places = TomlPlaces(text, "f")
    found = {
        path: (places.key(path).line, places.key(path).column, places.value(path).column)
        for path in [
            ("top",),
            ("not",),
            ("nor",),
            ("spaced", "quoted.name"),
            ("spaced", "quoted.name", "dotted", "literal key"),
            ("spaced", "quoted.name", "dotted", "literal key", "inner"),
            ("spaced", "quoted.name", "list"),
            ("spaced", "quoted.name", "a"),
            ("spaced", "quoted.name", "after"),
            ("many", "0", "x"),
            ("many", "1"),
            ("many", "1", "x"),
            ("many", "2", "x"),
        ]
    }
    assert list(found.values()) == [
        (1, 1, 7),
        (1, 1, 1),  # no such key: the file
        (1, 1, 1),
        (8, 5, 5),
        (9, 3, 26),
        (9, 3, 3),  # inside an inline table: where that begins
        (10, 1, 8),
        (8, 5, 5),  # no such key: its table
        (14, 1, 9),
        (16, 1, 5),
        (17, 4, 4),
        (19, 1, 5),
        (15, 3, 3),  # no such table: the first of its kind
    ]


@pytest.mark.parametrize(
    ("text", "line", "column"),
    [
        ('[rails.V]\nvoltage = """12 s"""\n', 2, 11),
        ('rails = { V = { voltage = "12 s" } }\n', 1, 1),
        ("rails.V.voltage = '12 V .. 12 s'\n", 1, 28),
    ],
)
def test_mistakes_in_unusual_toml(write: Write, text: str, line: int, column: int) -> None:
    error = refused(write(text))
    assert (error.place.line, error.place.column) == (line, column)


KEYS = st.sampled_from(["design", "rails", "controllers", "U1", "voltage", "name", "pins", '"+12V"', "x"])
VALUES = st.sampled_from(
    ['"12 V"', '"1 .. 2 V"', "12", "true", "[]", '["a"]', "{}", '"""a\n[b]\n"""', "[\n1\n]"]
)
LINES = st.one_of(
    st.builds("[{}]".format, st.lists(KEYS, min_size=1, max_size=3).map(".".join)),
    st.builds("{} = {}".format, st.lists(KEYS, min_size=1, max_size=2).map(".".join), VALUES),
    st.text(max_size=20),
)


@settings(deadline=None, max_examples=300)
@given(st.lists(LINES, max_size=12).map("\n".join) | st.binary(max_size=60))
def test_no_brief_does_harm(tmp_path_factory: pytest.TempPathFactory, text: str | bytes) -> None:
    path = tmp_path_factory.getbasetemp() / "any.toml"
    path.write_bytes(text if isinstance(text, bytes) else text.encode(errors="replace"))
    try:
        brief = read_brief(path)
    except BriefError as error:
        refusal = error
    else:
        assert brief.file == str(path)
        return
    assert refusal.message
    assert refusal.place.file == str(path)


@pytest.mark.parametrize(
    "line",
    ["a.b.c = 1", '"""', "[[", "a = [", "{", "x = {a={", "'", "[k#]", "k# = 1", "[k#" + ".a" * 900 + "]"],
)
def test_hostile_briefs_cost_little(write: Write, line: str) -> None:
    lines = (line.replace("#", str(number)) for number in range(300_000 // len(line)))
    path = write("\n".join(lines))
    start = time.process_time()
    assert refused(path).message
    assert time.process_time() - start < 5.0
