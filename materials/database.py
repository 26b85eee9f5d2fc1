"""Finding materials, gases and linings by name, and reading a user's own file."""

import difflib
import tomllib
from collections.abc import Iterable, Mapping
from functools import cache
from pathlib import Path
from types import MappingProxyType

from materials.errors import MaterialError
from materials.gas import Gas
from materials.material import Lining, Material
from materials.parsing import gas_from, lining_from, material_from, reference_from
from materials.reader import Section
from materials.source import Reference

_DATA = Path(__file__).parent / "data"
_NOT_ALLOYS = ("gas", "lining")


def names() -> list[str]:
    """Keys of the shipped materials, sorted."""
    return sorted(_alloys())


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
        wanted = _aliases().get(wanted, wanted)
    if wanted not in files:
        raise _unknown("material", key, files, _aliases())
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
        raise _unknown("gas", key, files, ())
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
        raise _unknown("lining", key, files, ())
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
    groups = sorted(path.name for path in _DATA.iterdir() if path.is_dir() and path.name not in _NOT_ALLOYS)
    return {key: path for group in groups for key, path in _files(group).items()}


@cache
def _aliases() -> dict[str, str]:
    """Alias -> key, read without building the materials."""
    found = {}
    for key, path in _alloys().items():
        for alias in _read(path, path.name).texts("aliases"):
            found[alias.lower()] = key
    return found


def _read(path: Path, shown: str) -> Section:
    try:
        with path.open("rb") as file:
            return Section(shown, "", tomllib.load(file))
    except OSError as error:
        raise MaterialError(f"{shown}: cannot be read ({error.strerror})") from None
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise MaterialError(f"{shown}: not valid TOML: {error}") from None


def _unknown(what: str, key: str, known: Iterable[str], aliases: Iterable[str]) -> MaterialError:
    near = difflib.get_close_matches(key.lower(), [*known, *aliases], n=1)
    hint = f", did you mean '{near[0]}'?" if near else ""
    return MaterialError(f"unknown {what} '{key}'{hint} (known: {', '.join(sorted(known))})")
