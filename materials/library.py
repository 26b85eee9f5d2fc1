"""Looking things up by name, in the shipped data and in a folder of the user's own."""

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Literal, TypeVar

from materials import database
from materials.errors import MaterialError, UnknownName
from materials.gas import Gas
from materials.material import Lining, Material

Kind = Literal["material", "lining", "gas"]

_T = TypeVar("_T")
_KINDS: Mapping[str, Kind] = {"lining": "lining", "gas": "gas"}


@dataclass(frozen=True)
class Library:
    """The shipped materials, linings and gases, and those of a folder.

    files : file of the folder by kind and key ; names : key or alias in lower case -> (kind, key), of the folder.
    """

    files: Mapping[Kind, Mapping[str, Path]]
    names: Mapping[str, tuple[Kind, str]]

    @classmethod
    def of(cls, folder: str | Path | None) -> "Library":
        """Library with a folder laid out like the shipped data, or with the shipped ones only.

        Parameters
        ----------
        folder : str or Path or None
            Alloys stand in it or one folder down, linings in `lining`, gases in `gas`.

        Raises
        ------
        MaterialError
            The folder or a file in it cannot be read, it holds no TOML file, or a name is taken (the text names both).
        """
        files: dict[Kind, dict[str, Path]] = {"material": {}, "lining": {}, "gas": {}}
        names: dict[str, tuple[Kind, str]] = {}
        if folder is None:
            return cls(files, names)
        owner = {name: f"the shipped {file}" for name, file in database.taken().items()}
        for kind, path in _found(Path(folder)):
            key, aliases = database.head(path)
            for name in (key, *aliases):
                wanted = _normal(name)
                if wanted in owner:
                    raise MaterialError(f"{path}: the name '{name}' is taken by {owner[wanted]}, give it another")
                owner[wanted] = str(path)
                names[wanted] = (kind, key)
            files[kind][key] = path
        return cls(files, names)

    def keys(self, kind: Kind) -> list[str]:
        """Shipped keys of a kind and those of the folder, sorted."""
        shipped = {"material": database.names, "lining": database.lining_names, "gas": database.gas_names}[kind]
        return sorted([*shipped(), *self.files[kind]])

    def everything(self) -> list[str]:
        """All keys: materials, then linings, then gases."""
        return [*self.keys("material"), *self.keys("lining"), *self.keys("gas")]

    def file(self, kind: Kind, name: str) -> Path | None:
        """File of the folder for a name; None where the folder has no such name of this kind."""
        found = self.names.get(_normal(name))
        return self.files[kind][found[1]] if found is not None and found[0] == kind else None

    def material(self, name: str) -> Material:
        """Material of a key or alias.

        Raises
        ------
        MaterialError
            Unknown name; the text lists the known ones and the nearest.
        """
        return self._get("material", name, database.load_file, database.get)

    def lining(self, name: str) -> Lining:
        """Lining of a key; errors as `material`."""
        return self._get("lining", name, database.load_lining, database.lining)

    def gas(self, name: str) -> Gas:
        """Gas of a key; errors as `material`."""
        return self._get("gas", name, database.load_gas, database.gas)

    def any(self, name: str) -> Material | Lining | Gas:
        """Material, lining or gas of a name; errors as `material`."""
        get: tuple[tuple[Kind, Callable[[str], Material | Lining | Gas]], ...] = (
            ("material", self.material),
            ("lining", self.lining),
            ("gas", self.gas),
        )
        for kind, of_kind in get:
            if _normal(name) in self._called(kind):
                return of_kind(_normal(name))
        also = [*database.aliases(), *self.names]
        raise database.unknown("material", name, self.everything(), also)

    def _get(self, kind: Kind, name: str, load: Callable[[Path], _T], shipped: Callable[[str], _T]) -> _T:
        own = self.file(kind, name)
        if own is not None:
            return load(own)
        try:
            return shipped(name)
        except UnknownName:
            raise database.unknown(kind, name, self.keys(kind), self._called(kind)) from None

    def _called(self, kind: Kind) -> list[str]:
        """Every name of a kind in lower case, keys and aliases."""
        own = [name for name, (of, _) in self.names.items() if of == kind]
        return [*map(_normal, self.keys(kind)), *(database.aliases() if kind == "material" else ()), *own]


def _normal(name: str) -> str:
    return name.strip().lower()


def _found(folder: Path) -> Iterator[tuple[Kind, Path]]:
    """Kind and path of every TOML file in a folder, in a fixed order."""
    try:
        entries = sorted(folder.iterdir())
        inner = [(each.name, path) for each in entries if each.is_dir() for path in sorted(each.iterdir())]
    except FileNotFoundError:
        raise MaterialError(f"{folder}: there is no such folder of materials") from None
    except NotADirectoryError:
        raise MaterialError(f"{folder}: is a file, materials of your own stand in a folder") from None
    except OSError as error:
        raise MaterialError(f"{folder}: cannot be read ({error.strerror})") from None
    found = [("", path) for path in entries] + inner
    files = [(group, path) for group, path in found if path.suffix == ".toml" and path.is_file()]
    if not files:
        raise MaterialError(f"{folder}: holds no TOML file, neither itself nor a folder in it")
    for group, path in files:
        if path.name == "sources.toml":
            raise MaterialError(f"{path}: sources of your own stand in each file, as [sources.KEY]")
        yield _KINDS.get(group, "material"), path
