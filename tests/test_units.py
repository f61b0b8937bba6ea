"""Spellings of units, their factors and the words of every refusal.

Factors are typed from definitions: SI brochure, 9th edition (prefixes table 7, min h d L t table 8, °C section 2.3.1)
and NIST SP 811 (2008) appendix B.8 (inch 25.4 mm, pound 0.45359237 kg, BTU of the International Table 1055.05585262 J,
thermochemical calorie 4.184 J, mil 0.001 in, °F and °R).
"""

import os
import subprocess
import sys
from concurrent.futures import ThreadPoolExecutor
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from ingle_addin import unit_spelling, units
from ingle_addin.units import Kind, Unit, UnitError, read_unit

F = Fraction
IN, FT, MILE = F("0.0254"), F("0.3048"), F("1609.344")
LB, BTU, CAL, HR = F("0.45359237"), F("1055.05585262"), F("4.184"), F(3600)
DEG_F = F(5, 9)
CMIL = F("3.14159265358979323846264338327950288") / 4 * (IN / 1000) ** 2

# kind, factor, spellings (a bar between them)
ACCEPTED = [
    (Kind.LENGTH, F(1, 1000), "mm|mm.|㎜| mm |millimetre|Millimeters|\u00a0mm\u2009"),
    (Kind.LENGTH, F(1, 100), "cm|㎝|(cm)"),
    (Kind.LENGTH, F(1, 10), "dm"),
    (Kind.LENGTH, F(1), "m|metres|METER"),
    (Kind.LENGTH, F(1000), "km"),
    (Kind.LENGTH, F(1, 10**6), "µm|μm|um|micron|㎛"),
    (Kind.LENGTH, F(1, 10**9), "nm"),
    (Kind.LENGTH, IN, 'in|in.|inch|Inches|"|″|㏌'),
    (Kind.LENGTH, IN / 1000, "mil|mils|thou"),
    (Kind.LENGTH, FT, "ft|ft.|foot|feet"),
    (Kind.LENGTH, 3 * FT, "yd"),
    (Kind.AREA, F(1, 10**6), "mm²|mm2|mm^2|mm**2|mm^(2)|mm ²|sqmm|sq mm|sq. mm|square mm|㎟|mm·mm"),
    (Kind.AREA, F(1, 10**4), "cm²|cm2|㎠"),
    (Kind.AREA, F(1), "m²|m2|㎡"),
    (Kind.AREA, IN**2, 'in²|in^2|sq in|sq.in.|sq. in.|"²'),
    (Kind.AREA, FT**2, "ft²|ft2|sqft|sq ft"),
    (Kind.AREA, CMIL, "cmil"),
    (Kind.AREA, 1000 * CMIL, "kcmil|MCM"),
    (Kind.CONDUCTIVITY, F(1), "W/(m·K)|W/m·K|W/mK|W/m-K|W/m K|W/m/K|W/(m K)|W m-1 K-1|Wm-1K-1|W·m⁻¹·K⁻¹|Wm⁻¹K⁻¹"),
    (Kind.CONDUCTIVITY, F(1), "W·m−1·K−1|W m−¹ K−¹|W/m°C|W/m.°C|W/(m·C)|W/m-C|W/m ºC|W/m˚C|W/m ℃|W/m·degC|W/m deg. C"),
    (Kind.CONDUCTIVITY, F(1), "Watt/(m·Kelvin)|watts per metre per kelvin|W·(m·K)⁻¹|W/m\n·K|W/(m °K)|W/mC|(W/m)/K"),
    (Kind.CONDUCTIVITY, F(100), "W/(cm·K)|W/cmK|W/cm-°C"),
    (Kind.CONDUCTIVITY, F(1, 1000), "mW/(m·K)|mW/mK"),
    (Kind.CONDUCTIVITY, BTU / (HR * FT * DEG_F), "BTU/(hr·ft·°F)|BTU/hr-ft-F|Btu/h ft F|btu/hr.ft.°F|BTU/(h·ft·°R)"),
    (Kind.CONDUCTIVITY, BTU * IN / (HR * FT**2 * DEG_F), "BTU·in/(hr·ft²·°F)|BTU-in/hr-ft²-°F|BTU in/h sq ft F"),
    (Kind.CONDUCTIVITY, CAL * 100, "cal/(s·cm·°C)"),
    (Kind.FILM, F(1), "W/(m²·K)|W/m²K|W/m2K|W/m²·K|W/m2.K|W/m^2-K|W/m2-K|W/m**2/K|Wm-2K-1|W m⁻² K⁻¹|W/m2C|W/(㎡·K)"),
    (Kind.FILM, F(10**4), "W/cm²K|W/(cm2·°C)"),
    (Kind.FILM, 1 / IN**2, "W/in²-C"),
    (Kind.FILM, BTU / (HR * FT**2 * DEG_F), "BTU/(hr·ft²·°F)|BTU/hr-ft2-F|BTU/hr ft^2 °F|BTU/(hr-sq. ft.-deg F)"),
    (Kind.AREA_RESISTANCE, F(1), "m²K/W|m2.K/W|K·m²/W|m²·K/W|m2 °C/W|(m²·K)/W|K/(W/m²)|m²·K·W⁻¹|m² C/W"),
    (Kind.AREA_RESISTANCE, F(1, 10**4), "cm²·K/W|cm²K/W|cm2-C/W"),
    (Kind.AREA_RESISTANCE, F(1, 10**6), "mm²K/W|mm2·K/W"),
    (Kind.AREA_RESISTANCE, IN**2, "in²·°C/W"),
    (Kind.AREA_RESISTANCE, HR * FT**2 * DEG_F / BTU, "hr·ft²·°F/BTU|h ft2 F/Btu"),
    (Kind.GENERATION, F(10**9), "W/mm³|W/mm3|W/㎣"),
    (Kind.GENERATION, F(10**6), "W/cm3|W/cc|MW/m³|㎿/m³|W/ml|mW/mm^3"),
    (Kind.GENERATION, F(1000), "W/l|W/L|kW/m3|㎾/㎥"),
    (Kind.GENERATION, 1 / IN**3, "W/in³|W/cu in"),
    (Kind.GENERATION, BTU / (HR * FT**3), "BTU/(hr·ft³)|BTU/hr-ft3|BTU/hr/cu. ft."),
    (Kind.SPECIFIC_GENERATION, F(1), "W/kg|mW/g|Wkg-1|J/(kg·s)"),
    (Kind.SPECIFIC_GENERATION, 1 / LB, "W/lb"),
    (Kind.POWER, F(1), "W|Watt|watts|J/s|V·A"),
    (Kind.POWER, F(1000), "kW|kilowatts"),
    (Kind.POWER, F(1, 1000), "mW"),
    (Kind.POWER, F(10**6), "MW"),
    (Kind.POWER, BTU / HR, "BTU/hr|Btu/h"),
    (Kind.LINE_POWER, F(1000), "kW/m|W/mm"),
    (Kind.LINE_POWER, F(1, 1000), "W/km"),
    (Kind.LINE_POWER, F(100), "W/cm"),
    (Kind.LINE_POWER, 1 / FT, "W/ft"),
    (Kind.HEAT_FLUX, F(10**4), "W/cm2|W/cm²|Wcm-2"),
    (Kind.HEAT_FLUX, 1 / IN**2, "W/in²|W/sq in"),
    (Kind.HEAT_FLUX, F(1000), "kW/m²"),
    (Kind.HEAT_FLUX, BTU / (HR * FT**2), "BTU/(hr ft2)|BTU/hr-ft²"),
    (Kind.CURRENT, F(1), "A|amps|Ampere"),
    (Kind.CURRENT, F(1000), "kA|㎄"),
    (Kind.CURRENT, F(1, 1000), "mA"),
    (Kind.CURRENT_DENSITY, F(10**6), "A/mm2|A/mm²|MA/m²|A·mm⁻²|Amm-2|A/sqmm"),
    (Kind.CURRENT_DENSITY, F(10**4), "A/cm²"),
    (Kind.CURRENT_DENSITY, F(10**7), "kA/cm2"),
    (Kind.CURRENT_DENSITY, 1 / IN**2, "A/in2"),
    (Kind.VOLTAGE, F(1, 1000), "mV"),
    (Kind.VOLTAGE, F(1), "V|Volts"),
    (Kind.VOLTAGE, F(1000), "kV"),
    (Kind.RESISTANCE, F(1), "Ω|\u2126|Ohm|ohms|OHM|V/A"),
    (Kind.RESISTANCE, F(1, 1000), "mΩ|m\u2126|mOhm|milliohms"),
    (Kind.RESISTANCE, F(1, 10**6), "µΩ|μ\u2126|uohm|microohm"),
    (Kind.RESISTANCE, F(1000), "kΩ|kohm|㏀"),
    (Kind.RESISTIVITY, F(1), "Ω·m|Ohm*m|ohm-m|Ohm.m|Ωm"),
    (Kind.RESISTIVITY, F(1, 100), "Ω·cm|ohm-cm"),
    (Kind.RESISTIVITY, F(1, 10**8), "µΩ·cm|μΩ·cm|uOhm-cm|µΩcm"),
    (Kind.RESISTIVITY, F(1, 10**6), "Ω·mm²/m|Ωmm²/m|Ohm.mm2/m|ohm sq mm / m"),
    (Kind.RESISTIVITY, F(1, 10**9), "nΩ·m"),
    (Kind.RESISTIVITY, CMIL / FT, "Ω·cmil/ft"),
    (Kind.PER_TEMPERATURE, F(1), "1/K|K⁻¹|K-1|K^-1|K−¹|1⁄K|1/°C|1/C|1 / K|1/degC|°C⁻¹"),
    (Kind.PER_TEMPERATURE, F(1, 10**6), "ppm/K|ppm/°C|µm/(m·K)|ppm/C"),
    (Kind.PER_TEMPERATURE, F(1, 100), "%/K|%/°C|percent/K|pct per K|％/K"),
    (Kind.PER_TEMPERATURE, 1 / DEG_F, "1/°F|1/F|°F⁻¹|1/R"),
    (Kind.MOLAR_ENERGY, F(1000), "kJ/mol|kJ·mol⁻¹|kJmol-1"),
    (Kind.MOLAR_ENERGY, F(1), "J/mol|kJ/kmol"),
    (Kind.MOLAR_ENERGY, 1000 * CAL, "kcal/mol"),
    (Kind.ATTENUATION, F(1000), "1/mm|mm⁻¹"),
    (Kind.ATTENUATION, F(100), "cm-1|cm⁻¹|1/cm"),
    (Kind.SPEED, F(1), "m/s|m·s⁻¹|m s-1|㎧"),
    (Kind.SPEED, FT / 60, "ft/min|fpm|LFM"),
    (Kind.SPEED, 1000 / HR, "km/h|kph"),
    (Kind.SPEED, MILE / HR, "mph|mi/h"),
    (Kind.DENSITY, F(1000), "g/cm³|g/cc|kg/l|t/m³|gcm-3"),
    (Kind.DENSITY, F(1), "kg/m3|kg·m⁻³|kgm-3|㎏/m³"),
    (Kind.DENSITY, LB / FT**3, "lb/ft3|lbm/ft³|lb/cu ft"),
    (Kind.DENSITY, LB / IN**3, "lb/in³"),
    (Kind.SPECIFIC_HEAT, F(1000), "kJ/(kg·K)|kJ/kgK|kJ/kg-K|J/gK|kJ/kg/K"),
    (Kind.SPECIFIC_HEAT, F(1), "J/(kg·K)|J/kg K|J/(kg°C)|J kg⁻¹ K⁻¹|Jkg-1K-1|J/kg·K"),
    (Kind.SPECIFIC_HEAT, 1000 * CAL, "cal/(g·°C)|kcal/kg·K"),
    (Kind.SPECIFIC_HEAT, BTU / (LB * DEG_F), "BTU/(lb·°F)|BTU/lb-F"),
    (Kind.ENERGY_DENSITY, F(10**6), "MJ/m³|J/cm3|kJ/l"),
    (Kind.ENERGY_DENSITY, F(3_600_000), "kWh/m³"),
    (Kind.TIME, F(1), "s|sec|seconds"),
    (Kind.TIME, F(60), "min|minutes"),
    (Kind.TIME, HR, "h|hr|hrs|Hours"),
    (Kind.TIME, 24 * HR, "d|days"),
    (Kind.RATIO, F(1), "-|–|—|−|1|m/m"),
    (Kind.RATIO, F(1, 100), "%|percent|pct|％"),
    (Kind.RATIO, F(1, 1000), "‰"),
    (Kind.RATIO, F(1, 10**6), "ppm"),
    (Kind.PERCENT, F(1), "%"),
    (Kind.PERCENT, F(100), "-|1"),
    (Kind.TEXT, F(1), "-"),
]
# base [°C] = (x + shift) · factor; NIST SP 811 B.8: t/°C = (t/°F − 32)/1.8, = T/K − 273.15, = T/°R/1.8 − 273.15
TEMPERATURES = [
    (1.0, 0.0, "°C|degC|C|℃|ºC|˚C|deg C|deg. C|degrees C|Celsius|degrees Celsius|° C|(°C)"),
    (1.0, -273.15, "K|kelvin|Kelvin|\u212a|°K"),
    (5 / 9, -32.0, "°F|F|degF|℉|Fahrenheit|deg F"),
    (5 / 9, -491.67, "°R|R|Rankine|degR"),
]

HEATS = (Kind.HEAT_FLUX, Kind.LINE_POWER, Kind.POWER)
JOINT = (Kind.AREA_RESISTANCE, Kind.FILM)
MM = "; write for example [mm]"
COULOMB = "'C' could be a coulomb or a degree Celsius, and neither belongs here"
BRACKETS = "does not say where the division ends; use brackets, or write for example"
NUMBER = "holds a number, and a unit carries none; put the number into the values"
PREFIX = "puts a prefix on a temperature; write K or °C"
DEGREE = "does not say which degree; write °C, °F or K"
HERE = "belongs here; write for example"
EITHER = f"a thermal resistance of an area or a heat transfer coefficient {HERE} [m²·K/W] or [W/(m²·K)]"
ANY_HEAT = f"a heat flux, a power by length or a power {HERE} [W/m²], [W/m] or [W]"
NEITHER = "and neither belongs here; write for example"
REFUSED = [
    (Kind.LENGTH, None, "needs its unit, for example [mm]"),
    (Kind.LENGTH, "", "needs its unit, for example [mm]"),
    (Kind.LENGTH, " \u00a0", "needs its unit, for example [mm]"),
    (Kind.LENGTH, "-", "'-' is a plain number, but a length belongs here" + MM),
    (Kind.LENGTH, "Mm", "'Mm' would be a megametre; write mm or m"),
    (Kind.LENGTH, "MM", "'MM' is not a unit; write mm"),
    (Kind.LENGTH, "CM", "'CM' is not a unit; write cm"),
    (Kind.LENGTH, "IN", "'IN' is not a unit; write in"),
    (Kind.LENGTH, "Km", "'Km' is not a unit; write km, or K·m with a dot"),
    (Kind.LENGTH, "mn", "'mn' is not a unit known here" + MM),
    (Kind.LENGTH, "furlong", "'furlong' is not a unit known here" + MM),
    (Kind.LENGTH, "10 mm", f"'10 mm' {NUMBER}"),
    (Kind.LENGTH, "1e3 m", f"'1e3 m' {NUMBER}"),
    (Kind.LENGTH, "mm 2", f"'mm 2' {NUMBER}"),
    (Kind.LENGTH, "m^2.5", f"'m^2.5' {NUMBER}"),
    (Kind.LENGTH, "mm2", "'mm2' is an area, but a length belongs here" + MM),
    (Kind.LENGTH, "W−m", "'W−m' has the dimension kg·m³/s³, but a length belongs here" + MM),
    (Kind.LENGTH, "mm; in", "the character ';' (U+003B, SEMICOLON) cannot stand in a unit" + MM),
    (Kind.LENGTH, "mm′", "the character '′' (U+2032, PRIME) cannot stand in a unit" + MM),
    (Kind.LENGTH, "“mm”", "the character '“' (U+201C, LEFT DOUBLE QUOTATION MARK) cannot stand in a unit" + MM),
    (Kind.LENGTH, "~mm", "the character '~' (U+007E, TILDE) cannot stand in a unit" + MM),
    (Kind.LENGTH, "€ mm", "the character '€' (U+20AC, EURO SIGN) cannot stand in a unit" + MM),
    (Kind.LENGTH, "m½", "the character '½' (U+00BD, VULGAR FRACTION ONE HALF) cannot stand in a unit" + MM),
    (Kind.LENGTH, "mm\u200b", "the character (U+200B, ZERO WIDTH SPACE) cannot stand in a unit" + MM),
    (Kind.LENGTH, "мм", "the character 'м' (U+043C, CYRILLIC SMALL LETTER EM) cannot stand in a unit" + MM),
    (Kind.LENGTH, "m\x00", "the character (U+0000, without a name) cannot stand in a unit" + MM),
    (Kind.LENGTH, "m" * 61, "a unit has at most 60 characters, not 61" + MM),
    (Kind.LENGTH, "(mm", "'(mm' has a bracket that is not closed" + MM),
    (Kind.LENGTH, "mm)", "'mm)' cannot be read from ')' on" + MM),
    (Kind.LENGTH, "m//m", "'m//m' cannot be read from '/m' on" + MM),
    (Kind.LENGTH, "m·", "'m·' ends where a unit should follow" + MM),
    (Kind.LENGTH, "m^5", "'m^5' has the power 5; a power is 2 to 4 or -1 to -4" + MM),
    (Kind.CURRENT, "A1", "'A1' has the power 1; a power is 2 to 4 or -1 to -4; write for example [A]"),
    (Kind.LENGTH, "mm %", "'mm %' mixes a percentage with another unit" + MM),
    (Kind.AREA, "mmm", "'mmm' is not a unit known here; write for example [mm²]"),
    (Kind.RATIO, "%²", "'%²' mixes a percentage with another unit; write for example [-]"),
    (Kind.LENGTH, "m^0", "'m^0' has the power 0; a power is 2 to 4 or -1 to -4" + MM),
    (Kind.LENGTH, "C", COULOMB + MM),
    (Kind.AREA, 'mm"', "'mm\"' cannot be read from '\"' on; write for example [mm²]"),
    (Kind.AREA, '"mm', "'\"mm' cannot be read from 'mm' on; write for example [mm²]"),
    (Kind.AREA, "sq", "'sq' needs a unit of length after it; write for example sq mm"),
    (Kind.AREA, "mcm", "'mcm' is not a unit; write MCM"),
    (Kind.CONDUCTIVITY, "w/mK", "'w' is not a unit; write W"),
    (Kind.CONDUCTIVITY, "W/mk", "'mk' is not a unit; write m·K"),
    (Kind.CONDUCTIVITY, "W/kK", f"'W/kK' {PREFIX}"),
    (Kind.CONDUCTIVITY, "W/m°c", f"'°' {DEGREE}"),
    (Kind.CONDUCTIVITY, "W/m⁰C", "'W/m⁰C' has the power 0; a power is 2 to 4 or -1 to -4; write for example [W/(m·K)]"),
    (Kind.CONDUCTIVITY, "W/m²K", f"'W/m²K' is a heat transfer coefficient, but a thermal conductivity {HERE} [W/(m·K)]"),
    (Kind.FILM, "BTUH/ft2F", "'BTUH' is not a unit; write BTU/hr"),
    (Kind.FILM, "W/m2K-1", f"'W/m2K-1' {BRACKETS} [W/(m²·K)]"),
    (JOINT, "K/W", f"'K/W' is a thermal resistance of a whole part, but {EITHER}"),
    (JOINT, "W/K", f"'W/K' is a thermal conductance of a whole part, but {EITHER}"),
    (JOINT, "K/W·m²", f"'K/W·m²' {BRACKETS} [m²·K/W] or [W/(m²·K)]"),
    (JOINT, None, "needs its unit, for example [m²·K/W] or [W/(m²·K)]"),
    (Kind.GENERATION, "w/m³", "'w' is not a unit; write W"),
    (Kind.GENERATION, "C/m³", COULOMB + "; write for example [W/m³]"),
    (Kind.GENERATION, "W/m²", f"'W/m²' is a heat flux, but a heat generation by volume {HERE} [W/m³]"),
    (Kind.SPECIFIC_GENERATION, "W/Kg", "'Kg' is not a unit; write kg"),
    (HEATS, "KW", "'KW' is not a unit; write kW"),
    (HEATS, "mw", "'mw' is not a unit; write mW or MW"),
    (HEATS, "hp", "'hp' has several meanings; write W or kW"),
    (HEATS, "VA", "'VA' is apparent power, not heat; write W"),
    (HEATS, "MBTU/hr", "'MBTU' is a thousand BTU to some and a million to others; write kBTU"),
    (HEATS, "W/m·m", f"'W/m·m' {BRACKETS} [W/m²], [W/m] or [W]"),
    (HEATS, "A", f"'A' is a current, but {ANY_HEAT}"),
    (Kind.CURRENT, "MA", "'MA' would be a million amperes; write mA or A"),
    (Kind.CURRENT, "C/s", COULOMB + "; write for example [A]"),
    (Kind.CURRENT, "F", f"'F' could be a farad or a degree Fahrenheit, {NEITHER} [A]"),
    (Kind.CURRENT_DENSITY, "A/m", f"'A/m' is a current by length, but a current density {HERE} [A/mm²]"),
    (Kind.VOLTAGE, "MV", "'MV' is not a unit; write mV"),
    (Kind.RESISTANCE, "R", f"'R' could be the gas constant or a degree Rankine, {NEITHER} [mΩ]"),
    (Kind.RESISTIVITY, "S/m", f"'S/m' is an electrical conductivity, but an electrical resistivity {HERE} [µΩ·cm]"),
    (Kind.PER_TEMPERATURE, "10⁻⁶/K", f"'10⁻⁶/K' {NUMBER}"),
    (Kind.PER_TEMPERATURE, "%", f"'%' is a plain number, but a change per degree {HERE} [1/K]"),
    (Kind.PER_TEMPERATURE, "1/mK", f"'1/mK' has the dimension 1/(m·K), but a change per degree {HERE} [1/K]"),
    (Kind.PER_TEMPERATURE, "1/K·%", "'1/K·%' mixes a percentage with another unit; write for example [1/K]"),
    (Kind.MOLAR_ENERGY, "eV", "'eV' is the energy of one particle; write kJ/mol (1 eV is 96.485 kJ/mol)"),
    (Kind.MOLAR_ENERGY, "kJ", f"'kJ' is an energy, but an energy by amount {HERE} [kJ/mol]"),
    (Kind.MOLAR_ENERGY, "Cal/mol", "'Cal' could be a calorie or a thousand; write kcal or cal"),
    (Kind.DENSITY, "gm/cc", "'gm' is not the symbol of the gram; write g"),
    (Kind.TIME, "S", f"'S' is an electrical conductance, but a time {HERE} [s]"),
    (Kind.RATIO, "mm", f"'mm' is a length, but a ratio {HERE} [-]"),
    (Kind.RATIO, "K", f"'K' is a temperature, but a ratio {HERE} [-]"),
    (Kind.PERCENT, "W", f"'W' is a power, but a percentage {HERE} [%]"),
    (Kind.TEXT, "mm", "takes no unit; leave out [mm]"),
    (Kind.TEXT, "€", "takes no unit; leave out [€]"),
    (Kind.TEMPERATURE, None, "needs its unit, for example [°C]"),
    (Kind.TEMPERATURE, "mK", f"'mK' {PREFIX}"),
    (Kind.TEMPERATURE, "m °C", f"'m °C' {PREFIX}"),
    (Kind.TEMPERATURE, "kK", f"'kK' {PREFIX}"),
    (Kind.TEMPERATURE, "c", "'c' is not a unit; write °C"),
    (Kind.TEMPERATURE, "k", "'k' is not a unit; write K"),
    (Kind.TEMPERATURE, "deg", f"'deg' {DEGREE}"),
    (Kind.TEMPERATURE, "%", "'%' of a temperature has no meaning; write for example [°C]"),
    (Kind.TEMPERATURE, "K·m/m", "'K·m/m' is more than the unit of a temperature; write for example [°C]"),
    (Kind.TEMPERATURE, "K2", f"'K2' has the dimension K², but a temperature {HERE} [°C]"),
    (Kind.TEMPERATURE_DIFFERENCE, "%", "'%' of a temperature has no meaning; write for example [K]"),
    (Kind.TEMPERATURE_DIFFERENCE, None, "needs its unit, for example [K]"),
    (Kind.TEMPERATURE_DIFFERENCE, "MK", f"'MK' {PREFIX}"),
]  # fmt: skip


@pytest.mark.parametrize(
    ("kind", "factor", "text"), [(kind, factor, text) for kind, factor, texts in ACCEPTED for text in texts.split("|")]
)
def test_accepted_spelling(kind: Kind, factor: Fraction, text: str) -> None:
    # float(Fraction) is the double nearest to the exact ratio
    assert read_unit(text, kind) == Unit(kind, float(factor), 0.0)


@pytest.mark.parametrize(
    ("factor", "shift", "text"),
    [(factor, shift, text) for factor, shift, texts in TEMPERATURES for text in texts.split("|")],
)
def test_temperature_and_difference(factor: float, shift: float, text: str) -> None:
    assert read_unit(text, Kind.TEMPERATURE) == Unit(Kind.TEMPERATURE, factor, shift)
    assert read_unit(text, Kind.TEMPERATURE_DIFFERENCE) == Unit(Kind.TEMPERATURE_DIFFERENCE, factor, 0.0)


@pytest.mark.parametrize(("kinds", "text", "message"), REFUSED)
def test_refused_spelling(kinds: Kind | tuple[Kind, ...], text: str | None, message: str) -> None:
    with pytest.raises(UnitError) as caught:
        read_unit(text, *(kinds if isinstance(kinds, tuple) else (kinds,)))
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("text", "kind", "printed"),  # NIST SP 811 (2008), appendix B.8, as printed there
    [
        ("Btu·ft/(h·ft²·°F)", Kind.CONDUCTIVITY, 1.730735),
        ("Btu·in/(h·ft²·°F)", Kind.CONDUCTIVITY, 1.442279e-01),
        ("Btu/(h·ft²·°F)", Kind.FILM, 5.678263),
        ("Btu/(h·ft²)", Kind.HEAT_FLUX, 3.154591),
        ("Btu/(lb·°F)", Kind.SPECIFIC_HEAT, 4.1868e03),
        ("°F·h·ft²/Btu", Kind.AREA_RESISTANCE, 1.761102e-01),
        ("Btu/h", Kind.POWER, 2.930711e-01),
        ("cmil", Kind.AREA, 5.067075e-10),
        ("lb/ft³", Kind.DENSITY, 1.601846e01),
        ("mi/h", Kind.SPEED, 4.4704e-01),
        ("W/in²", Kind.HEAT_FLUX, 1.550003e03),
    ],
)
def test_factor_as_printed_in_the_guide(text: str, kind: Kind, printed: float) -> None:
    assert float(f"{read_unit(text, kind).factor:.6e}") == printed


@pytest.mark.parametrize("dot", "·⋅∙•×*.-‐‑−– \u00a0\u2009\u202f")
@pytest.mark.parametrize("slash", "/∕⁄／")
def test_look_alikes(dot: str, slash: str) -> None:
    assert read_unit(f"W{slash}m²{dot}K", Kind.FILM) == Unit(Kind.FILM, 1.0)


def test_first_kind_decides_whether_a_unit_may_be_missing() -> None:
    assert read_unit(None, Kind.RATIO, Kind.LENGTH) == Unit(Kind.RATIO, 1.0)
    assert read_unit(" ", Kind.PERCENT) == Unit(Kind.PERCENT, 1.0)
    assert read_unit(None, Kind.TEXT) == Unit(Kind.TEXT, 1.0)
    with pytest.raises(UnitError, match=r"^needs its unit, for example \[mm\] or \[-\]$"):
        read_unit(None, Kind.LENGTH, Kind.RATIO)


@pytest.mark.parametrize(
    ("text", "kinds", "kind"),
    [
        ("W/m²K", JOINT, Kind.FILM),
        ("m²K/W", JOINT, Kind.AREA_RESISTANCE),
        ("W", HEATS, Kind.POWER),
        ("W/m", HEATS, Kind.LINE_POWER),
        ("W/m²", HEATS, Kind.HEAT_FLUX),
        ("%", (Kind.LENGTH, Kind.RATIO), Kind.RATIO),
        ("%", (Kind.RATIO, Kind.PERCENT), Kind.RATIO),
        ("%", (Kind.PERCENT, Kind.RATIO), Kind.PERCENT),
    ],
)
def test_kind_chosen_among_several(text: str, kinds: tuple[Kind, ...], kind: Kind) -> None:
    assert read_unit(text, *kinds).kind is kind


@pytest.mark.parametrize("kind", [kind for kind in Kind if kind.unit])
def test_base_units_and_examples_read_as_their_kind(kind: Kind) -> None:
    assert read_unit(kind.unit, kind) == Unit(kind, 1.0)
    assert read_unit(kind.example, kind).kind is kind


def test_temperature_values() -> None:
    fahrenheit, kelvin = read_unit("°F", Kind.TEMPERATURE), read_unit("K", Kind.TEMPERATURE)
    assert (fahrenheit.to_base(32.0), fahrenheit.to_base(212.0), fahrenheit.to_base(-40.0)) == (0.0, 100.0, -40.0)
    assert (kelvin.to_base(273.15), kelvin.from_base(20.0)) == (0.0, 293.15)
    assert read_unit("°F", Kind.TEMPERATURE_DIFFERENCE).to_base(9.0) == 5.0
    assert read_unit("°C", Kind.TEMPERATURE_DIFFERENCE).to_base(5.0) == 5.0


@pytest.mark.parametrize(("text", "kind", "per"), [("mm", Kind.LENGTH, 1000), ("%", Kind.RATIO, 100)])
def test_decimal_values_keep_their_digits(text: str, kind: Kind, per: int) -> None:
    unit = read_unit(text, kind)
    for tenths in range(20_000):
        exact = float(F(tenths, 10 * per))
        assert abs(unit.to_base(tenths / 10) - exact) <= np.spacing(exact), tenths
        # a whole number is a double itself, so one rounding is all there is
        assert unit.to_base(float(tenths)) == float(F(tenths, per)), tenths


FACTORS = sorted({(float(factor), 0.0) for _, factor, _ in ACCEPTED} | {row[:2] for row in TEMPERATURES})
SIZES = st.floats(1e-9, 1e12)
NUMBERS = SIZES | SIZES.map(lambda size: -size) | st.just(0.0)


@given(st.sampled_from(FACTORS), st.lists(NUMBERS, min_size=1, max_size=5))
def test_round_trip_and_arrays(row: tuple[float, float], numbers: list[float]) -> None:
    unit = Unit(Kind.LENGTH, *row)
    there = unit.to_base(np.array(numbers))
    back = unit.from_base(there)
    # two roundings each way of a number no larger than |x| + |shift|
    room = 4 * np.spacing(np.abs(numbers) + abs(unit.shift))
    assert np.all(np.abs(back - numbers) <= room)
    assert there.tolist() == [unit.to_base(number) for number in numbers]
    assert back.tolist() == [unit.from_base(base) for base in there.tolist()]


def test_base_unit_keeps_bits() -> None:
    values = np.array([0.1, -0.0, 5e-324, np.nan, np.inf])
    for text, kind in (("m", Kind.LENGTH), ("°C", Kind.TEMPERATURE), ("W/m³", Kind.GENERATION)):
        unit = read_unit(text, kind)
        assert unit.to_base(values).tobytes() == values.tobytes() == unit.from_base(values).tobytes()


@settings(deadline=None)
@given(st.text(max_size=70) | st.text('mkMWKCFRAVJhinft²³⁻-123/·. ^()°%Ωµ"', max_size=14), st.sampled_from(Kind))
def test_any_text_is_a_unit_or_a_unit_error(text: str, kind: Kind) -> None:
    try:
        unit = read_unit(text, kind)
    except UnitError as error:
        message = str(error)
    else:
        message = ""
        assert unit.kind is kind
        assert 0 < unit.factor < float("inf")
    assert "cannot be read as a unit" not in message  # pint never sees what it cannot read


def test_every_name_of_ours_is_known_to_pint() -> None:
    words = {word.replace("ω", "ohm") for word in unit_spelling._LOWER_WORDS}
    for name in words.union(unit_spelling._SYMBOLS) - {"%", "‰", "ppm", "pct", "percent"}:
        with pytest.raises(UnitError) as caught:
            read_unit(f"{name}·mol·A", Kind.LENGTH)
        assert "but a length belongs here" in str(caught.value)


def test_failure_inside_pint_is_a_unit_error_and_is_not_remembered(monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(_: object) -> None:
        raise AssertionError

    with monkeypatch.context() as patch:
        patch.setattr(units, "_size", fail)
        with pytest.raises(UnitError) as caught:
            read_unit("mm·m", Kind.AREA)
    assert str(caught.value) == "'mm·m' cannot be read as a unit; write for example [mm²]"
    assert read_unit("mm·m", Kind.AREA) == Unit(Kind.AREA, 0.001)


def test_many_threads_at_once() -> None:
    texts = [(text, kind) for kind, _, texts in ACCEPTED for text in texts.split("|")]
    expected = [read_unit(text, kind) for text, kind in texts]
    units._read.cache_clear()
    units._registry.cache_clear()
    units._dimension.cache_clear()
    with ThreadPoolExecutor(8) as pool:
        rounds = [pool.submit(lambda: [read_unit(text, kind) for text, kind in texts]) for _ in range(8)]
        assert all(done.result() == expected for done in rounds)


def test_pint_is_imported_for_uncommon_units_only() -> None:
    code = (
        "import sys; from ingle_addin.units import Kind, read_unit; read_unit('°C', Kind.TEMPERATURE); "
        "read_unit('mm', Kind.LENGTH); before = 'pint' in sys.modules; read_unit('mile', Kind.LENGTH); "
        "print(before, 'pint' in sys.modules)"
    )
    path = os.pathsep.join(sys.path)
    done = subprocess.run(
        [sys.executable, "-c", code], env=os.environ | {"PYTHONPATH": path}, capture_output=True, text=True, check=True
    )
    assert done.stdout == "False True\n"
