"""Cases that must be refused: made by hand, and made by spoiling a sound one after a seed."""

import random
import re
from dataclasses import dataclass

SEED = 20240917

SOUND = """\
format = 1
title = "all of it"

[workpiece]
shape = "tube"
outer_diameter = "60 mm"
wall = "8 mm"
length = "200 mm"
material = "steel-c45"
surface = "oxidised"
initial = "20 °C"
neighbours = "none"
axis = "horizontal"

[coil]
turns = 16
inner_diameter = "90 mm"
length = "240 mm"
tube = "12 mm"
wall = "2 mm"
temperature = "50 °C"
leads_resistance = "1 mohm"
leads_inductance = "1 uH"

[lining]
thickness = "8 mm"
material = "castable-alumina"
emissivity = 0.8

[supply]
power = "80 kW"
frequency = "2 kHz"
max_current = "3 kA"
max_voltage = "800 V"

[surroundings]
temperature = "20 °C"
gas = "air"
speed = "1 m/s"

[[schedule]]
stage = "heat"
drive = { supply_power = "25 kW" }
until = { core = "1150 °C", spread = "100 K" } # both
longest = "300 s"

[[schedule]]
stage = "hold"
at = { surface = "1160 °C" }
duration = "5 s"
response = "0.5 s"
reset = "2 s"

[[schedule]]
stage = "transfer"
duration = "6 s"
until = { surface = "1100 °C" }

[[reading]]
name = "TC1"
depth = "5 mm"

[numerics]
dimensions = 1
tolerance = "0.1 K"
refinement = 1

[output]
interval = "1 s"
profiles_at = ["10 s", "20 s"]
"""

HALF = SOUND.index("[[schedule]]")
"""Up to here a case is incomplete wherever it is cut."""


@dataclass(frozen=True)
class Bad:
    """A file that must be refused, and words that must stand in the sentences."""

    raw: bytes
    words: tuple[str, ...] = ()


def spoilt(old: str, new: str, *words: str) -> Bad:
    assert SOUND.count(old) == 1, old
    return Bad(SOUND.replace(old, new).encode(), words)


_QUANTITY = (
    "nan",
    "inf",
    "-inf",
    "true",
    "[]",
    "{}",
    "[[1, 2], [3]]",
    "{ a = 1 }",
    "2024-02-30",
    "2024-02-03",
    "07:32:00",
)
_NO_UNIT = (
    "5",
    "0x1F",
    "1e400",
    "9223372036854775807",
    "99999999999999999999999",
    '"5"',
    '""',
    '" "',
    '"nan"',
    '"5,5 mm"',
)
_ODD = ('"5 lightyears"', '"1e400 UNIT"', '"1e308 UNIT"', '"-1e308 UNIT"', '"5 UNIT UNIT"', '"UNIT 5"', '"+-5 UNIT"')
_NOT_POSITIVE = ('"-5 UNIT"', '"1e-320 UNIT"')
_MAY_BE_ZERO = ("depth", "speed", "leads_resistance", "leads_inductance")
_TEXT = ("5", "true", "[]", "{}", "nan", "2024-02-03", '["a"]')
_WORD = ('"nonsense"', '""', '"\\u0000"', '"\\u001b[2J"', f'"{"x" * 5000}"')


def _assignments() -> list[tuple[str, str]]:
    """Every key = value of the sound text, as written."""
    return re.findall(r"(\w+) = (\"[^\"]*\"|[0-9.]+)", SOUND)


def wrong_values() -> dict[str, Bad]:
    """Every value of the sound text replaced by wrong ones: of another type, unit or size."""
    draw = random.Random(SEED)
    found = {}
    for number, (key, value) in enumerate(_assignments()):
        words: tuple[str, ...]
        number_with_unit = re.fullmatch(r'"[0-9.]+ (.+)"', value)
        if number_with_unit:
            unit = number_with_unit.group(1)
            plain = [*_QUANTITY, *_NO_UNIT, *_ODD, *(() if unit == "°C" or key in _MAY_BE_ZERO else _NOT_POSITIVE)]
            wrong = [each.replace("UNIT", unit) for each in draw.sample(plain, 4)]
        elif value.startswith('"'):
            wrong = draw.sample([*_TEXT, *(_WORD[2:] if key == "title" else _WORD)], 4)
        else:
            wrong = draw.sample(
                ['"5 mm"', "nan", "-1", "0", "1e400", "true", "[]", "{}", "07:32:00", '"x"', "1000000"], 4
            )
        for each in wrong:
            text = _with_value(number, each)
            words = () if "-02-30" in each else (key,)
            found[f"{number} {key} = {each[:40]}"] = Bad(text.encode(), words)
    return found


def _with_value(number: int, value: str) -> str:
    place = list(re.finditer(r"(\w+) = (\"[^\"]*\"|[0-9.]+)", SOUND))[number]
    return SOUND[: place.start(2)] + value + SOUND[place.end(2) :]


def cut_off() -> dict[str, Bad]:
    """The sound text cut at every kind of place, and at places drawn by lot."""
    draw = random.Random(SEED + 1)
    kinds = {
        "in a key": "outer_dia",
        "before the equals sign": "outer_diameter ",
        "after the equals sign": "outer_diameter =",
        "in a string": 'outer_diameter = "60',
        "before a closing quote": 'outer_diameter = "60 mm',
        "in a number": "turns = 1",
        "in a table header": "[lini",
        "between two brackets": "[",
        "in an inline table": "drive = { supply_power",
        "in a value of an inline table": 'drive = { supply_power = "25',
        "before a brace": 'spread = "100 K"',
        "in double brackets": "[[sched",
        "in a sign of two bytes": "°",
    }
    found = {}
    for name, start in kinds.items():
        place = SOUND.encode().index(start.encode()) + len(start.encode()) - (name == "in a sign of two bytes")
        found[f"cut {name}"] = Bad(SOUND.encode()[:place])
    for place in sorted(draw.sample(range(HALF), 25)):
        found[f"cut at {place}"] = Bad(SOUND.encode()[:place])
    return found


def rubbish() -> dict[str, Bad]:
    """Bytes that are no text, in front of, inside and instead of the sound text."""
    draw = random.Random(SEED + 2)
    noise = draw.randbytes(4000)
    sound = SOUND.encode()
    found = {
        "noise": Bad(noise, ("save it as UTF-8",)),
        "all bytes": Bad(bytes(range(256)), ("save it as UTF-8",)),
        "zero bytes": Bad(bytes(5000), ("save it as UTF-8",)),
        "UTF-16": Bad(SOUND.encode("utf-16"), ("save it as UTF-8",)),
        "UTF-16 without a mark": Bad(SOUND.encode("utf-16-le"), ("save it as UTF-8",)),
        "UTF-32": Bad(SOUND.encode("utf-32"), ("save it as UTF-8",)),
        "Latin-1": Bad(SOUND.encode("latin-1"), ("line 11 ", "save it as UTF-8")),
        "two byte order marks": Bad(b"\xef\xbb\xbf" * 2 + sound, ("line 1 ",)),
        "a picture": Bad(b"\x89PNG\r\n\x1a\n" + noise, ("save it as UTF-8",)),
        "an archive": Bad(b"PK\x03\x04" + noise, ("save it as UTF-8",)),
        "old line ends": Bad(SOUND.replace("\n", "\r").encode(), ("line 1 ", "CR alone")),
        "half a surrogate": Bad(sound.replace(b"all of it", b"\xed\xa0\x80"), ("line 2 ", "save it as UTF-8")),
    }
    for place in sorted(draw.sample(range(len(sound)), 12)):
        found[f"a byte FF at {place}"] = Bad(sound[:place] + b"\xff" + sound[place:], ("save it as UTF-8",))
        found[f"a byte 00 at {place}"] = Bad(sound[:place] + b"\0" + sound[place:], ("save it as UTF-8",))
    return found


def by_hand() -> dict[str, Bad]:
    """Mistakes that somebody could make, and texts made to break a reader."""
    head = SOUND[:HALF]
    deep = ("more than 20 deep",)
    return {
        "empty": Bad(b"", ("format: missing", "workpiece: missing", "schedule: missing")),
        "only a comment": Bad(b"# nothing\n", ("format: missing",)),
        "only white space": Bad(b" \n\t\n\r\n", ("format: missing",)),
        "another format of data": Bad(b'{"workpiece": {"diameter": 5}}', ("line 1 ",)),
        "a page": Bad(b"<html><body>404</body></html>", ("line 1 ",)),
        "key twice": spoilt("turns = 16", "turns = 16\nturns = 17", "line 17 ", "given a second time"),
        "table twice": Bad((SOUND + "[coil]\n").encode(), ("[coil] is given a second time",)),
        "inner table twice": Bad(b"[a.b]\nc = 1\n[a.b]\n", ("line 3 ", "[a.b] is given a second time")),
        "table and list": Bad((SOUND + "[schedule]\n").encode(), ("[[schedule]]",)),
        "list and table": Bad((SOUND + "[[coil]]\n").encode(), ("[[coil]]",)),
        "value and table": Bad(b"coil = 1\n[coil]\n", ("line 2 ",)),
        "key of another table": spoilt("turns = 16", 'turns = 16\npower = "5 kW"', "coil.power: unknown key"),
        "unknown table": Bad((SOUND + "[tank]\n").encode(), ("tank: unknown key",)),
        "unknown key in a list": spoilt('name = "TC1"', 'name = "TC1"\nplace = 1', "reading.0.place: unknown key"),
        "schedule of numbers": Bad(("schedule = [1, 2]\n" + head).encode(), ("schedule.0:", "schedule.1:")),
        "schedule of lists": Bad(("schedule = [[{}]]\n" + head).encode(), ("schedule.0: a list",)),
        "schedule is a date": Bad(
            ("schedule = 2024-01-01\n" + head).encode(), ("schedule: '2024-01-01' is not a list",)
        ),
        "no schedule": Bad(head.encode(), ("schedule: missing",)),
        "two thousand stages": Bad(
            (head + '[[schedule]]\nstage = "transfer"\nduration = "1 s"\n' * 2000).encode(),
            ("schedule: there are 2000",),
        ),
        "two hundred readings": Bad(
            (SOUND + "".join(f'[[reading]]\nname = "r{n}"\ndepth = "1 mm"\n' for n in range(200))).encode(),
            ("reading: there are 201",),
        ),
        "too many profiles": spoilt('["10 s", "20 s"]', "[" + '"1 s", ' * 1500 + "]", "1500 moments"),
        "rows without end": spoilt('interval = "1 s"', 'interval = "1 us"', "at most 100000 are kept"),
        "a control of a millisecond over hours": spoilt(
            'duration = "5 s"\nresponse = "0.5 s"', 'duration = "9 h"\nresponse = "1 ms"', "schedule.1.response (hold)"
        ),
        "coil of hot copper": spoilt('temperature = "50 °C"', 'temperature = "600 °C"', "coil.temperature: 600 °C"),
        "thousands of brackets": Bad(b"a = " + b"[" * 5000 + b"]" * 5000, deep),
        "thousands of open brackets": Bad(b"a = " + b"[" * 5000, deep),
        "thousands of braces": Bad(b"a = " + b"{a = " * 3000 + b"1" + b"}" * 3000, deep),
        "a dotted key of thousands": Bad(b".".join([b"a"] * 5000) + b" = 1", deep),
        "a dotted header of thousands": Bad(b"[" + b".".join([b"a"] * 5000) + b"]", deep),
        "a quoted dotted key": Bad(b" . ".join([b'"a.b"'] * 300) + b" = 1", deep),
        "dots and brackets that add up": Bad(b"[a.b.c.d.e.f.g.h.i.j.k.l]\nm.n.o.p.q.r.s.t.u.v.w = 1", deep),
        "hundreds of thousands nested in one line": Bad(b"[" * 249_000, deep),
        "a dotted key of a hundred thousand": Bad(b"a." * 120_000 + b"a = 1", deep),
        "a long key": Bad(b"a" * 240_000 + b" = 1", ("unknown key",)),
        "a long number": spoilt("turns = 16", "turns = " + "9" * 100_000, "line 16 ", "thousands of digits"),
        "a long hexadecimal number": spoilt("turns = 16", "turns = 0x" + "f" * 50_000, "coil.turns: this whole number"),
        "a number beyond 64 bit": spoilt("turns = 16", "turns = 18446744073709551616", "coil.turns: this whole number"),
        "a long quantity": spoilt('"60 mm"', f'"{"6" * 200_000} mm"', "workpiece.outer_diameter", "too large a number"),
        "a long unit": spoilt('"60 mm"', f'"60 {"m" * 200_000}"', "workpiece.outer_diameter: unknown unit"),
        "a long material": spoilt('"steel-c45"', f'"{"x" * 200_000}"', "workpiece.material: unknown material"),
        "a long file of a material": spoilt('"steel-c45"', f'"{"x" * 200_000}.toml"', "File name too long"),
        "a long title": spoilt('"all of it"', f'"{"x" * 200_000}"', "title: must be one line"),
        "a title of two lines": spoilt('"all of it"', '"a\\nb"', "title: must be one line"),
        "a title that clears the screen": spoilt('"all of it"', '"\\u001b[2J"', "title: must be one line"),
        "a name that clears the screen": spoilt('"TC1"', '"\\u001b[2J"', "'\\x1b[2J' is not a name"),
        "tens of thousands of keys": Bad(
            "".join(f"key{n} = {n}\n" for n in range(15_000)).encode(), ("unknown key", "there are more mistakes")
        ),
        "tens of thousands of tables": Bad(b"[[reading]]\n" * 20_000, ("reading.0.name: missing", "more mistakes")),
        "hundreds of thousands of values": Bad(b"a = [" + b"1," * 120_000 + b"]", ("a: unknown key",)),
        "a list over tens of thousands of lines": Bad(
            b"a = [\n" + b"1,\n" * 80_000 + b"]", ("line 1   a: unknown key",)
        ),
        "open quotes without end": Bad(b'"""\\' * 60_000, ("line 1 ",)),
        "quotes without end": Bad(b'"' * 249_000, ("line 1 ",)),
        "a material with a zero in its name": spoilt('"steel-c45"', '"a\\u0000b.toml"', "cannot be the name of a file"),
        "the case as its own material": spoilt(
            '"steel-c45"', '"bad.toml"', "workpiece.material: bad.toml: key: missing"
        ),
        "a folder as material": spoilt('"steel-c45"', '"/..toml"', "workpiece.material: /..toml: cannot be read"),
        "half an escape": spoilt('"all of it"', '"\\ud800"', "line 2 "),
        "an unknown escape": spoilt('"all of it"', '"C:\\work"', "line 2 "),
        "typographic quotes": spoilt(
            '"60 mm"', "“60 mm”", "line 6 ", 'outer_diameter: put the value in quotes: "60 mm"'
        ),
        "a decimal comma": spoilt('"60 mm"', '"60,5 mm"', "workpiece.outer_diameter: '60,5 mm' is not a number"),
        "a format in quotes": spoilt("format = 1", 'format = "1"', "format: '1' is a text, write the number 1 without"),
    }


def all_of_them() -> dict[str, Bad]:
    found: dict[str, Bad] = {}
    for group in (by_hand(), wrong_values(), cut_off(), rubbish()):
        assert not found.keys() & group.keys()
        found.update(group)
    return found
