"""A folder of the user's own: what is found in it, and every refusal with its sentence."""

import re
from pathlib import Path

import pytest

import materials
from materials.errors import MaterialError
from materials.gas import Gas
from materials.library import Library
from materials.material import Lining, Material

DATA = Path(materials.__file__).parent / "data"


def copy(key: str, target: Path, new: str, aliases: str = "[]") -> Path:
    """Shipped file under another key, without its aliases."""
    (path,) = DATA.glob(f"*/{key}.toml")
    text = path.read_text(encoding="utf-8").replace(f'key = "{key}"', f'key = "{new}"')
    if "aliases" in text:
        text = re.sub(r"aliases = .*", f"aliases = {aliases}", text)
    target.parent.mkdir(parents=True, exist_ok=True)
    target.write_text(text, encoding="utf-8")
    return target


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    copy("copper", tmp_path / "top.toml", "top-copper")
    copy("steel-c45", tmp_path / "steel" / "batch.toml", "Batch-7", '["Heat-12"]')
    copy("castable-alumina", tmp_path / "lining" / "fibre.toml", "fibre")
    copy("argon", tmp_path / "gas" / "forming.toml", "forming-gas")
    (tmp_path / "notes.txt").write_text("not data", encoding="utf-8")
    return tmp_path


def refusal(folder: Path) -> str:
    with pytest.raises(MaterialError) as error:
        Library.of(folder)
    return str(error.value)


def test_everything_in_the_folder_is_found_beside_the_shipped(folder: Path) -> None:
    library = Library.of(folder)
    assert library.material("top-copper").key == "top-copper"
    assert library.material("batch-7").key == library.material("HEAT-12").key == "Batch-7"
    assert library.lining("fibre").key == "fibre"
    assert library.gas("forming-gas").key == "forming-gas"
    assert library.material("C45") is materials.get("steel-c45")
    assert library.lining("castable-alumina").key == "castable-alumina"
    assert library.gas("air").key == "air"
    assert {"top-copper", "Batch-7", "copper"} <= set(library.keys("material"))
    gases = ["air", "argon", "forming-gas", "helium", "nitrogen"]
    assert library.everything()[-7:] == ["castable-alumina", "fibre", *gases]


def test_any_knows_what_a_name_stands_for(folder: Path) -> None:
    library = Library.of(folder)
    kinds = {"heat-12": Material, "copper": Material, "fibre": Lining, "Forming-Gas": Gas, "helium": Gas}
    assert all(isinstance(library.any(name), kind) for name, kind in kinds.items())


def test_file_is_that_of_the_folder_or_none(folder: Path) -> None:
    library = Library.of(folder)
    assert library.file("material", "Heat-12") == folder / "steel" / "batch.toml"
    assert library.file("lining", "heat-12") is None
    assert library.file("material", "copper") is None
    assert Library.of(None).file("material", "top-copper") is None


def test_unknown_names_list_those_of_the_folder_too(folder: Path) -> None:
    library = Library.of(folder)
    with pytest.raises(
        MaterialError, match=r"^unknown material 'batch-8', did you mean 'batch-7'\? \(known: Batch-7, al"
    ):
        library.material("batch-8")
    with pytest.raises(
        MaterialError, match=r"^unknown lining 'fibr', did you mean 'fibre'\? \(known: castable-alumina, f"
    ):
        library.lining("fibr")
    with pytest.raises(
        MaterialError, match=r"^unknown gas 'copper' \(known: air, argon, forming-gas, helium, nitrogen\)"
    ):
        library.gas("copper")
    with pytest.raises(MaterialError, match=r"^unknown material 'heliun', did you mean 'helium'\?"):
        library.any("heliun")


@pytest.mark.parametrize(
    ("key", "aliases", "name", "owner"),
    [
        ("steel-c45", "[]", "steel-c45", "the shipped steel-c45.toml"),
        ("mine", '["CK45"]', "CK45", "the shipped steel-c45.toml"),
        ("Argon", "[]", "Argon", "the shipped argon.toml"),
        ("castable-alumina", "[]", "castable-alumina", "the shipped castable-alumina.toml"),
    ],
)
def test_a_shipped_name_is_taken(tmp_path: Path, key: str, aliases: str, name: str, owner: str) -> None:
    path = copy("copper", tmp_path / "mine.toml", key, aliases)
    assert refusal(tmp_path) == f"{path}: the name '{name}' is taken by {owner}, give it another"


def test_a_name_stands_for_one_file_of_the_folder(tmp_path: Path) -> None:
    first = copy("copper", tmp_path / "a.toml", "mine")
    second = copy("iron", tmp_path / "steel" / "b.toml", "other", '["Mine"]')
    assert refusal(tmp_path) == f"{second}: the name 'Mine' is taken by {first}, give it another"
    copy("iron", second, "other", '["other"]')
    assert refusal(tmp_path) == f"{second}: the name 'other' is taken by {second}, give it another"
    second.unlink()
    lining = copy("castable-alumina", tmp_path / "lining" / "c.toml", "mine")
    assert refusal(tmp_path) == f"{lining}: the name 'mine' is taken by {first}, give it another"


def test_folders_that_cannot_be_used(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    gone = tmp_path / "gone"
    assert refusal(gone) == f"{gone}: there is no such folder of materials"
    file = tmp_path / "file"
    file.write_text("", encoding="utf-8")
    assert refusal(file) == f"{file}: is a file, materials of your own stand in a folder"
    assert refusal(tmp_path) == f"{tmp_path}: holds no TOML file, neither itself nor a folder in it"

    def denied(self: Path) -> None:
        raise PermissionError(13, "Permission denied", str(self))

    monkeypatch.setattr(Path, "iterdir", denied)
    assert refusal(tmp_path) == f"{tmp_path}: cannot be read (Permission denied)"


def test_files_that_cannot_be_used(tmp_path: Path) -> None:
    path = tmp_path / "broken.toml"
    path.write_text("key = mine", encoding="utf-8")
    assert refusal(tmp_path).startswith(f"{path}: line 1: key: put the value in quotes")
    path.write_text("format = 1", encoding="utf-8")
    assert refusal(tmp_path) == f"{path}: key: missing"
    path.rename(tmp_path / "sources.toml")
    assert refusal(tmp_path) == f"{tmp_path / 'sources.toml'}: sources of your own stand in each file, as [sources.KEY]"


def test_a_mistake_in_a_file_is_told_when_it_is_used(folder: Path) -> None:
    path = folder / "top.toml"
    path.write_text(path.read_text(encoding="utf-8").replace('"8940 kg/m3"', '"8940"'), encoding="utf-8")
    library = Library.of(folder)
    assert library.material("batch-7").key == "Batch-7"
    with pytest.raises(MaterialError, match=re.escape(f"{path}: density.value: write the unit")):
        library.material("top-copper")
