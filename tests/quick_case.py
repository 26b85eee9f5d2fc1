"""A case that runs in some milliseconds, for tests that make many runs."""

QUICK = """
format = 1
title = "Copper pin"
surroundings = { h = "10 W/(m2 K)" }
numerics = { tolerance = "2 K" }

[workpiece]
shape = "cylinder"
diameter = "6 mm"
length = "60 mm"
material = "copper"
emissivity = 0.1

[[schedule]]
stage = "heat"
drive = { absorbed_power = "500 W", frequency = "10 kHz" }
until = { core = "200 °C" }
longest = "10 s"
"""

UNDRIVEN = QUICK.replace('until = { core = "200 °C" }\nlongest = "10 s"', 'duration = "1 s"')
"""Without a target: no stop to land on, quicker still."""
