"""Project files as people write them, each in another hand, and one that has every key of the format."""

from __future__ import annotations

BRACKET = '''\
# Hand file: a bracket, invented
format = 1     # never touched
project.title = 'Bracket'
project.units = "mm-N-MPa"
project . "components" = "xx yy zz xy yz zx"
project.accept = "both"
project.thin = 0.10
load = [ { name = "pull", unit = "N" },   # main one
  { name = "side" , label = "S" },
\t{ name = "Wärme" } ]

# ---- factors ----

[[category]]
\tname = "normal"   # tab indented
\tyield = 1.5
\tultimate = {tresca=2.0,von-mises=2}

[[ "material" ]]
name = "steel"
yield = 3_45.0
yield-at = [
    [20, 345.0],   # room

    # warm
    [100, 318.0],
    [200, 300.0]   # hot, no comma
]
[[case]]
name = "LC 1"
category = "normal"
loads.pull = +12_000
loads . "side" = 8e2   # eight hundred
# a remark below LC 1

# detached remark

# above two
# lines
[[case]]
name = "two"
category = "normal"
[case.loads]
pull = 1
"Wärme" = 2.5
[case.combine]
"LC 1" = 1.5
[[section]]
name = "A-A"
shape = "round"
d = 60
[section.resultants.Mz]
pull = 210
[section.resultants.T]
pull = 140.0 # arm

[[point]]
name = "P1"
material = "steel"
factor.yield = 1.15
source = """
run 12,
node 4711"""
not-felt = [ "side",   # no
   "Wärme", ]
per-load = { pull = [0.5, 0,0, 0.25,0,0] }

[[point]]
name = "P2"
material = "steel"

[point.stress]    # direct
'LC 1' = [
  120, 0, 0,      # normal
  35.5, 0, 0 ]    # shear
# between
two = [1,2,3,4,5,6]
[[point]]
name = "P3"
material = "steel"
temperature = { "LC 1" = 20, two = 60.0 }
stress.two = [0,0,0,0,0,0]
# the end, no newline'''
"""Dotted keys, inline tables, arrays and text over lines, tabs, comments everywhere, no newline at the end."""

WINCH = '''\
# Slipway winch, invented.

format = 1

[project]
title = "Slipway winch"
revision = "B"
units = "mm-N-MPa"                       # temperatures in degC
components = "yy xx zz xy yz zx"         # as the solver exports them
accept = "both"
thin = 0.10
notes = """
Two lines,
with "quotes" in them."""

[[category]]
name = "normal"
label = "Normal operation"
loads = "characteristic"
yield = { tresca = 1.5, von-mises = 1.4 }        # per theory
ultimate = { tresca = 2.0, von-mises = 2.0 }

[[material]]
name = "S355 16-40"
yield = 345.0
ultimate = 470.0
shear-yield = 190.0
elongation = 0.20
range = [-20, 80]
yield-at = [[20, 345.0], [100, 318.0]]
ultimate-at = [[20, 470.0], [100, 440.0]]
source = "invented for this example"

[[load]]
name = "haul"
label = "Rope pull"
unit = "N"
sense = "reversible"

[[load]]
name = "wind"
sense = "optional"

[[case]]
name = "dead"
category = "normal"
temperature = 20.0
check = false

[[case]]
name = "LC01"
label = "Full haul, level"
category = "normal"
temperature = 20.0
loads = { haul = 12000.0, wind = 800.0 } # in N
combine = { dead = 1.1 }

[[section]]
name = "drum shaft A-A"
shape = "round"
d = 60.0
not-felt = ["wind"]
[section.resultants]
Mz = { haul = 210.0 }
T = { haul = 140.0 }

[[point]]
name = "P01"
label = "Drum shaft, shoulder fillet"
part = "drum shaft"
material = "S355 16-40"
factor = 1.15                            # or { yield = 1.15, ultimate = 1.0 }
temperature = 60.0
source = "hand calculation 3, sheet 2"
section = "drum shaft A-A"
at = [30.0, 0.0]
kt = { Mz = 1.7, T = 1.4 }
kt-limits = ["yield"]

[[point]]
name = "P02"
material = "S355 16-40"
factor = { yield = 1.1, ultimate = 1.2 }
temperature = { LC01 = 40.0 }
source = "run 12, node 4711"
not-felt = ["wind"]
[point.per-load]
haul = [0.0021, 0, 0, 0.0007, 0, 0]
[point.stress]
LC01 = [120.0, 0, 0, 35.0, 0, 0]

[[point]]
name = "P03"
material = "S355 16-40"
section = "drum shaft A-A"
at = [0.0, 30.0]
axes = [[1.0, 0.0, 0.0], [0.0, 0.0, 1.0]]
not-felt = "rest"
[point.per-load]
wind = [0.001, 0, 0, 0, 0, 0]

[[acknowledge]]
point = "P02"
caution = "hydrostatic-tension"
by = "the engineer"
reason = "compression side in service; checked by test"
'''
"""Every key of the format."""

SCATTERED = """\
format = 1
[[point]]
name = "A"
material = "m"
[[case]]
name = "one"
category = "c"
[point.stress]   # of A, below a case
one = [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]
[[point]]
name = "B"
material = "m"
[[material]]
name = "m"
yield = 235
[project]
title = "Scattered"
units = "mm-N-MPa"
components = "xx yy zz xy yz zx"
accept = "tresca"
thin = 0
[point.per-load]
[[category]]
name = "c"
yield = 1.5
[[case]]
name = "two"
category = "c"
[point.temperature]
one = 20
"""
"""Kinds mixed, tables far from their entries, no blank line."""

SPOKEN = """\
format = 1
[project]
title = "Spoken"
units = "mm-N-MPa"
components = "xx yy zz xy yz zx"
accept = "both"
thin = 0
[[category]]
name = "c"
yield = 1.5
[[case]]
name = "a"
category = "c"
label = ""
check = true
loads = {}

# about b
# in two lines
[[case]]
name = "b"
category = "c"
# below b

# of nobody

[[case]]
category = "c" # of c
label = "C"
name = "c"

[[case]]
category = "c"
label = "D"
name = "d"
"""
"""Defaults written out, comments that touch entries and one that does not."""

FILES = {
    "bracket": BRACKET,
    "winch": WINCH,
    "winch, crlf, byte order mark": "\ufeff" + WINCH.replace("\n", "\r\n"),
    "bracket, crlf": BRACKET.replace("\n", "\r\n"),
    "scattered": SCATTERED,
    "spoken": SPOKEN,
}
"""By what is odd about each."""
