"""Where fuzzing begins, and what it has found: every seed is run by the ordinary tests too."""

from __future__ import annotations

# Contents of <sheetData>. Those from the first marked one on made a fault once.
SHEETS = (
    '<row r="1"><c r="A1"><v>1</v></c><c r="B1" s="1" t="str"><f>A1&amp;"x"</f><v>1x</v></c></row>',
    '<row r="1"><c r="A1" t="s"><v>0</v></c><c r="B1" t="b"><v>1</v></c><c r="C1" t="e"><v>#N/A</v></c></row>',
    '<row r="2" hidden="1"><c r="A2" t="inlineStr"><is><r><t>a</t></r><rPh sb="0" eb="1"><t>b</t></rPh></is></c></row>',
    '<row><c><f t="shared" ref="A1:A3" si="0">B1*2</f></c></row><row><c><f t="shared" si="0"/><v>2</v></c></row>',
    '<row r="1"><c r="A1" cm="1"><f t="array" ref="A1:B2">{1,2;3,4}</f><v>1</v></c><c r="B1"/></row><row r="2"><c r="A2"/></row>',
    '<row r="1"><c r="A1"><f t="dataTable" ref="A1:B2" dt2D="1" dtr="1" r1="C1" r2="C2"/><v>1</v></c></row>',
    "<row r='1'><c r='A1'><f><![CDATA[1<2]]></f><v>0</v><extLst><ext uri='u'><v>7</v></ext></extLst></c><!-- x --></row>",
    '<row r="1"><c r="A1" t="d"><v>2024-05-06T07:08:09</v></c><c r="B1" t="d"><v>2024-05-06</v></c></row>',
    '<row r="1"><c r="A1"><f>INGLE.PEAK($A$1:$B$1,A1:B1)</f></c><c r="B1"><f>IFERROR([1]!INGLE_PEAK(A1),"")</f></c></row>',
    '<row r="1"><c r="A1" t="str"><v>_x0041__xD83D__xDE00__xD800_</v></c></row>',
)

# Formulas, without the sign of equality.
FORMULAS = (
    "1+2*A1-B$2/$C3^2&\"a\"\"b\"",
    "SUM(A1:A3,B:B,1:1)*-3%",
    "INGLE.PEAK($A$1:$H$1,A2:H2)",
    "IFERROR(ROUND(_xll.INGLE_PEAK('Other sheet'!$A$1:$B$1,A2:B2),2),\"none\")",
    "@INGLE.ASK(\"peak\",{\"a\",\"b\"},A1:B5*2)",
    "INDEX(INGLE.ASK(\"x;y\",A1:B1,A2:B3),1,2)",
    "_xlfn.LET(_xlpm.x,A1,_xlpm.y,_xlpm.x*2,INGLE.PEAK(_xlpm.x,_xlpm.y))",
    "SUM(MAP(A1:A2,LAMBDA(x,x+1)))",
    "SUM(Cases[[#This Row],[a '[mm']]:[b]])+ROWS(Cases[#All])+[@a]",
    "IF(A1>=1,CHOOSE(2,A1,B1),INDEX(A1:C3,2,2))",
    "COUNTIF(A1:A9,\"<>\"&B1)+SUMPRODUCT(--(A1:A3>2),B1:B3)",
    "'it''s [a]b'!A1+[1]Sheet1!B2+Sheet1:Sheet3!A1",
    "A1:A3 A2:A4+(A1,B1)+A1#+{1,-2;TRUE,#N/A}",
    "name*_xlfn.SINGLE(A1:A3)+TODAY()-RAND()",
    "#REF!+Sheet1!#REF!+#DIV/0!",
)  # fmt: skip
