"""How people spell units: a text such as ``W/m²K`` becomes powers of named units, or a complaint that says what to write.

Nothing is dropped and nothing is guessed. Spelling variants go through one table, a character outside the whitelist is
an error that names it, and every unit name must be one of the tables below: a general reader of units also knows
megametres, moles per litre and the gas constant, which is how a slip of the keyboard becomes a wrong number.

Everything after a slash is divided by, as engineers write it: ``W/m·K`` is W/(m·K). `Spelling.strict` keeps the
left-to-right reading beside it, so that a text with two possible meanings can be refused.
"""

from __future__ import annotations

import re
import unicodedata
from collections import Counter
from dataclasses import dataclass

LONGEST = 60
HIGHEST_POWER = 4

_PREFIXES = {
    "n": "nano", "µ": "micro", "u": "micro", "m": "milli", "c": "centi", "d": "deci", "k": "kilo", "M": "mega",
    "G": "giga",
}  # fmt: skip

# Symbols, the name of the unit in pint, the prefixes that can be meant, and the words that stand for it in any letter
# case (ohm is already Ω when they are looked up). There is no Mm, and no prefix on a temperature.
_PREFIXED = (
    ("m", "meter", "nµumcdk", "meter metre"),
    ("g", "gram", "µumk", "gram gramme"),
    ("s sec", "second", "nµum", "second"),
    ("A", "ampere", "nµumkMG", "ampere amp"),
    ("V", "volt", "nµumk", "volt"),
    ("Ω", "ohm", "nµumkM", "ω"),
    ("S", "siemens", "µumkM", ""),
    ("W", "watt", "nµumkMG", "watt"),
    ("J", "joule", "µumkMG", "joule"),
    ("Wh", "watt_hour", "kM", ""),
    ("cal", "calorie", "k", "calorie"),
    ("mol", "mole", "mk", "mole"),
    ("l L", "liter", "µumcd", "liter litre"),
    ("BTU Btu btu", "international_british_thermal_unit", "k", ""),
    ("cmil", "circular_mil", "k", ""),
)
_SINGLE = {
    "in": "inch", '"': "inch", "ft": "foot", "yd": "yard", "mi": "mile", "mil": "thou", "mils": "thou",
    "MCM": "kilocircular_mil", "min": "minute", "mins": "minute", "h": "hour", "hr": "hour", "hrs": "hour", "d": "day",
    "lb": "pound", "lbs": "pound", "lbm": "pound", "t": "metric_ton", "%": "percent", "‰": "permille", "ppm": "ppm",
    "pct": "percent",
}  # fmt: skip
_WORDS = {
    "inch": "inch", "inches": "inch", "foot": "foot", "feet": "foot", "yard": "yard", "yards": "yard", "mile": "mile",
    "miles": "mile", "thou": "thou", "micron": "micrometer", "microns": "micrometer", "minute": "minute",
    "minutes": "minute", "hour": "hour", "hours": "hour", "day": "day", "days": "day", "pound": "pound",
    "pounds": "pound", "tonne": "metric_ton", "tonnes": "metric_ton", "percent": "percent",
}  # fmt: skip
# Inside a compound a degree is a difference of temperature; only a lone one can be a temperature with its own zero.
_DEGREES = {"K": "kelvin", "C": "kelvin", "F": "delta_degree_Fahrenheit", "R": "degree_Rankine"}

_DEGREE = ("does not say which degree", "write °C, °F or K")
_MBTU = ("is a thousand BTU to some and a million to others", "write kBTU")
_BTUH = ("is not a unit", "write BTU/hr")
_REMEDIES = {
    "Mm": ("would be a megametre", "write mm or m"),
    "Km": ("is not a unit", "write km, or K·m with a dot"),
    "gm": ("is not the symbol of the gram", "write g"),
    "Cal": ("could be a calorie or a thousand", "write kcal or cal"),
    "eV": ("is the energy of one particle", "write kJ/mol (1 eV is 96.485 kJ/mol)"),
    "meV": ("is the energy of one particle", "write J/mol (1 meV is 96.485 J/mol)"),
    "VA": ("is apparent power, not heat", "write W"),
    "kVA": ("is apparent power, not heat", "write kW"),
    "hp": ("has several meanings", "write W or kW"),
    "sq": ("needs a unit of length after it", "write for example sq mm"),
    "cu": ("needs a unit of length after it", "write for example cu in"),
    **dict.fromkeys(("°", "deg", "degree", "degrees"), _DEGREE),
    **dict.fromkeys(("MBTU", "MBtu", "MMBTU", "MMBtu"), _MBTU),
    **dict.fromkeys(("BTUH", "BTUh", "Btuh", "BTUHR"), _BTUH),
}
_ALONE = {
    "MA": ("would be a million amperes", "write mA or A"),
    "GA": ("would be a thousand million amperes", "write A or kA"),
}

# One character each, and what it stands for. Letters made of ready-printed units are spelled out.
_LOOK_ALIKES = str.maketrans(
    dict.fromkeys("⋅∙•‧・×∗*", "·")
    | dict.fromkeys("∕⁄／÷", "/")
    | dict.fromkeys("−–—‐‑‒﹣－", "-")
    | dict.fromkeys("\u00a0\u2002\u2003\u2004\u2005\u2006\u2007\u2008\u2009\u200a\u202f\u205f\u3000\t\n\r\v\f", " ")
    | dict.fromkeys("º˚", "°")
    | {"℃": "°C", "℉": "°F", "μ": "µ", "″": '"', "”": '"', "（": "(", "）": ")", "％": "%", "ℓ": "l"}
    | {"㎚": "nm", "㎛": "µm", "㎜": "mm", "㎝": "cm", "㎞": "km", "㏌": "in"}
    | {"㎟": "mm²", "㎠": "cm²", "㎡": "m²", "㎢": "km²", "㎣": "mm³", "㎤": "cm³", "㎥": "m³", "㏄": "cc"}
    | {"㎍": "µg", "㎎": "mg", "㎏": "kg", "㎕": "µl", "㎖": "ml", "㎗": "dl", "㏖": "mol", "㎈": "cal", "㎉": "kcal"}
    | {"㎻": "nW", "㎼": "µW", "㎽": "mW", "㎾": "kW", "㎿": "MW", "㏀": "kΩ", "㏁": "MΩ", "㎧": "m/s"}
    | {"㎁": "nA", "㎂": "µA", "㎃": "mA", "㎄": "kA", "㎵": "nV", "㎶": "µV", "㎷": "mV", "㎸": "kV"}
    | {"㎱": "ns", "㎲": "µs", "㎳": "ms"}
)
_SUPERSCRIPTS = "⁰¹²³⁴⁵⁶⁷⁸⁹⁻"
_PLAIN_DIGITS = str.maketrans(_SUPERSCRIPTS, "0123456789-")
_ALLOWED = frozenset('ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789µΩ°%‰·./-^()" ' + _SUPERSCRIPTS)

_REWRITES = tuple(
    (re.compile(pattern), replacement)
    for pattern, replacement in (
        (r"··", "^"),  # the power sign ** after its stars became dots
        (r"-?([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+)", lambda m: "^" + m[0].translate(_PLAIN_DIGITS)),  # K−¹ with a full-size minus too
        (r"(?i:ohms?)", "Ω"),
        (r"(?i:celsius)", "°C"),
        (r"(?i:fahrenheit)", "°F"),
        (r"(?i:rankine)", "°R"),
        (r"(?i:kelvins?)", "°K"),
        (r"(?:°|(?i:deg(?:rees?)?)\.?)\s*°?([CFRK])", r"°\1"),
        (r"(?<![A-Za-z])per(?![A-Za-z])", "/"),
        (r"(?<=[A-Za-z])\.(?=\s*(?:$|[\s/)^·-]))", ""),  # the full stop of in. and sq. ft.
        (r"(?<![A-Za-z])(?:sq|square)\.?\s*(mm|cm|m|in|ft|inch|feet|yd|mil)(?![A-Za-z])", r"\1^2"),
        (r"(?<![A-Za-z])(?:cu|cubic)\.?\s*(mm|cm|m|in|ft|inch|feet|yd)(?![A-Za-z])", r"\1^3"),
        (r"(?<![A-Za-z])cc(?![A-Za-z])", "cm^3"),
        (r"(?<![A-Za-z])mph(?![A-Za-z])", "(mi/h)"),
        (r"(?<![A-Za-z])(?:kph|kmh)(?![A-Za-z])", "(km/h)"),
        (r"(?<![A-Za-z])(?:fpm|lfm|LFM)(?![A-Za-z])", "(ft/min)"),
    )
)  # fmt: skip

_NAME = re.compile(r'°[CFRK]|°|[A-Za-zµΩ]+|[%‰"]')
_POWER = re.compile(r"\s*\^\s*(?:\((-?\d+)\)|(-?\d+))|(-?\d+)")
_STARTS = r'(?=[A-Za-zµΩ°%‰"(])'
# Side by side is a product too, as in m²K; but not beside an inch sign, since mm" is no unit.
_MULTIPLY = re.compile(rf"\s*[·.]\s*|\s*-\s*{_STARTS}|\s+{_STARTS}|(?<!\")(?=[A-Za-zµΩ°%‰(])")
_ONE_OVER = re.compile(r"\s*1(?=\s*/)")
_SLASH = re.compile(r"\s*/\s*")
_OPEN = re.compile(r"\s*\(\s*")
_CLOSE = re.compile(r"\s*\)")
_PREFIXED_DEGREE = re.compile(rf"[{''.join(_PREFIXES)}]\s?°?[CFKR]")
# Two lengths side by side are no area: mmm is a slip of the finger.
_GLUED = re.compile(
    "(?:(?P<length>mm|cm|µm|um|m|ft|lb)|(?P<other>[kMm]?W|[km]?A|[km]?V|[kM]?J|k?cal|[nµumkM]?Ω|kg|g))"
    "(?:(?P<degree>[KCFR])|(?P<small>[kcf])|(?P<unit>mm|cm|m|kg|mol))"
)
_SHARES = frozenset({"percent", "permille", "ppm"})


def _all_names() -> tuple[dict[str, str], dict[str, str]]:
    symbols, words = dict(_SINGLE), dict(_WORDS)
    for row_symbols, name, prefixes, row_words in _PREFIXED:
        for symbol in row_symbols.split():
            symbols[symbol] = name
            symbols |= {prefix + symbol: _PREFIXES[prefix] + name for prefix in prefixes}
        for word in row_words.split():
            for long in ("", *(_PREFIXES[prefix] for prefix in prefixes)):
                words |= {long + word + ending: long + name for ending in ("", "s")}
    return symbols, words


_SYMBOLS, _LOWER_WORDS = _all_names()


class SpellingError(ValueError):
    """A text that is no unit. `remedy` is empty where only the heading can tell what belongs there."""

    def __init__(self, problem: str, remedy: str = "") -> None:
        super().__init__(problem)
        self.problem = problem
        self.remedy = remedy


@dataclass(frozen=True, slots=True)
class Spelling:
    """What a unit text says."""

    powers: dict[str, int]  # pint's name of each unit, and its power
    strict: dict[str, int]  # the same, if a slash reached only to the next multiplication
    degree: str  # C, F, K or R if the text is a lone temperature, else empty
    letter: str  # C, F or R if that letter stands somewhere without a degree sign


def read_spelling(text: str) -> Spelling:
    """Read the text of a unit, or raise SpellingError."""
    text = text.strip()
    if len(text) > LONGEST:
        raise SpellingError(f"a unit has at most {LONGEST} characters, not {len(text)}")
    cleaned = clean(text)
    if cleaned in {"-", "1"}:
        return Spelling({}, {}, "", "")
    return _Reader(text, cleaned).read()


def clean(text: str) -> str:
    """One spelling for all look-alikes: NFC, the table of signs, then superscripts, words and abbreviations."""
    # Never NFKC: it turns m² into m2 and ½ into 1⁄2, and hides what was typed.
    text = unicodedata.normalize("NFC", text).translate(_LOOK_ALIKES)
    for character in text:
        if character not in _ALLOWED:
            shown = f"'{character}' " if character.isprintable() else ""
            name = unicodedata.name(character, "without a name")
            raise SpellingError(f"the character {shown}(U+{ord(character):04X}, {name}) cannot stand in a unit")
    for pattern, replacement in _REWRITES:
        text = pattern.sub(replacement, text)
    return text.strip()


class _Reader:
    """Recursive descent over ``unit (· unit)* (/ unit (· unit)*)*``; brackets group, a power follows a unit or bracket."""

    def __init__(self, text: str, cleaned: str) -> None:
        self.text = text
        self.cleaned = cleaned
        self.at = 0
        self.units = 0
        self.degree = ""
        self.letter = ""
        self.last = ""

    def read(self) -> Spelling:
        if _PREFIXED_DEGREE.fullmatch(self.cleaned):
            raise self.prefixed_degree()
        powers, strict = self.expression()
        if self.at < len(self.cleaned):
            raise self.unreadable()
        if self.units == 1 and self.last in _ALONE:
            problem, remedy = _ALONE[self.last]
            raise SpellingError(f"'{self.last}' {problem}", remedy)
        powers, strict = _without_zeros(powers), _without_zeros(strict)
        if _SHARES.intersection(powers) and not _is_share(powers):
            raise SpellingError(f"'{self.text}' mixes a percentage with another unit")
        lone = self.units == 1 and list(powers.values()) == [1]
        return Spelling(powers, strict, self.degree if lone else "", self.letter)

    def expression(self) -> tuple[Counter[str], Counter[str]]:
        powers: Counter[str] = Counter()
        strict: Counter[str] = Counter()
        if not self.skip(_ONE_OVER):
            self.product(powers, strict, 1)
        while self.skip(_SLASH):
            self.product(powers, strict, -1)
        return powers, strict

    def product(self, powers: Counter[str], strict: Counter[str], sign: int) -> None:
        strict_sign = sign
        while True:
            factor, strict_factor = self.factor()
            for total, part, by in ((powers, factor, sign), (strict, strict_factor, strict_sign)):
                for name, power in part.items():
                    total[name] += by * power
            strict_sign = 1
            if not self.skip(_MULTIPLY):
                return

    def factor(self) -> tuple[Counter[str], Counter[str]]:
        if self.skip(_OPEN):
            inside, strict = self.expression()
            if not self.skip(_CLOSE):
                if self.at < len(self.cleaned):
                    raise self.unreadable()
                raise SpellingError(f"'{self.text}' has a bracket that is not closed")
            power = self.power()
            return _raised(inside, power), _raised(strict, power)
        name = _NAME.match(self.cleaned, self.at)
        if name is None:
            raise self.unreadable()
        self.at = name.end()
        *before, last = self.names(name[0])
        power = self.power()
        factor = Counter(before)
        factor[last] += power
        return factor, Counter(factor)

    def power(self) -> int:
        found = _POWER.match(self.cleaned, self.at)
        if found is None:
            return 1
        self.at = found.end()
        power = int(found[1] or found[2] or found[3])
        # A power of 1 is nobody's way to write a unit, but A1 is a cell.
        if not 1 <= abs(power) <= HIGHEST_POWER or power == 1:
            allowed = f"2 to {HIGHEST_POWER} or -1 to -{HIGHEST_POWER}"
            raise SpellingError(f"'{self.text}' has the power {power}; a power is {allowed}")
        return power

    def names(self, name: str) -> list[str]:
        """Pint's names for one name in the text: one, or two if they are glued together as in W/mK."""
        self.units += 1
        self.last = name
        if name.lstrip("°") in _DEGREES:
            self.degree = name.lstrip("°")
            if name in {"C", "F", "R"}:
                self.letter = name
            return [_DEGREES[self.degree]]
        if name in _SYMBOLS:
            return [_SYMBOLS[name]]
        if len(name) > 2 and name.lower() in _LOWER_WORDS:
            return [_LOWER_WORDS[name.lower()]]
        if name in _REMEDIES:
            problem, remedy = _REMEDIES[name]
            raise SpellingError(f"'{name}' {problem}", remedy)
        if meant := _other_case(name):
            raise SpellingError(f"'{name}' is not a unit", f"write {meant}")
        if re.fullmatch("[kMµ][CFKR]", name):
            raise self.prefixed_degree()
        if glued := _GLUED.fullmatch(name):
            first, second = glued["length"] or glued["other"], glued["degree"] or glued["unit"]
            if glued["small"]:
                raise SpellingError(f"'{name}' is not a unit", f"write {first}·{glued['small'].upper()}")
            if not (glued["length"] and glued["unit"]):
                return [*self.names(first), *self.names(second)]
        raise SpellingError(f"'{name}' is not a unit known here")

    def skip(self, pattern: re.Pattern[str]) -> bool:
        found = pattern.match(self.cleaned, self.at)
        if found is not None:
            self.at = found.end()
        return found is not None

    def prefixed_degree(self) -> SpellingError:
        return SpellingError(f"'{self.text}' puts a prefix on a temperature", "write K or °C")

    def unreadable(self) -> SpellingError:
        rest = self.cleaned[self.at :].lstrip()
        if not rest:
            return SpellingError(f"'{self.text}' ends where a unit should follow")
        if rest[0].isdigit():
            return SpellingError(f"'{self.text}' holds a number, and a unit carries none", "put the number into the values")
        return SpellingError(f"'{self.text}' cannot be read from '{rest}' on")


def _raised(powers: Counter[str], by: int) -> Counter[str]:
    return Counter({name: power * by for name, power in powers.items()})


def _without_zeros(powers: Counter[str]) -> Counter[str]:
    return Counter({name: power for name, power in powers.items() if power})


def _is_share(powers: Counter[str]) -> bool:
    """Whether this is %, ‰ or ppm, alone or per degree."""
    others = [(name, power) for name, power in powers.items() if name not in _SHARES]
    per_degree = len(others) == 1 and others[0][0] in _DEGREES.values() and others[0][1] == -1
    return len(powers) - len(others) == 1 and sum(powers[name] for name in _SHARES) == 1 and (not others or per_degree)


def _other_case(name: str) -> str:
    """The unit that `name` would be in other letter case: ``kW`` for KW, ``mW or MW`` for mw."""
    found: dict[str, str] = {}
    degrees = {letter: "K" if letter == "K" else f"°{letter}" for letter in _DEGREES}
    if name.upper() in degrees:
        return degrees[name.upper()]
    for symbol, unit in _SYMBOLS.items():
        if symbol.lower() == name.lower():
            found.setdefault(unit, symbol)
    return " or ".join(found.values())
