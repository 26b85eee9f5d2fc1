"""Make air.toml with CoolProp: python make_tables.py (run it in this folder or anywhere else).

Equation of state of Lemmon et al. 2000, transport equations of Lemmon and Jacobsen 2004, at 101 325 Pa.
"""

from pathlib import Path

import CoolProp
import numpy as np
from CoolProp.CoolProp import PT_INPUTS, AbstractState

PRESSURE = 101325.0
T_MIN, T_MAX, STEP = 250, 1900, 25
# Relative uncertainties of a dilute gas as the two papers state them (from memory), rounded up.
TABLES = (
    ("density", "kg/m3", "rhomass", "lemmon-2000", "equation of state, evaluated with CoolProp (bell-2014)", "0.1 %"),
    (
        "viscosity",
        "Pa s",
        "viscosity",
        "lemmon-jacobsen-2004",
        "viscosity equation, evaluated with CoolProp (bell-2014)",
        "2 %",
    ),
    (
        "conductivity",
        "W/(m K)",
        "conductivity",
        "lemmon-jacobsen-2004",
        "conductivity equation, evaluated with CoolProp (bell-2014)",
        "3 %",
    ),
    (
        "heat_capacity",
        "J/(kg K)",
        "cpmass",
        "lemmon-2000",
        "equation of state, evaluated with CoolProp (bell-2014)",
        "1 %",
    ),
)


def column(numbers: list[float]) -> str:
    """Numbers as a TOML list, ten to a line."""
    texts = [f"{number:.7g}" for number in numbers]
    lines = (", ".join(texts[i : i + 10]) for i in range(0, len(texts), 10))
    return "[\n" + "".join(f"    {line},\n" for line in lines) + "]"


def main() -> None:
    """Write air.toml beside this script."""
    state = AbstractState("HEOS", "Air")
    T = np.arange(T_MIN, T_MAX + STEP, STEP)
    rows: dict[str, list[float]] = {name: [] for name, *_ in TABLES}
    for each in T:
        state.update(PT_INPUTS, PRESSURE, float(each))
        for name, _, method, *_ in TABLES:
            rows[name].append(getattr(state, method)())
    parts = [
        f"# Made by make_tables.py with CoolProp {CoolProp.__version__} at 101325 Pa,\n"
        f"# {T_MIN} K to {T_MAX} K in steps of {STEP} K. Do not edit: change the script and run it.\n\n"
        'format = 1\nkey = "air"\ntitle = "Dry air at 101325 Pa"\n'
    ]
    for name, unit, _, source, locator, uncertainty in TABLES:
        parts.append(
            f'\n[{name}]\nT = {column([float(t) for t in T])}\nT_unit = "K"\n'
            f'value = {column(rows[name])}\nunit = "{unit}"\nrule = "monotone"\nbeyond = "refuse"\n'
            f'source = "{source}"\nlocator = "{locator}"\nkind = "recommended"\n'
            f'uncertainty = "{uncertainty}"\n'
        )
    (Path(__file__).parent / "air.toml").write_text("".join(parts), encoding="utf-8")


if __name__ == "__main__":
    main()
