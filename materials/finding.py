"""What an audit finds: one record per check, and the book they are written into."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from materials.curve import Array
from materials.limits import Limits
from materials.material import Datum, Exemption
from materials.source import KINDS, Reference
from materials.units import display

Verdict = Literal["ok", "remark", "fails"]
Mask = npt.NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Finding:
    """Outcome of one check of one material.

    material : its key ; check : name of the check ; found, allowed : in words ; verdict : ok; remark (unusual, or worth
    knowing before use); fails (a contradiction or beyond what there is, most likely a mistake in the file).
    """

    material: str
    check: str
    found: str
    allowed: str
    verdict: Verdict


class Book:
    """Findings about one file, as they come; exemptions turn a departure they cover into a remark."""

    def __init__(self, material: str, exemptions: Iterable[Exemption] = ()) -> None:
        self._material = material
        self._exemptions = tuple(exemptions)
        self._used: set[str] = set()
        self._findings: list[Finding] = []

    def add(self, check: str, found: str, allowed: str, verdict: Verdict = "ok") -> None:
        """Write one finding."""
        self._findings.append(Finding(self._material, check, found, allowed, verdict))

    def judge(
        self, check: str, T: Array, odd: Mask, wrong: Mask, say: Callable[[int], str], fine: str, allowed: str
    ) -> None:
        """Write what a check found along the temperature.

        Parameters
        ----------
        check : str
            Name of the check.
        T : (k,) [K]
            Where it looked; a number without a temperature stands at 20 °C.
        odd, wrong : (k,)
            Where that deserves a remark, and where it fails.
        say : callable
            Index -> what is there, in words.
        fine : str
            What was found where nothing is odd or wrong.
        allowed : str
            What is allowed.
        """
        left = odd | wrong
        for each in self._exemptions:
            covered = left & (T >= each.start) & (T <= each.end)
            if each.check == check and covered.any():
                self._used.add(each.name)
                found = f"{say(int(covered.argmax()))}; {each.reason}"
                self.add(check, found, f"{allowed}, or a named exception", "remark")
                left &= ~covered
        if (left & wrong).any():
            self.add(check, say(int((left & wrong).argmax())), allowed, "fails")
        elif left.any():
            self.add(check, say(int(left.argmax())), allowed, "remark")
        elif not (odd | wrong).any():
            self.add(check, fine, allowed)

    def judge_number(self, check: str, odd: bool, wrong: bool, found: str, allowed: str) -> None:
        """Write what a check found that has no temperature."""
        self.judge(check, np.array([293.15]), np.array([odd]), np.array([wrong]), lambda _: found, found, allowed)

    def limits(self, name: str, value: float, limits: Limits) -> None:
        """Check one number against what it can be and what is usual."""
        found = f"{display(value, limits.unit):.4g} {limits.unit}".removesuffix(" 1")
        odd, wrong = limits.unusual(value).size > 0, limits.impossible(value).size > 0
        self.judge_number(f"range of {name}", odd, wrong, found, _bounds(limits))

    def limits_over(self, name: str, T: Array, value: Array, limits: Limits) -> None:
        """Check a table (k,) [SI] over T (k,) [K]."""
        odd, wrong = np.zeros(T.shape, dtype=bool), np.zeros(T.shape, dtype=bool)
        odd[limits.unusual(value)] = True
        wrong[limits.impossible(value)] = True
        shown = [f"{display(float(each), limits.unit):.4g}" for each in value]
        unit = "" if limits.unit == "1" else f" {limits.unit}"
        low, high = shown[int(value.argmin())], shown[int(value.argmax())]
        fine = f"{low}{unit}" if low == high else f"{low} to {high}{unit}"
        self.judge(
            f"range of {name}", T, odd, wrong, lambda i: f"{shown[i]}{unit} at {celsius(T[i])}", fine, _bounds(limits)
        )

    def sources(self, data: Iterable[Datum], references: Iterable[Reference]) -> None:
        """Check that every number has a source with a title, a place in it, a kind and an uncertainty."""
        titles = {each.key: each.title for each in references}
        allowed = "source, place in it, kind and uncertainty for every number"
        total = recalled = 0
        for datum in data:
            total += 1
            recalled += datum.source.kind == "memory"
            whole = titles.get(datum.source.key) and datum.source.locator and datum.source.kind in KINDS
            if not whole:
                self.add("sources", f"{datum.name}: source, place in it or kind is missing", allowed, "fails")
            elif not 0.0 < datum.uncertainty < 1.0:
                found = f"{datum.name}: an uncertainty of {100.0 * datum.uncertainty:g} %"
                self.add("sources", found, f"{allowed}, above 0 and below 100 %", "remark")
        self.add("sources", f"{total} numbers, {recalled} of them recalled from the named work", allowed)

    def close(self) -> list[Finding]:
        """All findings; an exemption that covers nothing fails."""
        for each in self._exemptions:
            if each.name not in self._used:
                found = f"'{each.name}' for '{each.check}' covers nothing"
                self.add("exceptions", found, "the name of a check that departs from its rule there", "fails")
        return self._findings


def celsius(T: float) -> str:
    """A temperature [K] in words."""
    return f"{display(float(T), '°C'):.4g} °C"


def _bounds(limits: Limits) -> str:
    return f"{limits.allowed(usual=True)} ({limits.reason}); at most {limits.allowed()}"
