"""The unit definitions of the trade, without prefixes: every name is defined on its own.

Sources: NIST SP 811 (2008) appendix B for the exact SI values; the darcy from its definition
(1 cP, 1 cm3/s, 1 cm2, 1 atm/cm); 42 US gallons of 231 cubic inches to a barrel.
"""

from __future__ import annotations

#: Base units, one to a dimension. A surface volume is not a volume at reservoir conditions.
BASE = """
metre = [length] = m = meter = metres = meters
kilogram = [mass] = kg
second = [time] = s = sec = seconds
kelvin = [temperature]; offset: 0 = K
radian = [] = rad
"""

SURFACE = """
standard_cubic_metre = [standard_volume] = sm3 = Sm3
standard_cubic_centimetre = 1e-6 * standard_cubic_metre = scm3
standard_cubic_foot = 0.028316846592 * standard_cubic_metre = scf = SCF
thousand_standard_cubic_feet = 1e3 * standard_cubic_foot = Mscf = MSCF
million_standard_cubic_feet = 1e6 * standard_cubic_foot = MMscf = MMSCF
stock_tank_barrel = 0.158987294928 * standard_cubic_metre = stb = STB
thousand_stock_tank_barrels = 1e3 * stock_tank_barrel = Mstb
million_stock_tank_barrels = 1e6 * stock_tank_barrel = MMstb
"""

RESERVOIR = """
reservoir_cubic_metre = 1 * metre ** 3 = rm3
reservoir_barrel = 0.158987294928 * metre ** 3 = rb
"""

PRESSURE_REFERENCES = """
psi_absolute = 6894.757293168362 * pascal = psia
bar_absolute = 1e5 * pascal = bara
psi_gauge = 6894.757293168362 * pascal; offset: 101325 = psig
bar_gauge = 1e5 * pascal; offset: 101325 = barg
"""

COHERENT = """
newton = kilogram * metre / second ** 2 = N
pascal = newton / metre ** 2 = Pa
joule = newton * metre = J
watt = joule / second = W
"""

TRADE = """
percent = 0.01 = _ = percents
degree = 0.017453292519943295 * radian = deg = degrees

kilometre = 1e3 * metre = km
centimetre = 0.01 * metre = cm
millimetre = 1e-3 * metre = mm
micrometre = 1e-6 * metre = um
foot = 0.3048 * metre = ft = feet
inch = 0.0254 * metre = in = inches
mile = 1609.344 * metre = mi

acre = 4046.8564224 * metre ** 2 = acres
hectare = 1e4 * metre ** 2 = ha
darcy = 1e-7 / 101325 * metre ** 2 = D = darcies
millidarcy = 1e-3 * darcy = mD = md
microdarcy = 1e-6 * darcy = uD
nanodarcy = 1e-9 * darcy = nD

litre = 1e-3 * metre ** 3 = L = l = liter = litres = liters
millilitre = 1e-6 * metre ** 3 = mL
us_gallon = 0.003785411784 * metre ** 3 = gal = gallon = gallons
acre_foot = acre * foot = acre_ft

minute = 60 * second = min = minutes
hour = 3600 * second = _ = h = hr = hours
day = 86400 * second = _ = d = days
year = 31557600 * second = _ = yr = years

gram = 1e-3 * kilogram = g
milligram = 1e-6 * kilogram = mg
tonne = 1e3 * kilogram = _ = t = tonnes
pound = 0.45359237 * kilogram = lbm = lb

kilonewton = 1e3 * newton = kN
pound_force = 4.4482216152605 * newton = lbf
kilogram_force = 9.80665 * newton = kgf

kilopascal = 1e3 * pascal = kPa
megapascal = 1e6 * pascal = MPa
gigapascal = 1e9 * pascal = GPa
bar = 1e5 * pascal = _ = bars
millibar = 100 * pascal = mbar
standard_atmosphere = 101325 * pascal = atm
psi = 6894.757293168362 * pascal = _

poise = 0.1 * pascal * second = P
centipoise = 1e-3 * pascal * second = cP = cp
millipascal = 1e-3 * pascal = mPa
micropascal = 1e-6 * pascal = uPa

kilojoule = 1e3 * joule = kJ
megajoule = 1e6 * joule = MJ
kilowatt = 1e3 * watt = kW
megawatt = 1e6 * watt = MW

degree_Celsius = kelvin; offset: 273.15 = degC
degree_Rankine = 5 / 9 * kelvin; offset: 0 = degR
degree_Fahrenheit = 5 / 9 * kelvin; offset: 255.3722222222222 = degF
"""

ALL = BASE + COHERENT + TRADE + SURFACE + RESERVOIR + PRESSURE_REFERENCES

#: What another registry needs before it can hold surface volumes and the trade's pressures.
FOR_OTHER_REGISTRIES = SURFACE + RESERVOIR + PRESSURE_REFERENCES

#: One value of each name that another registry must agree with, and the unit it is in.
REFERENCE_VALUES = {
    "sm3": (1.0, "standard_cubic_metre"),
    "scf": (0.028316846592, "standard_cubic_metre"),
    "Mscf": (28.316846592, "standard_cubic_metre"),
    "stb": (0.158987294928, "standard_cubic_metre"),
    "rb": (0.158987294928, "meter**3"),
    "rm3": (1.0, "meter**3"),
    "psia": (6894.757293168362, "pascal"),
    "bara": (1e5, "pascal"),
}

#: Every name of a surface volume.
SURFACE_NAMES = frozenset(
    name.strip()
    for line in SURFACE.splitlines()
    for place, name in enumerate(line.split("="))
    if place != 1 and name.strip()
)

#: Units measured from a zero of their own.
OFFSET_UNITS = frozenset(
    {"psi_gauge", "bar_gauge", "degree_Celsius", "degree_Fahrenheit"},
)
GAUGE_UNITS = {"psi_gauge": 6894.757293168362, "bar_gauge": 1e5}

#: Names that look like a unit of the trade and are not one, with the remedy.
REFUSED = {
    "Nm3": "a normal cubic metre is at 0 degC; convert it to sm3 at the fluid's standard state",
    "Msm3": "M is a thousand to some and a million to others: write 1e3 sm3 or 1e6 sm3",
    "MSm3": "M is a thousand to some and a million to others: write 1e3 sm3 or 1e6 sm3",
    "Mm3": "M is a thousand to some and a million to others: write 1e3 m**3 or 1e6 m**3",
    "Mcf": "write Mscf (a thousand standard cubic feet)",
    "mcf": "write Mscf (a thousand standard cubic feet)",
    "mscf": "write Mscf (a thousand standard cubic feet)",
    "MMcf": "write MMscf (a million standard cubic feet)",
    "mmscf": "write MMscf (a million standard cubic feet)",
    "M": "M alone is no unit; write Mscf or MMscf, or a number",
    "cf": "write ft**3 (reservoir volume) or scf (surface volume)",
    "bpd": "write rb/day (reservoir volume) or stb/day (surface volume)",
    "bopd": "write stb/day",
    "cfd": "write ft**3/day (reservoir volume) or scf/day (surface volume)",
    "bbl": "write rb (reservoir barrel) or stb (stock-tank barrel)",
    "bbls": "write rb (reservoir barrel) or stb (stock-tank barrel)",
    "barrel": "write rb (reservoir barrel) or stb (stock-tank barrel)",
    "barrels": "write rb (reservoir barrel) or stb (stock-tank barrel)",
    "oil_bbl": "write rb (reservoir barrel) or stb (stock-tank barrel)",
    "inf": "infinity is not a quantity",
    "nan": "'not a number' is not a quantity",
    "ms": "write s; a plural of m is not understood",
    "F": "write degF",
    "C": "write degC",
    "R": "write degR",
}

#: Canonical names in other registries that stand for something else than the trade means.
MISTAKEN_ELSEWHERE = {
    "milliday": "'md' is read as milliday there; write 'millidarcy'",
    "millidebye": "'mD' is read as millidebye there; write 'millidarcy'",
    "debye": "'D' is read as debye there; write 'darcy'",
    "rontobarn": "'rb' is read as ronto-barn there; write 'oil_barrel', or call "
    "wellindex.define_units(registry) once",
    "cup": "'cp' is read as cup there; write 'centipoise'",
}
