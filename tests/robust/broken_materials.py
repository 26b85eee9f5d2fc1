"""Material files that must be refused: a shipped one spoilt by hand and after a seed."""

import random
import re
from pathlib import Path

from broken_cases import Bad

import materials

SEED = 20240918
SOUND = (Path(materials.__file__).parent / "data" / "steel" / "steel-c45.toml").read_text(encoding="utf-8")

_LINE = re.compile(r"^(\w+) = (.*)$", re.MULTILINE)
_CHOICES = ("source", "kind", "rule", "beyond", "curve", "formula", "T_unit", "unit", "H_unit", "B_unit")
_FREE = ("locator", "note", "title", "key", "group")
_LISTS = ("T", "value", "H", "B")

_NO_TEXT = ("nan", "-1", "true", "[]", "{}", "2024-02-03", "1e308")
_NO_LIST = (
    *_NO_TEXT,
    "[nan]",
    "[inf, 1]",
    "[3, 2, 1]",
    "[1e308]",
    "[-1e308, 1]",
    '["1"]',
    "[[1]]",
    "[true]",
    "[1]",
    '"5 mm"',
)
_NO_QUANTITY = (
    "nan",
    "inf",
    "true",
    "[]",
    "{}",
    "2024-02-03",
    '""',
    '"x"',
    '"1e400"',
    '"5 lightyears"',
    '"1e308 T"',
    "1e400",
)


def wrong_values(each: int | None = 1) -> dict[str, Bad]:
    """Every line of the file with wrong values; each : how many of them, all for None."""
    draw = random.Random(SEED)
    found = {}
    for number, place in enumerate(_LINE.finditer(SOUND)):
        key, value = place.groups()
        if key in _FREE:
            wrong: tuple[str, ...] = _NO_TEXT
        elif key in _CHOICES:
            wrong = (*_NO_TEXT, '"nonsense"', '"\\u001b[2J"', f'"{"x" * 5000}"')
        elif key in _LISTS and value.startswith("["):
            wrong = _NO_LIST
        elif key == "grows":
            wrong = ("5", '"yes"', "[]", "nan")
        elif key == "aliases":
            wrong = ("5", '"c45"', "[5]", "{}")
        else:
            wrong = _NO_QUANTITY
        end = place.end() if not value == "[" else SOUND.index("]", place.end()) + 1
        for text in wrong if each is None else draw.sample(wrong, min(each, len(wrong))):
            raw = f"{SOUND[: place.start()]}{key} = {text}{SOUND[end:]}"
            # A list of another length may be told at the list it is compared with.
            found[f"{number} {key} = {text[:40]}"] = Bad(raw.encode(), () if key in _LISTS else (key,))
    return found


def missing_and_doubled() -> dict[str, Bad]:
    """Every table left out that is needed, every table twice, an unknown key in every table."""
    found = {}
    for header in re.findall(r"^\[.*\]$", SOUND, re.MULTILINE):
        name = header.strip("[]")
        start = SOUND.index(header)
        end = SOUND.find("\n[", start + 1) + 1 or len(SOUND)
        if not name.startswith("surface.") and name != "molar_mass":
            found[f"without {header}"] = Bad((SOUND[:start] + SOUND[end:]).encode(), (name,))
        found[f"twice {header}"] = Bad(f"{SOUND}\n{header}\n".encode(), (f"[{name}] is given a second time",))
        odd = SOUND.replace(header, f"{header}\nhue = 5", 1)
        found[f"unknown key in {header}"] = Bad(odd.encode(), (f"{name}.hue: unknown key",))
    return found


def _with(old: str, new: str, *words: str) -> Bad:
    assert old in SOUND, old
    return Bad(SOUND.replace(old, new, 1).encode(), words)


def by_hand() -> dict[str, Bad]:
    """Physics that cannot be, and texts made to break a reader."""
    cp = SOUND.index("[specific_heat]")
    heat = SOUND[cp : SOUND.index("\n[", cp)]
    cited = heat[heat.index("source =") :]
    table = '[specific_heat]\nT = [20, 1200]\nT_unit = "°C"\nvalue = {}\nunit = "J/(kg K)"\n'
    table += 'rule = "linear"\nbeyond = "hold"\n'

    def heats(values: str, *words: str) -> Bad:
        return _with(heat, table.format(values) + cited, *words)

    jump = '[transformation.x]\ntemperature = "700 °C"\nwidth = "{}"\nheat = "{}"\n' + cited
    many = ", ".join(["1"] * 130_000)
    return {
        "empty": Bad(b"", ("format: missing",)),
        "a case": Bad(b'format = 1\n[workpiece]\nshape = "tube"\n', ("key: missing",)),
        "another format": _with("format = 1", "format = 2", "this version reads format = 1"),
        "noise": Bad(random.Random(SEED).randbytes(3000), ("save it as UTF-8",)),
        "zero bytes": Bad(bytes(3000), ("save it as UTF-8",)),
        "UTF-16": Bad(SOUND.encode("utf-16"), ("save it as UTF-8",)),
        "cut": Bad(SOUND.encode()[:1500]),
        "cut in a sign": Bad(SOUND.encode()[: SOUND.encode().index("°".encode()) + 1], ("save it as UTF-8",)),
        "brackets": Bad(b"a = " + b"[" * 5000, ("more than 20 deep",)),
        "dots": Bad(b"a." * 100_000 + b"a = 1", ("more than 20 deep",)),
        "many numbers": _with(
            "[51.7, 50.7, 48.2, 45.6, 41.9, 38.1, 33.9, 30.1, 24.7, 26.8, 29.7]", f"[{many}]", "250 kB"
        ),
        "another length": _with("51.7, 50.7,", "51.7,", "conductivity.value: 10 numbers for 11 temperatures"),
        "falling temperatures": _with("T = [20, 100, 200, 300", "T = [20, 200, 100, 300", "conductivity.T: must rise"),
        "equal temperatures": _with("T = [20, 100, 200, 300", "T = [20, 100, 100, 300", "conductivity.T: must rise"),
        "absolute zero": _with("T = [20, 100, 200, 300", "T = [-300, 100, 200, 300", "below absolute zero"),
        "negative conductivity": _with("51.7", "-51.7", "conductivity.value: must be"),
        "denormal conductivity": _with("51.7", "1e-320", "conductivity.value: must be"),
        "endless conductivity": _with("51.7", "1e308", "conductivity.value: must be"),
        "a slipped unit": _with('"uohm cm"', '"ohm m"', "resistivity.value: must be"),
        "bright beyond black": _with("[0.07, 0.14, 0.38]", "[0.07, 0.14, 1.38]", "surface.bright.value: must be"),
        "no surface": Bad(SOUND[: SOUND.index("[surface.")].encode(), ("surface: missing",)),
        "heat falls below zero": heats("[480, -650]", "specific_heat.value: must be"),
        "heat is zero": heats("[480, 0]", "specific_heat.value: must be"),
        "heat of a denormal": heats("[480, 1e-310]", "specific_heat.value: must be"),
        "heat that refuses": _with(
            'unit = "J/(kg K)"\nbeyond = "hold"',
            'unit = "J/(kg K)"\nbeyond = "refuse"',
            "specific_heat.beyond: must be hold",
        ),
        "a transformation gives heat": Bad(
            (SOUND + "\n" + jump.format("5 K", "-5 kJ/kg")).encode(), ("heat: must be",)
        ),
        "a transformation of no width": Bad((SOUND + "\n" + jump.format("0 K", "5 kJ/kg")).encode(), ("at least 1 K",)),
        "endless transformation": Bad((SOUND + "\n" + jump.format("5 K", "1e308 J/kg")).encode(), ("heat: must be",)),
        "solidus above liquidus": _with('"1430 °C"', '"1530 °C"', "liquidus: must not be below the solidus"),
        "hot liquidus": _with('"1495 °C"', '"1e300 °C"', "liquidus.value: must be"),
        "cold Curie point": _with('"768 °C"', '"10 °C"', "curie_temperature.value: must be above 27 °C"),
        "Curie point of a star": _with('"768 °C"', '"1e300 °C"', "curie_temperature.value: must be"),
        "exponent of zero": _with('value = "3"', 'value = "0"', "saturation_exponent.value: must be"),
        "huge exponent": _with('value = "3"', 'value = "1e300"', "saturation_exponent.value: must be from 1 to 10"),
        "huge permeability": _with('"593.5"', '"1e308"', "magnetics.mu_r_initial: must be"),
        "permeability of one": _with('"593.5"', '"1"', "magnetics.mu_r_initial: must be above 1"),
        "flux below that of the air": _with("0.2275,", "0.0001,", "magnetics.B: needs one number"),
        "falling flux": _with("0.2275, 0.2547", "0.2547, 0.2275", "magnetics.B: must rise"),
        "endless flux": _with("2.413", "1e308", "magnetics.B: must be"),
        "no field": _with("260.6,", "0,", "magnetics.H: must be above zero"),
        "unknown law": _with('curve = "normal"', 'law = "brauer"', "magnetics.law: 'brauer' is not one of"),
        "nothing magnetic": Bad(re.sub(r"curve = .*\nH = [^]]*\]", "", SOUND).encode(), ("give mu_r, curve or law",)),
        "unknown source": _with('source = "bisra-1953"', 'source = "hearsay"', "source: 'hearsay' is not one of"),
        "source without a title": Bad((SOUND + "\n[sources.mine]\nyear = '2024'\n").encode(), ("sources.mine.title",)),
        "certain beyond doubt": _with('uncertainty = "4 %"', 'uncertainty = "-4 %"', "must be from 0 to 100 %"),
        "known to a factor of a million": _with('uncertainty = "4 %"', "uncertainty = 1e6", "must be from 0 to 100 %"),
        "numbers as texts": _with("[51.7, 50.7", '["51.7", "50.7"', "conductivity.value: must be a list of numbers"),
    }


def all_of_them() -> dict[str, Bad]:
    found: dict[str, Bad] = {}
    for group in (by_hand(), missing_and_doubled(), wrong_values()):
        assert not found.keys() & group.keys()
        found.update(group)
    return found
