"""Finding materials, gases and linings by name, and reading a user's own file."""

import difflib
from collections.abc import Iterable, Mapping
from functools import cache
from pathlib import Path
from types import MappingProxyType

from materials import toml_text
from materials.errors import MaterialError, UnknownName
from materials.gas import Gas
from materials.material import Lining, Material
from materials.parsing import gas_from, lining_from, material_from, reference_from
from materials.reader import Section
from materials.source import Reference

NOT_ALLOYS = ("gas", "lining")
"""Folders of a collection that hold no alloys."""

_DATA = Path(__file__).parent / "data"


def names() -> list[str]:
    """Keys of the shipped materials, sorted."""
    return sorted(_alloys())


def gas_names() -> list[str]:
    """Keys of the shipped gases, sorted."""
    return sorted(_files("gas"))


def lining_names() -> list[str]:
    """Keys of the shipped linings, sorted."""
    return sorted(_files("lining"))


def taken() -> Mapping[str, str]:
    """Every shipped name in lower case, keys and aliases -> the file it stands for."""
    files = {**_alloys(), **_files("gas"), **_files("lining")}
    return {name: files[key].name for name, key in [*zip(files, files, strict=True), *aliases().items()]}


@cache
def aliases() -> Mapping[str, str]:
    """Alias in lower case -> key of the shipped materials, read without building them."""
    found = {}
    for key, path in _alloys().items():
        for alias in _read(path, path.name).texts("aliases"):
            found[alias.lower()] = key
    return found


def get(key: str) -> Material:
    """Shipped material of a key or alias.

    Parameters
    ----------
    key : str
        Such as "steel-c45"; case does not matter.

    Raises
    ------
    MaterialError
        Unknown name; the text lists the known ones and the nearest.
    """
    files = _alloys()
    wanted = key.strip().lower()
    if wanted not in files:
        wanted = aliases().get(wanted, wanted)
    if wanted not in files:
        raise unknown("material", key, files, aliases())
    return _shipped_material(files[wanted])


def load_file(path: str | Path) -> Material:
    """Material of a user's own TOML file, in the format of the shipped ones.

    Parameters
    ----------
    path : str or Path
        The file.

    Raises
    ------
    MaterialError
        The file cannot be read or is wrong; the text names file and key.
    """
    return material_from(_read(Path(path), str(path)), sources())


def load_gas(path: str | Path) -> Gas:
    """Gas of a user's own TOML file; errors as `load_file`."""
    return gas_from(_read(Path(path), str(path)), sources())


def load_lining(path: str | Path) -> Lining:
    """Lining of a user's own TOML file; errors as `load_file`."""
    return lining_from(_read(Path(path), str(path)), sources())


def load_any(path: str | Path) -> Material | Lining | Gas:
    """What a user's own TOML file holds: a gas has a viscosity, a lining has no group and no resistivity."""
    root = _read(Path(path), str(path))
    if root.has("viscosity"):
        return load_gas(path)
    return load_file(path) if root.has("group") or root.has("resistivity") else load_lining(path)


def head(path: str | Path) -> tuple[str, tuple[str, ...]]:
    """Key and aliases of a user's own TOML file, read without building what it holds; errors as `load_file`."""
    root = _read(Path(path), str(path))
    return root.text("key"), root.texts("aliases")


@cache
def gas(key: str) -> Gas:
    """Shipped gas, such as "air".

    Parameters
    ----------
    key : str
        Name of the gas.

    Raises
    ------
    MaterialError
        Unknown name.
    """
    files = _files("gas")
    if key not in files:
        raise unknown("gas", key, files, ())
    return gas_from(_read(files[key], files[key].name), sources())


@cache
def lining(key: str) -> Lining:
    """Shipped lining, such as "castable-alumina".

    Parameters
    ----------
    key : str
        Name of the lining.

    Raises
    ------
    MaterialError
        Unknown name.
    """
    files = _files("lining")
    if key not in files:
        raise unknown("lining", key, files, ())
    return lining_from(_read(files[key], files[key].name), sources())


@cache
def sources() -> Mapping[str, Reference]:
    """Bibliography of the shipped data, by key."""
    root = _read(_DATA / "sources.toml", "sources.toml")
    return MappingProxyType({key: reference_from(key, entry) for key, entry in root.sections("sources")})


@cache
def _shipped_material(path: Path) -> Material:
    return material_from(_read(path, path.name), sources())


@cache
def _files(group: str) -> dict[str, Path]:
    return {path.stem: path for path in (_DATA / group).glob("*.toml")}


@cache
def _alloys() -> dict[str, Path]:
    groups = sorted(path.name for path in _DATA.iterdir() if path.is_dir() and path.name not in NOT_ALLOYS)
    return {key: path for group in groups for key, path in _files(group).items()}


def _read(path: Path, shown: str) -> Section:
    try:
        return Section(shown, "", toml_text.parsed(toml_text.read(path)))
    except OSError as error:
        raise MaterialError(f"{shown}: cannot be read ({error.strerror})") from None
    except toml_text.TextError as error:
        line = "" if error.line is None else f"line {error.line}: "
        raise MaterialError(f"{shown}: {line}{error}") from None


def unknown(what: str, key: str, known: Iterable[str], also: Iterable[str]) -> UnknownName:
    """The refusal of a name nobody has: lists the known keys, and the nearest of these and of the names in `also`."""
    near = difflib.get_close_matches(key.lower(), [*known, *also], n=1)
    hint = f", did you mean '{near[0]}'?" if near else ""
    return UnknownName(f"unknown {what} '{key}'{hint} (known: {', '.join(sorted(known))})")
