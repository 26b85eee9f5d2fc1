"""Short case texts put together from what a test wants to vary."""

PIECES = {
    "cylinder": 'shape = "cylinder"\ndiameter = "40 mm"',
    "tube": 'shape = "tube"\nouter_diameter = "40 mm"\nwall = "6 mm"',
    "plate": 'shape = "plate"\nthickness = "20 mm"\nwidth = "40 mm"',
}


def workpiece(shape: str, neighbours: str, material: str = "steel-c45", initial: str = "20 °C") -> str:
    """[workpiece] 40 mm across and 100 mm long."""
    return f"""
format = 1
[workpiece]
{PIECES[shape]}
length = "100 mm"
material = "{material}"
emissivity = 0.8
neighbours = "{neighbours}"
initial = "{initial}"
"""


def coil_case(shape: str, lining: bool, neighbours: str, frequency: str = "3 kHz", limits: str = "") -> str:
    """A case with coil and supply, without its schedule."""
    opening = 'opening = "70 x 50 mm"' if shape == "plate" else 'inner_diameter = "65 mm"'
    return (
        workpiece(shape, neighbours)
        + f"""
[coil]
turns = 9
{opening}
length = "120 mm"
tube = "10 mm"

[supply]
power = "60 kW"
frequency = "{frequency}"
{limits}
"""
        + ('[lining]\nthickness = "6 mm"\n' if lining else "")
    )


def drive_case(
    shape: str,
    drive: str,
    frequency: str,
    end: str,
    *,
    material: str = "steel-c45",
    tolerance: str = "0.1 K",
    initial: str = "20 °C",
    further: str = "",
) -> str:
    """A case without a coil: one heating stage; further stages and tables as they stand in a file."""
    return f"""{workpiece(shape, "none", material, initial)}
[numerics]
tolerance = "{tolerance}"

[[schedule]]
stage = "heat"
drive = {{ {drive}, frequency = "{frequency}" }}
{end}
{further}
"""
