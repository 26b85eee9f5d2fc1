"""Commented cases to begin from: `thermal new KIND`."""

import difflib

from thermal.errors import CaseError

_BILLET = """\
format = 1
title = "Round steel billet, through heating for forging"

[workpiece]
shape = "cylinder"            # cylinder | tube | plate
diameter = "50 mm"            # units: mm, m, in
length = "200 mm"
material = "steel-c45"        # `thermal material list`, or a file beside this one: "my-steel.toml"
surface = "oxidised"          # a surface state of that material; or emissivity = 0.8
initial = "20 °C"             # °C, K or °F
neighbours = "none"           # none: the end faces lose heat; touching: one of a row that fills the coil

[coil]
turns = 16
inner_diameter = "80 mm"
length = "240 mm"
tube = "12 mm"                # outside of the square copper tube

[lining]                      # leave the table out where the coil has none
thickness = "8 mm"            # lies against the coil bore; material = "castable-alumina"

[supply]
power = "80 kW"               # rated
frequency = "2 kHz"
max_current = "3 kA"          # limits are optional; the report says which one bound, and when

[surroundings]
temperature = "20 °C"         # gas = "air", speed = "0 m/s"; or a constant h = "15 W/(m2 K)"

[[schedule]]
stage = "heat"
# drive: or absorbed_power | coil_current | coil_voltage | surface_field
drive = { supply_power = "25 kW" }
until = { core = "1150 °C", spread = "100 K" }  # all must hold; spread is surface minus core, without sign
longest = "300 s"

[[schedule]]
stage = "transfer"            # coil exit to press, no power
duration = "6 s"

[[reading]]                   # any number of them; also usable in until
name = "TC1"
depth = "5 mm"                # under the surface
"""

_TUBE = """\
format = 1
title = "Steel tube, heated from outside"

[workpiece]
shape = "tube"
outer_diameter = "60 mm"
wall = "5 mm"
length = "150 mm"
material = "steel-c45"
surface = "oxidised"          # a surface state of that material; or emissivity = 0.8

[coil]
turns = 12
inner_diameter = "75 mm"
length = "160 mm"
tube = "10 mm"                # outside of the square copper tube

[supply]
power = "40 kW"               # rated
frequency = "10 kHz"          # limits are optional: max_current = "1 kA", max_voltage = "600 V"

[[schedule]]
stage = "heat"
drive = { supply_power = "25 kW" }
until = { core = "900 °C" }   # the core of a tube is its bore
longest = "120 s"

[[schedule]]
stage = "hold"                # the supply follows one reading
at = { surface = "900 °C" }   # surface | core | mean | a reading
duration = "20 s"

[[schedule]]
stage = "transfer"
duration = "10 s"
"""

_PLATE = """\
format = 1
title = "Steel plate, preheating before welding"

[workpiece]
shape = "plate"               # both faces are heated alike
thickness = "25 mm"
width = "150 mm"
length = "300 mm"
material = "steel-c45"
surface = "oxidised"          # a surface state of that material; or emissivity = 0.8

[coil]
turns = 20
opening = "180 x 55 mm"       # width x height of the rectangular coil, clear inside
length = "320 mm"
tube = "12 mm"                # outside of the square copper tube

[supply]
power = "50 kW"               # rated
frequency = "3 kHz"

[[schedule]]
stage = "heat"
drive = { supply_power = "30 kW" }
until = { mean = "250 °C" }
longest = "300 s"

[[schedule]]
stage = "transfer"            # left to itself: watch surface and core come together
duration = "60 s"

[[reading]]
name = "quarter"
depth = "6.25 mm"
"""

_HEATER = """\
format = 1
title = "Small steel bar on a bench heater, coil and supply left out"

[workpiece]
shape = "cylinder"
diameter = "12 mm"
length = "60 mm"
material = "steel-c45"
surface = "oxidised"          # a surface state of that material; or emissivity = 0.8

# Without [coil] and [supply] there are no electrical answers. The drive is then what the workpiece absorbs,
# or the field at its surface: drive = { surface_field = "20 kA/m", frequency = "100 kHz" }

[surroundings]
temperature = "20 °C"
speed = "0 m/s"               # still air; or a constant h = "15 W/(m2 K)"

[[schedule]]
stage = "heat"
drive = { absorbed_power = "800 W", frequency = "100 kHz" }
until = { surface = "850 °C" }
longest = "300 s"

[[schedule]]
stage = "transfer"            # cooling in air; a log with such a tail shows the losses
duration = "60 s"
"""

_STARTERS = {"billet": _BILLET, "tube": _TUBE, "plate": _PLATE, "heater": _HEATER}

KINDS = tuple(_STARTERS)
"""Kinds of starter there are."""


def starter(kind: str) -> str:
    """TOML text of a commented case.

    Parameters
    ----------
    kind : str
        billet, tube, plate or heater (no coil).

    Raises
    ------
    CaseError
        There is no such kind.
    """
    if kind not in _STARTERS:
        hits = difflib.get_close_matches(kind, KINDS, n=1)
        hint = f", did you mean '{hits[0]}'?" if hits else ""
        raise CaseError(f"'{kind}' is not a kind of case{hint} (kinds: {', '.join(KINDS)})")
    return _STARTERS[kind]
