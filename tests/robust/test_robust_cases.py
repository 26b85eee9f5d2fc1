"""No case file breaks the tool: bad ones are refused in sentences that name file or line and key."""

import random
from pathlib import Path

import broken_cases
import pytest

BAD = broken_cases.all_of_them()


def test_there_are_hundreds_and_the_text_they_come_from_is_sound(command):
    assert len(BAD) > 300
    Path("sound.toml").write_text(broken_cases.SOUND, encoding="utf-8")
    assert command.call("check", "sound.toml").exit_code == 0


@pytest.mark.parametrize("name", BAD)
def test_a_bad_case_is_refused(command, name):
    bad = BAD[name]
    lines = command.refused_text(bad.raw)
    assert len(lines) <= 51
    for word in bad.words:
        assert any(word in line for line in lines), (word, lines)
    for line in lines:
        assert line.startswith(("line ", "bad.toml: ", "there are more")) or ": " in line, line


@pytest.mark.parametrize("name", ["empty", "thousands of brackets", "UTF-16", "in a string", "rows without end"])
def test_a_run_refuses_what_a_check_refuses(command, name):
    bad = BAD.get(name) or BAD[f"cut {name}"]
    assert command.refused_text(bad.raw, command=("run",)) == command.refused_text(bad.raw)


def test_slips_of_single_signs_end_in_an_answer_or_a_refusal(command):
    draw = random.Random(broken_cases.SEED + 3)
    refused = 0
    for _ in range(40):
        text = list(broken_cases.SOUND)
        for _ in range(draw.randint(1, 3)):
            place = draw.randrange(len(text))
            match draw.randrange(3):
                case 0:
                    del text[place]
                case 1:
                    text.insert(place, draw.choice("\"'[]{}=.#,\\ \n0-x°\u200b"))
                case _:
                    other = draw.randrange(len(text))
                    text[place], text[other] = text[other], text[place]
        Path("bad.toml").write_text("".join(text), encoding="utf-8")
        result = command.call("check", "bad.toml")
        assert result.exit_code in (0, 2), ("".join(text), result.exception)
        if result.exit_code:
            refused += 1
            command.refused("check", "bad.toml")
    assert refused > 20


SETTINGS = {
    "x": "is not path=value",
    "=": "is not path=value",
    "a=": "is not path=value",
    "a..b=1": "is not the path of a key",
    ".=1": "is not the path of a key",
    "a." * 300 + "b=1": "is not the path of a key",
    "schedule.9=1": "schedule is a list without '9'",
    "schedule.-1=1": "schedule is a list without '-1'",
    f"schedule.{'9' * 5000}=1": "schedule is a list without",
    "schedule.0.drive.x.y=1": "schedule.0.drive.x (heat): unknown key",
    "schedule={}": "write [[schedule]] with two brackets",
    "schedule=[]": "schedule: is empty",
    "workpiece=1": "workpiece: '1' is not a table",
    "workpiece.wall.thickness=1": "wall is a value, not a table",
    "workpiece.wall=nan": "workpiece.wall: 'nan' is not a number",
    "workpiece.wall=[" + "[" * 3000: "more than 20 deep",
    "workpiece.wall=1e400 mm": "too large a number",
    "workpiece.wall=1e308 mm": "out of range",
    "workpiece.wall=1e-320 mm": "out of range",
    "workpiece.wall=-1 mm": "must be above zero",
    'workpiece.wall="""x': "is not a number",
    "workpiece.wall=5 mm\n[lining]": "workpiece.wall",
    "workpiece.wall=2024-01-01": "is not a number with its unit",
    "workpiece.shape=[]": "a list is not a shape",
    "workpiece.material=\x1b[2J": "unknown material '\\x1b[2J'",
    "workpiece.material=a\x00.toml": "cannot be the name of a file",
    "coil.turns=" + "9" * 5000: "thousands of digits",
    "coil.turns=0x" + "f" * 5000: "more than the 19 digits",
    "coil.turns=inf": "inf turns",
    "title=" + "x" * 5000: "title: must be one line",
    "title=\udcff": "title: must be one line",
}


@pytest.mark.parametrize("setting", SETTINGS, ids=lambda text: ascii(text[:40]))
def test_a_bad_setting_is_refused(command, setting):
    Path("case.toml").write_text(broken_cases.SOUND, encoding="utf-8")
    lines = command.refused("check", "case.toml", "--set", setting)
    assert all(line.startswith("--set    ") for line in lines)
    assert SETTINGS[setting] in lines[0]


def test_a_bad_setting_is_no_mistake_of_the_file(command):
    Path("case.toml").write_text(broken_cases.SOUND.replace('"20 s"', "20"), encoding="utf-8")
    first, second = command.refused("check", "case.toml", "--set", "supply.power=80")
    assert first.startswith("--set    supply.power: write the unit")
    assert second.startswith("line 70  output.profiles_at.1: write the unit")
