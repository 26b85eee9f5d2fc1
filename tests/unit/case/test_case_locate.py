"""Line numbers of keys in a TOML text."""

import tomllib

from thermal.case.locate import line_of, lines_of

TEXT = """\
format = 1
title = '''
[not] = a
header'''

[workpiece]   # a comment
"diameter" = "50 mm"
surface.kind = "oxidised"

[[schedule]]
stage = "heat"
drive = { supply_power = "60 kW", frequency = "3 kHz" }

[[schedule]]
stage = "hold"
[schedule.at]
core = "1150 °C"

[output]
profiles_at = [
    "1 s",  # [x]
    "2 s",
]
interval = "1 s"
"""


def test_every_key_has_its_line() -> None:
    lines = lines_of(TEXT)
    assert lines[("format",)] == 1
    assert lines[("title",)] == 2
    assert lines[("workpiece",)] == 6
    assert lines[("workpiece", "diameter")] == 7
    assert lines[("workpiece", "surface", "kind")] == 8
    assert lines[("schedule", 0)] == 10
    assert lines[("schedule", 0, "drive", "frequency")] == 12
    assert lines[("schedule", 1)] == 14
    assert lines[("schedule", 1, "at")] == 16
    assert lines[("schedule", 1, "at", "core")] == 17
    assert lines[("output", "profiles_at", 1)] == 20
    assert lines[("output", "interval")] == 24


def test_carriage_returns_change_nothing() -> None:
    assert lines_of(TEXT.replace("\n", "\r\n")) == lines_of(TEXT)


def test_every_path_of_the_document_is_found() -> None:
    def walk(value: object, path: tuple[str | int, ...]) -> None:
        if isinstance(value, dict):
            for key, inner in value.items():
                walk(inner, (*path, key))
        else:
            assert line_of(path, lines) == lines[path]

    lines = lines_of(TEXT)
    document = tomllib.loads(TEXT)
    walk({key: value for key, value in document.items() if key != "schedule"}, ())
    for index, stage in enumerate(document["schedule"]):
        walk(stage, ("schedule", index))


def test_missing_key_falls_back_to_its_table() -> None:
    lines = lines_of(TEXT)
    assert line_of(("schedule", 1, "duration"), lines) == 14
    assert line_of(("coil", "turns"), lines) is None
