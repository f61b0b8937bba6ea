"""Ordinary formulas with results that follow from the definitions of the open formula standards.

Source: OASIS OpenDocument 1.2, part 2, "Recalculated Formula (OpenFormula) Format", 2011. The clause is named beside each
group, the sub-clause is the function's own name (clause 6.4: the operator's). The same functions are defined in ECMA-376-1, clause
18.17.7. Results are worked out by hand or written as the closed form that the definition gives.
"""

from __future__ import annotations

import math
from collections.abc import Mapping

# The cells that the formulas look at; C4 is empty.
CELLS: Mapping[str, object] = {
    **{f"A{row}": row for row in range(1, 6)},
    **{f"B{row}": 10 * row for row in range(1, 6)},
    "C1": "alpha",
    "C2": "Beta",
    "C3": True,
    "C5": "a-b-c",
    **dict(zip(("D1", "D2", "D3", "D4", "D5"), (3, -1, 4, -1.5, 9), strict=True)),
}
PI, E = math.pi, math.e

# Clause -> formula -> value.
RESULTS: Mapping[str, Mapping[str, object]] = {
    "6.4 Standard operators": {
        "C4=0": True, 'C4=""': True, "C4&1": "1", "C4+1": 1, "C1>A1": True, "C3>C1": True, "1E3": 1000,
        "1+2*3": 7, "(1+2)*3": 9, "-2^2": 4, "2^3^2": 64, "2-3-4": -5, "12/4/3": 1, "7%": 0.07, "200*10%": 20,
        "A2-A5": -3,
        '"a"&"b"&1': "ab1", "1=1": True, '"A"="a"': True, "1<>2": True, "3<=2": False, '"a"<"b"': True, "-A3%": -0.03,
        "--3": 3, "1/0": "#DIV/0!", '"a"+1': "#VALUE!", '"3"*2': 6, "TRUE+1": 2,
    },
    "6.5 Matrix functions": {
        "MDETERM({1,2;3,4})": -2, "SUM(MMULT({1,2;3,4},{5;6}))": 17 + 39, "SUM(MINVERSE({2,0;0,4}))": 0.75,
        "SUM(MUNIT(3))": 3, "SUM(TRANSPOSE(A1:A5))": 15, "SUMPRODUCT(A1:A5,B1:B5)": 550,
    },
    "6.6 Bit operation functions": {
        "BITAND(12,10)": 8, "BITOR(12,10)": 14, "BITXOR(12,10)": 6, "BITLSHIFT(3,4)": 48, "BITRSHIFT(48,4)": 3,
    },
    "6.8 Complex number functions": {
        'IMABS("3+4i")': 5, 'IMREAL("3+4i")': 3, 'IMAGINARY("3+4i")': 4, 'IMSUM("1+2i","3-i")': "4+i",
        'IMPRODUCT("2i","3i")': "-6",
    },
    "6.10 Date and time functions": {
        "DATE(2024,2,29)": 45351, "DATE(2023,14,1)": 45323, "YEAR(45351)": 2024, "MONTH(45351)": 2, "DAY(45351)": 29,
        "WEEKDAY(45351)": 5, "WEEKDAY(45351,2)": 4, "EDATE(45351,12)": 45716, "EOMONTH(45351,1)": 45382,
        "DAYS(45351,45300)": 51,
        "DAYS360(DATE(2024,1,31),DATE(2024,3,31))": 60, "TIME(6,30,0)": 6.5 / 24, "HOUR(0.75)": 18,
        "MINUTE(0.7604166666666667)": 15,
        "SECOND(0.5)": 0, 'DATEVALUE("2024-02-29")': 45351, "NETWORKDAYS(45348,45352)": 5, "WORKDAY(45348,5)": 45355,
        "YEARFRAC(DATE(2024,1,1),DATE(2024,7,1),0)": 0.5, "ISOWEEKNUM(45351)": 9,
        'DATEDIF(DATE(2020,3,15),DATE(2024,3,14),"y")': 3,
    },
    "6.12 Financial functions": {
        "FV(0.1,2,-100)": 210, "PV(0,4,-25)": 100, "PMT(0,10,-1000)": 100, "NPV(0.1,110,121)": 200,
        "SLN(1000,100,9)": 100,
        "EFFECT(0.1,1)": 0.1, "NOMINAL(0.21,2)": 2 * (math.sqrt(1.21) - 1), "NPER(0,-10,100)": 10,
        "IRR({-100,110})": 0.1,
        "SYD(1000,100,4,1)": 900 * 4 / 10, "DDB(1000,0,10,1)": 200, "RRI(2,100,121)": 0.1,
    },
    "6.13 Information functions": {
        "COLUMNS(A1:D2)": 4, "ROWS(A1:D2)": 2, "COUNT(A1:C5)": 10,
        'COUNTIF(C1:C5,"a*")': 2, 'COUNTIF(C1:C5,"?lpha")': 1, 'COUNTIF(C1:C5,"BETA")': 1,
        "COUNTA(A1:C5)": 14, "COUNTBLANK(A1:C5)": 1,
        'COUNTIF(B1:B5,">25")': 3, 'COUNTIFS(A1:A5,">1",B1:B5,"<50")': 3, "ISBLANK(C4)": True, "ISERROR(1/0)": True,
        "ISNA(NA())": True, "ISNUMBER(A1)": True, "ISTEXT(C1)": True, "ISLOGICAL(C3)": True, "ISODD(3)": True,
        "ISEVEN(3)": False,
        "ISERR(NA())": False, "N(C3)": 1, "NA()": "#N/A", "ERROR.TYPE(1/0)": 2, "TYPE(C1)": 2, "COLUMN(D1)": 4,
        "ROW(A5)": 5,
        'VALUE("12.5")': 12.5,
    },
    "6.14 Lookup functions": {
        "CHOOSE(2,10,20,30)": 20, "INDEX(B1:B5,3)": 30, "MATCH(30,B1:B5,0)": 3, "MATCH(35,B1:B5,1)": 3,
        "VLOOKUP(4,A1:B5,2,FALSE)": 40,
        "VLOOKUP(4.5,A1:B5,2,TRUE)": 40, "HLOOKUP(1,A1:B2,2,FALSE)": 2, "LOOKUP(3,A1:A5,B1:B5)": 30,
        'INDIRECT("B"&2)': 20, "SUM(OFFSET(A1,1,1,2,1))": 50, "VLOOKUP(9,A1:B5,2,FALSE)": "#N/A",
        'ADDRESS(2,3)': "$C$2",
    },
    "6.15 Logical functions": {
        "AND(TRUE,1)": True, "AND(A1:A5)": True, "OR(C1:C4)": True, "IF(C4,1,2)": 2,
        "OR(FALSE,0)": False, "NOT(FALSE)": True, "XOR(TRUE,TRUE,TRUE)": True, "IF(A1>1,2,3)": 3,
        'IFERROR(1/0,"none")': "none", "IFNA(NA(),5)": 5, "TRUE()": True, "IF(FALSE,1)": False,
    },
    "6.16 Mathematical functions": {
        "ABS(-3)": 3, "ACOS(0)": PI / 2, "ACOSH(1)": 0, "ACOT(1)": PI / 4, "ASIN(1)": PI / 2, "ASINH(0)": 0,
        "ATAN(1)": PI / 4,
        "ATAN2(1,1)": PI / 4, "ATANH(0.5)": math.atanh(0.5), "COMBIN(5,2)": 10, "COMBINA(3,2)": 6, "COS(0)": 1,
        "COSH(1)": math.cosh(1),
        "DEGREES(PI())": 180, "EVEN(3)": 4, "EXP(1)": E, "FACT(5)": 120, "FACTDOUBLE(7)": 105, "GCD(12,18)": 6,
        "LCM(4,6)": 12,
        "LN(EXP(2))": 2, "LOG(8,2)": 3, "LOG10(1000)": 3, "MOD(-3,2)": 1, "MOD(7,-4)": -1, "MULTINOMIAL(2,3)": 10,
        "ODD(2)": 3,
        "PI()": PI, "POWER(2,10)": 1024, "PRODUCT(A1:A5)": 120, "QUOTIENT(-7,2)": -3, "RADIANS(180)": PI,
        "SERIESSUM(2,0,1,{1,1,1})": 7,
        "SIGN(-2)": -1, "SIN(PI()/2)": 1, "SINH(0)": 0, "SQRT(16)": 4, "SQRTPI(1)": math.sqrt(PI),
        "SUBTOTAL(9,A1:A5)": 15,
        "SUM(A1:A5)": 15, 'SUMIF(A1:A5,">3",B1:B5)': 90, 'SUMIFS(B1:B5,A1:A5,">1",A1:A5,"<4")': 50, "SUMSQ(3,4)": 25,
        "SUMX2MY2({2,3},{1,1})": 11, "SUMX2PY2({2,3},{1,1})": 15, "SUMXMY2({2,3},{1,1})": 5, "TAN(PI()/4)": 1,
        "TANH(0)": 0,
        "ERF(0)": 0, "ERFC(0)": 1, "GAMMALN(5)": math.log(24), "DELTA(1,1)": 1, "GESTEP(3,2)": 1, "SQRT(-1)": "#NUM!",
        'CONVERT(1,"in","cm")': 2.54, "BESSELJ(0,0)": 1, "SEC(0)": 1, "CSC(PI()/2)": 1, "COT(PI()/4)": 1,
    },
    "6.17 Rounding functions": {
        "CEILING(2.1,1)": 3, "FLOOR(2.9,1)": 2, "INT(-2.5)": -3, "MROUND(7,3)": 6, "ROUND(2.345,2)": 2.35,
        "ROUND(-2.5,0)": -3,
        "ROUND(1234,-2)": 1200, "ROUNDDOWN(-2.9,0)": -2, "ROUNDUP(2.1,0)": 3, "TRUNC(-2.9)": -2, "TRUNC(2.345,2)": 2.34,
    },
    "6.18 Statistical functions": {
        "AVEDEV(A1:A5)": 1.2, "AVERAGE(D1:D5)": 2.7, "AVERAGEA(A1:A5,C3)": 16 / 6, 'AVERAGEIF(A1:A5,">2")': 4,
        "BINOM.DIST(2,4,0.5,FALSE)": 0.375,
        "CORREL(A1:A5,B1:B5)": 1, "COVAR(A1:A5,B1:B5)": 20, "DEVSQ(A1:A5)": 10, "EXPON.DIST(0,2,FALSE)": 2,
        "FISHER(0.5)": math.atanh(0.5),
        "FORECAST(6,B1:B5,A1:A5)": 60, "GEOMEAN(2,8)": 4, "HARMEAN(2,6)": 3, "INTERCEPT(B1:B5,A1:A5)": 0,
        "KURT(A1:A5)": -1.2,
        "LARGE(D1:D5,2)": 4, "MAX(D1:D5)": 9, "MEDIAN(D1:D5)": 3, "MIN(D1:D5)": -1.5,
        "MODE(1,2,2,3)": 2,
        "NORM.S.DIST(0,TRUE)": 0.5, "NORM.DIST(1,1,2,TRUE)": 0.5, "PERCENTILE(A1:A5,0.25)": 2, "PERMUT(5,2)": 20,
        "POISSON.DIST(0,2,FALSE)": E**-2,
        "QUARTILE(A1:A5,3)": 4, "RANK(4,D1:D5)": 2, "RSQ(A1:A5,B1:B5)": 1, "SKEW(A1:A5)": 0, "SLOPE(B1:B5,A1:A5)": 10,
        "SMALL(D1:D5,2)": -1,
        "STANDARDIZE(3,1,2)": 1, "STDEV(A1:A5)": math.sqrt(2.5), "STDEVP(A1:A5)": math.sqrt(2), "STEYX(B1:B5,A1:A5)": 0,
        "TRIMMEAN(A1:A5,0.4)": 3, "VAR(A1:A5)": 2.5, "VARP(A1:A5)": 2, "WEIBULL.DIST(1,1,1,TRUE)": 1 - 1 / E,
        "TREND(B1:B5,A1:A5,6)": 60,
        "PHI(0)": 1 / math.sqrt(2 * PI), "GAMMA(5)": 24, "T.DIST(0,3,TRUE)": 0.5, "CHISQ.DIST.RT(0,2)": 1,
        "PROB(A1:A2,{0.25;0.75},2)": 0.75,
    },
    "6.19 Number representation conversion functions": {
        'ARABIC("XIV")': 14, "BASE(10,2)": "1010", 'BIN2DEC("1010")': 10, 'DEC2HEX(255)': "FF", 'DECIMAL("FF",16)': 255,
        'HEX2DEC("1F")': 31, 'OCT2DEC("17")': 15, "ROMAN(14)": "XIV", "DEC2BIN(5)": "101",
    },
    "6.20 Text functions": {
        'CHAR(65)': "A", 'CLEAN("a"&CHAR(7)&"b")': "ab", 'CODE("A")': 65, 'CONCATENATE("a",1,TRUE)': "a1TRUE",
        'EXACT("a","A")': False,
        'FIND("b","abcb",3)': 4, "FIXED(1234.567,1,TRUE)": "1234.6", 'LEFT(C1,2)': "al", "LEN(C1)": 5,
        'LOWER(C2)': "beta", "MID(C1,2,3)": "lph",
        'PROPER("two words")': "Two Words", 'REPLACE("abcdef",2,3,"x")': "axef", 'REPT("ab",3)': "ababab",
        "RIGHT(C1,3)": "pha",
        'SEARCH("B","abc")': 2, 'SUBSTITUTE(C5,"-","+",2)': "a-b+c", "T(A1)": "", 'TEXT(0.5,"0.0%")': "50.0%",
        'TEXT(1234.5,"#,##0.00")': "1,234.50",
        'TRIM("  a   b ")': "a b", "UNICHAR(8364)": "€", 'UNICODE("€")': 8364, "UPPER(C1)": "ALPHA",
        'FIND("z","abc")': "#VALUE!",
        'NUMBERVALUE("1.234,5",",",".")': 1234.5,
    },
}  # fmt: skip
