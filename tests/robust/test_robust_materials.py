"""No material file breaks the tool, shown or named in a case."""

from pathlib import Path

import broken_cases
import broken_materials
import pytest

BAD = broken_materials.all_of_them()


def test_there_are_hundreds_and_the_file_they_come_from_is_sound(command):
    assert len(BAD) > 150
    Path("sound.toml").write_text(broken_materials.SOUND, encoding="utf-8")
    assert command.call("material", "show", "sound.toml").exit_code == 0


def _judge(command, bad):
    (line,) = command.refused_text(bad.raw, command=("material", "show"))
    assert line.startswith("bad.toml: ")
    for word in bad.words:
        assert word in line


@pytest.mark.parametrize("name", BAD)
def test_a_bad_material_is_refused(command, name):
    _judge(command, BAD[name])


@pytest.mark.slow
def test_every_wrong_value_in_every_line_is_refused(command):
    for bad in broken_materials.wrong_values(None).values():
        _judge(command, bad)


@pytest.mark.parametrize("name", ["empty", "noise", "brackets", "falling temperatures", "huge exponent"])
def test_a_case_names_the_line_of_its_bad_material(command, name):
    Path("bad.toml").write_bytes(BAD[name].raw)
    Path("case.toml").write_text(broken_cases.SOUND.replace("steel-c45", "bad.toml"), encoding="utf-8")
    (line,) = command.refused("check", "case.toml")
    assert line.startswith("line 9   workpiece.material: bad.toml: ")


def test_a_byte_order_mark_and_windows_line_ends_are_no_mistake(command):
    text = "\ufeff" + broken_materials.SOUND.replace("\n", "\r\n")
    Path("mine.toml").write_text(text, encoding="utf-8", newline="")
    assert command.call("material", "show", "mine.toml").exit_code == 0


def test_a_table_of_ten_thousand_temperatures_is_read(command):
    T = [20 + 0.1 * n for n in range(10_000)]
    text = broken_materials.SOUND
    start = text.index("[conductivity]")
    end = text.index('unit = "W/(m K)"')
    table = f'[conductivity]\nT = {[round(each, 1) for each in T]}\nT_unit = "°C"\nvalue = {[30.1] * len(T)}\n'
    Path("mine.toml").write_text(text[:start] + table + text[end:], encoding="utf-8")
    shown = command.call("material", "show", "mine.toml")
    assert shown.exit_code == 0
    assert "10000 points" in shown.stdout
