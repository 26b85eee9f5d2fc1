"""Material files of constant properties, for cases that closed solutions can be held against."""

CITE = 'source = "made-up"\nlocator = "constant"\nkind = "assumed"\nuncertainty = "0 %"\n'


def constant_material(
    conductivity: float, resistivity: float, density: float = 7800.0, heat: float = 650.0, mu_r: float = 1.0
) -> str:
    """A material file: W/(m K), ohm m, kg/m3, J/(kg K); emissivity 0.8 whatever the surface."""

    def over_T(value: float, unit: str) -> str:
        return (
            f'T = [0, 2000]\nT_unit = "°C"\nvalue = [{value!r}, {value!r}]\nunit = "{unit}"\nrule = "linear"\n'
            f'beyond = "hold"\n{CITE}'
        )

    return f"""
format = 1
key = "constant"
title = "Constant properties"
group = "test"
[sources.made-up]
title = "made up"
[density]
value = "{density!r} kg/m3"
{CITE}
[conductivity]
{over_T(conductivity, "W/(m K)")}
[resistivity]
{over_T(resistivity, "ohm m")}
[specific_heat]
{over_T(heat, "J/(kg K)")}
[magnetics]
mu_r = "{mu_r!r}"
{CITE}
[surface.grey]
grows = false
{over_T(0.8, "1")}
"""
