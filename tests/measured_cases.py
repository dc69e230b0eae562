"""Texts of measured points as people paste them, and all that both languages have to say of each.

What a text says is written as one text itself: its points (mL and pH), or its complaints as the
page prints them.
"""

from collections.abc import Mapping

from bufferfolio.measured import Parsed, told

FAR = "x" * 60
MANY = "\n".join(f"{at} 7.0" for at in range(5001))

CASES: Mapping[str, tuple[str, str]] = {
    "semicolons and decimal commas": (
        "Volume (mL);pH\n0;8,16\n1,5;8,20\n2;8,3\n",
        "semicolon comma mL stated, 1 heading\n0 8.16\n1.5 8.2\n2 8.3",
    ),
    "blanks": (
        "0 8.1\n1 8.2\n",
        "space point mL, 0 headings\n0 8.1\n1 8.2",
    ),
    "blanks and decimal commas": (
        "0,5  8,1\n1,25  8,2\n",
        "space comma mL, 0 headings\n0.5 8.1\n1.25 8.2",
    ),
    "commas": (
        "0,8.1\n1,8.2\n",
        "comma point mL, 0 headings\n0 8.1\n1 8.2",
    ),
    "commas with blanks": (
        "0, 8.1\n1 ,8.2\n2,  8.3",
        "space point mL, 0 headings\n0 8.1\n1 8.2\n2 8.3",
    ),
    "commas and blanks, decimal commas": (
        "0,5, 8,1\n1,5, 8,2\n",
        "space comma mL, 0 headings\n0.5 8.1\n1.5 8.2",
    ),
    "quoted decimal commas": (
        '"V (mL)","pH"\n"0,5","8,1"\n"1,5","8,2"\n',
        "comma comma mL stated, 1 heading\n0.5 8.1\n1.5 8.2",
    ),
    "tabs, litres, a mark of UTF-8, Windows line ends, blank rows, remarks": (
        "\ufeff# 3 March\r\n\r\nV / L\tpH\r\n0.001\t3.2\r\n\t\r\n0.002\t4.1\r\n",
        "tab point L stated, 1 heading\n1 3.2\n2 4.1",
    ),
    "microlitres, and units in a row of their own": (
        "volume;reading\nµL;-\n250;7.1\n500;7.2\n",
        "semicolon point µL stated, 2 headings\n0.25 7.1\n0.5 7.2",
    ),
    "pH first, by its heading": (
        "pH\tmL\n7.1\t0\n7.2\t1\n",
        "tab point mL stated, 1 heading\n0 7.1\n1 7.2",
    ),
    "pH first, between blanks": (
        "pH  V\n7.1  0\n7.2  1\n",
        "space point mL, 1 heading\n0 7.1\n1 7.2",
    ),
    "more columns, named; empty cells at the end": (
        "t (s);added (mL);mV;pH;;\n0;0;12;7.1;;\n9;1;11;7.2;;\n",
        "semicolon point mL stated, 1 heading\n0 7.1\n1 7.2",
    ),
    "exponents and a true minus": (
        "0 −0.5\n1e1 1.5E0\n",
        "space point mL, 0 headings\n0 -0.5\n10 1.5",
    ),
    "equal volumes": (
        "0 7.1\n0 7.2\n",
        "space point mL, 0 headings\n0 7.1\n0 7.2",
    ),
    "nothing": (
        "\n \n;;\n",
        (
            "row 1, column 1: there are no points; accepted: rows of a volume and a pH, "
            "such as 12.5; 7.02"
        ),
    ),
    "words only": (
        "Volume pH\nnone yet\n",
        (
            "row 1, column 1: there are no points; accepted: rows of a volume and a pH, "
            "such as 12.5; 7.02"
        ),
    ),
    "everything wrong at once": (
        (
            "V (mL)\tpH\n"
            "0,001\t3,2\n"
            "0.002\t4,1\n"
            "1.250,5\t7\n"
            "x\tpH 7\n"
            "7\t\n"
            "8\t7,1\t2\n"
            "-1\t22\n"
            "6\t7,1 units\n"
        ),
        (
            "row 3, column 1: the volume has a point where the other numbers have "
            "commas: '0.002'; accepted: one decimal mark, no thousands separators\n"
            "row 4, column 1: the volume has a thousands separator: '1.250,5'; accepted: "
            "a number such as 1250.5\n"
            "row 5, column 1: the volume is not a number: 'x'; accepted: a number such as 12.5\n"
            "row 5, column 3: the pH is not a number: 'pH 7'; accepted: a number such as 7.02\n"
            "row 6, column 1: the row has 1 cell, and a volume and a pH are needed; "
            "accepted: a volume and a pH in each row; more columns only below a heading\n"
            "row 7, column 7: the row has 3 cells where 2 are expected; accepted: a "
            "volume and a pH in each row; more columns only below a heading\n"
            "row 8, column 1: the volume is negative: '-1'; accepted: volumes from 0 up\n"
            "row 8, column 4: the pH is out of bounds: '22'; accepted: a reading from -1 to 15\n"
            "row 9, column 3: the pH has something beside the number: '7,1 units'; "
            "accepted: a number alone; the unit stands in the heading"
        ),
    ),
    "commas that may be decimal": (
        "0,5,8,16\n1,5,8,2\n",
        (
            "row 1, column 5: the row has 4 cells where 2 are expected; accepted: "
            "semicolons or tabs between cells where numbers have decimal commas\n"
            "row 2, column 5: the row has 4 cells where 2 are expected; accepted: "
            "semicolons or tabs between cells where numbers have decimal commas"
        ),
    ),
    "thousands separators of every kind": (
        "900;6.0\n1'250;7.0\n1 250;7.1\n1,250.0;7.2\n1,250,000;7.3\n1,250;7.4\n",
        (
            "row 2, column 1: the volume has a thousands separator: '1'250'; accepted: a "
            "number such as 1250.5\n"
            "row 3, column 1: the volume has a thousands separator: '1 250'; accepted: a "
            "number such as 1250.5\n"
            "row 4, column 1: the volume has a thousands separator: '1,250.0'; accepted: "
            "a number such as 1250.5\n"
            "row 5, column 1: the volume has a thousands separator: '1,250,000'; "
            "accepted: a number such as 1250.5\n"
            "row 6, column 1: the volume has a comma where the other numbers have "
            "points: '1,250'; accepted: one decimal mark, no thousands separators"
        ),
    ),
    "volumes that fall": (
        "0 7\n2 7.1\n25 7.2\n3 7.3\n4 7.4\n",
        (
            "row 4, column 1: the volume is smaller than '25' before it: '3'; accepted: "
            "volumes in the order of addition\n"
            "row 5, column 1: the volume is smaller than '25' before it: '4'; accepted: "
            "volumes in the order of addition"
        ),
    ),
    "an unknown unit": (
        "pH;V (gal)\n7;2\n",
        "row 1, column 4: the volume has the unknown unit 'gal'; accepted: µL, mL, L, m3",
    ),
    "a unit that was not UTF-8": (
        "V (�L);pH\n1;7\n",
        "row 1, column 1: the volume has the unknown unit '�L'; accepted: µL, mL, L, m3",
    ),
    "columns that nothing names": (
        "a;b;c\n1;2;7\n1;3;7\n",
        (
            "row 1, column 1: no heading says which of the 3 columns are volume and pH; "
            "accepted: a heading such as Volume (mL) and one such as pH"
        ),
    ),
    "a missing volume": (
        "0;7\n;7.1\n",
        "row 2, column 1: the volume is missing; accepted: a number such as 12.5",
    ),
    "not finite": (
        "0 7\n1e999 7.1\n",
        (
            "row 2, column 1: the volume is not a finite number: '1e999'; accepted: a "
            "number such as 12.5"
        ),
    ),
    "long nonsense, letters beyond the first plane, and a control character": (
        f"0;7\n😀\u0007{FAR};😀\n",
        (
            f"row 2, column 1: the volume is not a number: '😀 {FAR[:38]}…'; accepted: a "
            "number such as 12.5\n"
            "row 2, column 64: the pH is not a number: '😀'; accepted: a number such as 7.02"
        ),
    ),
    "too many rows": (
        MANY,
        (
            "row 5001, column 1: there are more than 5000 rows of points; accepted: at "
            "most 5000: leave out some, or paste a part"
        ),
    ),
}


def described(found: Parsed) -> str:
    """Return what a text says, as the cases write it."""
    if found.points is None or found.layout is None:
        return "\n".join(told(each) for each in found.complaints)
    layout = found.layout
    stated = " stated" if layout.unit_stated else ""
    headings = "1 heading" if layout.headings == 1 else f"{layout.headings} headings"
    pairs = zip(found.points.volume.tolist(), found.points.pH.tolist(), strict=True)
    rows = [f"{volume * 1e6:.10g} {pH:.10g}" for volume, pH in pairs]
    return "\n".join(
        [f"{layout.separator} {layout.decimal} {layout.unit}{stated}, {headings}", *rows]
    )
