"""Published section tables: printed figures met to half their last digit by the outline the standard describes.

The figures are those of public transcriptions of the standards' tables and of mill catalogues that follow them, in cm,
cm², cm³, cm⁴, kg/m at 7850 kg/m³ and m²/m.  A figure is written with the digits that were printed, so that its last
digit says what it was rounded to: `2313e1` is 23130 rounded to tens.
"""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from decimal import Decimal
from functools import cache
from typing import Any

import pytest

from build import measure
from outlines import (
    Outline,
    angle,
    channel,
    circular_hollow,
    i_section,
    i_tapered,
    rectangular_hollow_cold,
    rectangular_hollow_hot,
)

STEEL = 7850.0
TAPERED = 0.006  # tapered flanges: the tables are older than the dimensions they give, and agree no better

# the power of ten that takes a property of a drawing in millimetres to the unit of the tables
TO_TABLE = {"mm": -1, "mm^2": -2, "mm^3": -3, "mm^4": -4, "kg/m": 0}

Columns = Mapping[str, tuple[str, ...]]

# what a table's column is called here, and the properties that have to show its figure
DOUBLY_SYMMETRIC: Columns = {
    "A": ("area",),
    "mass": ("mass_per_length",),
    "P": ("outer_perimeter",),
    "Ix": ("second_moment_x",),
    "Wx": ("elastic_modulus_x_top", "elastic_modulus_x_bottom"),
    "ix": ("radius_of_gyration_x",),
    "Iy": ("second_moment_y",),
    "Wy": ("elastic_modulus_y_left", "elastic_modulus_y_right"),
    "iy": ("radius_of_gyration_y",),
}
SQUARE_OR_ROUND: Columns = {
    **DOUBLY_SYMMETRIC,
    "Ix": ("second_moment_x", "second_moment_y", "principal_moment_1", "principal_moment_2"),
    "Wx": ("elastic_modulus_x_top", "elastic_modulus_x_bottom", "elastic_modulus_y_left", "elastic_modulus_y_right"),
    "ix": ("radius_of_gyration_x", "radius_of_gyration_y", "radius_of_gyration_1", "radius_of_gyration_2"),
}
CHANNEL: Columns = {**DOUBLY_SYMMETRIC, "xs": ("centroid_x",), "Wy": ("elastic_modulus_y_right",)}
EQUAL_ANGLE: Columns = {
    **DOUBLY_SYMMETRIC,
    "xs": ("centroid_x", "centroid_y"),
    "Ix": ("second_moment_x", "second_moment_y"),
    "Wx": ("elastic_modulus_x_top", "elastic_modulus_y_right"),
    "ix": ("radius_of_gyration_x", "radius_of_gyration_y"),
    "v": ("tip from axis 1",),
    "u1": ("heel from axis 2",),
    "u2": ("toes from axis 2",),
    # columns of the errata only
    "Iu": ("principal_moment_1",),
    "Iv": ("principal_moment_2",),
    "Ixy": ("product_of_inertia",),
}
UNEQUAL_ANGLE: Columns = {
    **DOUBLY_SYMMETRIC,
    "xs": ("centroid_x",),
    "ys": ("centroid_y",),
    "Wx": ("elastic_modulus_x_top",),
    "Wy": ("elastic_modulus_y_right",),
    "Iu": ("principal_moment_1",),
    "iu": ("radius_of_gyration_1",),
    "Iv": ("principal_moment_2",),
    "iv": ("radius_of_gyration_2",),
    "tan": ("slope of axis 1",),
    "Cu": ("furthest from axis 1",),
    "Cv": ("furthest from axis 2",),
}


@dataclass(frozen=True)
class Table:
    """One standard's table: the outline its sections have and, below a line of columns, a line for each section."""

    standard: str
    outline: Callable[..., Outline]
    columns: Columns
    text: str

    def rows(self) -> dict[str, tuple[tuple[float, ...], dict[str, str]]]:
        heading, *lines = self.text.strip().splitlines()
        rows = {}
        for line in lines:
            name, dimensions, figures = line.split("|")
            printed = dict(zip(heading.split("|")[2].split(), figures.split(), strict=True))
            sizes = tuple(float(size) for size in dimensions.split())
            rows[name.strip()] = sizes, {column: figure for column, figure in printed.items() if figure != "-"}
        return rows


PARALLEL_I = Table(
    "EN 10365",
    i_section,
    DOUBLY_SYMMETRIC,
    """
              | h b tw tf r       |     A mass     P     Ix    Wx    ix    Iy    Wy   iy
    IPE 200   | 200 100 5.6 8.5 12  | 28.48 22.4 0.768   1943 194.3  8.26 142.4 28.47 2.24
    IPE A 200 | 197 100 4.5 7.0 12  | 23.47 18.4 0.764   1591 161.6  8.23 117.2 23.43 2.23
    IPE 300   | 300 150 7.1 10.7 15 | 53.81 42.2 1.160   8356 557.1 12.46 603.8 80.50 3.35
    IPE O 300 | 304 152 8.0 12.7 15 | 62.83 49.3 1.174   9994 657.5 12.61 745.7 98.12 3.45
    IPE 400   | 400 180 8.6 13.5 21 | 84.46 66.3 1.467 2313e1  1156 16.55  1318 146.4 3.95
    HE 100 A  | 96 100 5 8 12       |  21.2 16.7 0.561  349.2 72.76  4.06 133.8 26.76 2.51
    HE 100 M  | 120 106 12 20 12    |  53.2 41.8 0.619   1143 190.4  4.63 399.2 75.31 2.74
    HE 200 A  | 190 200 6.5 10 18   |  53.8 42.3 1.136   3692 388.6  8.28  1336 133.6 4.98
    HE 200 M  | 220 206 15 25 18    | 131.3  103 1.203 1064e1 967.4  9.00  3651 354.5 5.27
    HE 260 A  | 250 260 7.5 12.5 24 |  86.8 68.2 1.484 1045e1 836.4 10.97  3668 282.1 6.50
    """,
)

COLD_SQUARE = Table(
    "EN 10219-2",
    rectangular_hollow_cold,
    SQUARE_OR_ROUND,
    """
                    | h b t       |      A   mass      Ix     Wx   ix
    SHS 200x200x4   | 200 200 4   |  30.95 24.294 1968.13 196.81 7.97
    SHS 200x200x6.3 | 200 200 6.3 |  47.45 37.248 2921.53 292.15 7.85
    SHS 200x200x8   | 200 200 8   |  59.24 46.505 3566.25 356.63 7.76
    SHS 200x200x16  | 200 200 16  | 106.77 83.816 5624.95 562.50 7.26
    """,
)

COLD_RECTANGULAR = Table(
    "EN 10219-2",
    rectangular_hollow_cold,
    DOUBLY_SYMMETRIC,
    """
                   | h b t      |     A   mass     P     Ix     Wx   ix     Iy    Wy   iy
    RHS 120x80x4   | 120 80 4   | 14.95 11.734     - 294.59  49.10 4.44 157.29 39.32 3.24
    RHS 120x80x6.3 | 120 80 6.3 | 22.25 17.466     - 408.50  68.08 4.28 217.11 54.28 3.12
    RHS 140x80x8   | 140 80 8   | 30.44 23.897     - 708.09 101.16 4.82 293.31 73.33 3.10
    RHS 40x20x2    | 40 20 2    |  2.14   1.68 0.113   4.05   2.02 1.38   1.34  1.34 0.79
    RHS 50x30x3    | 50 30 3    |  4.21   3.30 0.150  12.83   5.13 1.75   5.70  3.80 1.16
    RHS 50x30x4    | 50 30 4    |  5.35   4.20 0.146  15.25   6.10 1.69   6.69  4.46 1.12
    """,
)

COLD_ROUND = Table(
    "EN 10219-2",
    circular_hollow,
    SQUARE_OR_ROUND,
    """
               | d t    |    A  mass    Ix   Wx   ix
    CHS 48.3x3 | 48.3 3 | 4.27 3.351 11.00 4.55 1.61
    """,
)

HOT_SQUARE = Table(
    "EN 10210-2",
    rectangular_hollow_hot,
    SQUARE_OR_ROUND,
    """
                  | h b t     |    A mass     P   Ix   Wx   ix
    SHS 60x60x3.6 | 60 60 3.6 | 7.98 6.27 0.231 41.9 14.0 2.29
    SHS 60x60x8   | 60 60 8   | 16.0 12.5 0.219 69.7 23.2 2.09
    """,
)

# The second moments and moduli of this table do not all follow from its dimensions (up to 0.35 % off): left out.
PARALLEL_CHANNEL = Table(
    "EN 10365 (UPE, after DIN 1026-2)",
    channel,
    CHANNEL,
    """
            | h b tw tf r       |    A mass     P   ix   iy   xs
    UPE 80  | 80 50 4 7 10      | 10.1 7.90 0.343 3.26 1.59 1.82
    UPE 100 | 100 55 4.5 7.5 10 | 12.5 9.82 0.402 4.07 1.75 1.91
    UPE 200 | 200 80 6 11 13    | 29.0 22.8 0.697 8.11 2.54 2.56
    UPE 300 | 300 100 9.5 15 15 | 56.6 44.4 0.968 11.8 3.08 2.89
    """,
)

# Left out: the principal moments and radii, whose product of inertia the catalogue has 0.1 to 0.5 % too large, the
# reach of the smallest angle, whose own dimensions are too coarse for it, and two areas; see MISPRINTED.
EQUAL_ANGLES = Table(
    "EN 10056-1",
    angle,
    EQUAL_ANGLE,
    """
                 | a b t root toe    |    A  mass     P   xs    Ix    Wx   ix     v   u1   u2
    L 20x20x3    | 20 20 3 3.5 1.75  | 1.12 0.882  0.08 0.60  0.39  0.28 0.59  1.41    -    -
    L 50x50x5    | 50 50 5 7 3.5     | 4.80  3.77  0.19 1.40 10.96  3.05 1.51  3.54 1.99 1.76
    L 60x60x6    | 60 60 6 8 4       | 6.91  5.42  0.23 1.69 22.79  5.29 1.82  4.24 2.39 2.11
    L 120x120x12 | 120 120 12 13 6.5 | 27.5  21.6 0.469 3.40 367.7 42.73 3.65  8.49 4.80 4.26
    L 150x150x15 | 150 150 15 16 8   | 43.0  33.8 0.586 4.25 898.1 83.52 4.57 10.61 6.01 5.33
    L 200x200x20 | 200 200 20 18 9   | 76.3  59.9 0.785 5.68  2851 199.1 6.11 14.14 8.04 7.15
    L 200x200x24 | 200 200 24 18 9   |    -  71.1 0.785 5.84  3331 235.2 6.06 14.14 8.26 7.21
    L 250x250x20 | 250 250 20 18 9   |    -  75.6 0.985 6.93  5743 317.9 7.72 17.68 9.81 8.91
    """,
)

UNEQUAL_ANGLES = Table(
    "EN 10056-1",
    angle,
    UNEQUAL_ANGLE,
    """
              | a b t root toe |    A mass   xs   ys   Ix   Wx   ix   Iy   Wy   iy   Iu   iu   Iv   iv  tan   Cu   Cv
    L 30x20x3 | 30 20 3 4 2    | 1.43 1.12 0.50 0.99 1.25 0.62    - 0.44 0.29 0.55 1.43 1.00 0.26 0.42 0.43 2.05 1.04
    L 50x30x5 | 50 30 5 5 2.5  | 3.78 2.96 0.74 1.73 9.36 2.86 1.57 2.51 1.11 0.82 10.3 1.65 1.54 0.64 0.35 3.33 1.65
    L 60x30x5 | 60 30 5 5 2.5  | 4.28 3.36 0.68 2.17 15.6 4.07 1.91 2.63 1.14 0.78 16.5 1.97 1.71 0.63 0.26 3.88 1.77
    L 60x40x5 | 60 40 5 6 3    | 4.79 3.76 0.97 1.96 17.2 4.25 1.89 6.11 2.02 1.13 19.7 2.03 3.54 0.86 0.43 4.10 2.11
    L 65x50x5 | 65 50 5 6 3    | 5.54 4.35 1.25 1.99 23.2 5.14 2.05 11.9 3.19 1.47 28.8 2.28 6.32 1.07 0.58 4.53 2.39
    """,
)

EXACT = (
    PARALLEL_I,
    COLD_SQUARE,
    COLD_RECTANGULAR,
    COLD_ROUND,
    HOT_SQUARE,
    PARALLEL_CHANNEL,
    EQUAL_ANGLES,
    UNEQUAL_ANGLES,
)

TAPERED_I = Table(
    "DIN 1025-1",
    i_tapered,
    DOUBLY_SYMMETRIC,
    # the perimeter printed for IPN 600, 1.97, is that of another outline: it is 1.924
    """
            | h b tw tf root toe slope gauge         |    A mass     P     Ix   Wx    ix   Iy   Wy   iy
    IPN 200 | 200 90 7.5 11.3 7.5 4.5 0.14 22.5      | 33.4 26.2 0.709   2140  214  8.00  117 26.0 1.87
    IPN 400 | 400 155 14.4 21.6 14.4 8.6 0.14 38.75  |  118 92.4  1.33 2921e1 1460  15.7 1160  149 3.13
    IPN 600 | 600 215 21.6 32.4 21.6 13.0 0.14 53.75 |  254  199     - 1388e2 4627 23.39 4674  435 4.29
    """,
)

TAPERED_CHANNEL = Table(
    "DIN 1026-1",
    channel,
    CHANNEL,
    # the centroid 1.42 and the perimeter 0.321 printed for UPN 80 contradict its dimensions and another printing
    """
            | h b tw tf root toe slope gauge |    A mass     P   xs   Ix   Wx   ix   Iy   Wy   iy
    UPN 80  | 80 45 6 8 8 4 0.08 22.5        | 11.0 8.65     -    -  106 26.6 3.10 19.4 6.38 1.33
    UPN 100 | 100 50 6 8.5 8.5 4.5 0.08 25.0 | 13.5 10.6 0.372 1.55  206 41.2 3.91 29.3 8.49 1.47
    UPN 140 | 140 60 7 10 10 5 0.08 30.0     | 20.4 16.0 0.489 1.75  605 86.4 5.45 62.7 14.8 1.75
    UPN 300 | 300 100 10 16 16 8 0.08 50.0   | 58.8 46.2 0.950 2.70 8030  535 11.7  495 67.8 2.90
    """,
)

# Left out above because they are wrong: section, column, what is printed, and what its dimensions give.
MISPRINTED = (
    (EQUAL_ANGLES, "L 200x200x24", "A", "91.0", 90.58765),
    (EQUAL_ANGLES, "L 250x250x20", "A", "96.4", 96.34765),
    (EQUAL_ANGLES, "L 120x120x12", "Iu", "584.3", 583.7135),
    (EQUAL_ANGLES, "L 120x120x12", "Iv", "151.0", 151.6198),
    (EQUAL_ANGLES, "L 120x120x12", "Ixy", "-216.6", -216.0469),
    (EQUAL_ANGLES, "L 20x20x3", "u1", "0.84", 0.8459507),
    (EQUAL_ANGLES, "L 20x20x3", "u2", "0.70", 0.7079076),
    (UNEQUAL_ANGLES, "L 30x20x3", "ix", "0.94", 0.9349522),  # 0.935 rounded once more
    (PARALLEL_CHANNEL, "UPE 80", "Iy", "25.5", 25.41334),
    (PARALLEL_CHANNEL, "UPE 80", "Wy", "8.00", 7.984036),
    (PARALLEL_CHANNEL, "UPE 300", "Ix", "7820", 7823.186),
    (TAPERED_I, "IPN 600", "P", "1.97", 1.92382),
    (TAPERED_CHANNEL, "UPN 80", "xs", "1.42", 1.451993),
    (TAPERED_CHANNEL, "UPN 80", "P", "0.321", 0.313479),
)


@cache
def measured(outline: Callable[..., Outline], sizes: tuple[float, ...]) -> Mapping[str, Any]:
    return measure(outline(*sizes), unit="mm", density=STEEL)


def reading(found: Mapping[str, Any], what: str) -> float:
    """A property in the unit of the tables, or a distance or slope that follows from several."""

    def reach(axis: int, side: str) -> float:
        return reading(found, f"principal_moment_{axis}") / reading(found, f"elastic_modulus_{axis}_{side}")

    match what:
        case "outer_perimeter":
            return found[what].value / 1000
        case "tip from axis 1" | "furthest from axis 1":
            return max(reach(1, "positive"), reach(1, "negative"))
        case "heel from axis 2":
            return reach(2, "negative")
        case "toes from axis 2":
            return reach(2, "positive")
        case "furthest from axis 2":
            return max(reach(2, "positive"), reach(2, "negative"))
        case "slope of axis 1":
            return math.tan(math.radians(found["principal_angle"].value))
    return found[what].value * 10.0 ** TO_TABLE[str(found[what].unit)]


def half_digit(printed: str) -> float:
    return 0.5 * 10.0 ** int(Decimal(printed).as_tuple().exponent)


def figures(tables: tuple[Table, ...]) -> list[Any]:
    return [
        pytest.param(table, sizes, figure, what, id=f"{name} {column} {what}")
        for table in tables
        for name, (sizes, printed) in table.rows().items()
        for column, figure in printed.items()
        for what in table.columns[column]
    ]


@pytest.mark.parametrize(("table", "sizes", "printed", "what"), figures(EXACT))
def test_printed_figure_is_met_to_half_its_last_digit(
    table: Table, sizes: tuple[float, ...], printed: str, what: str
) -> None:
    actual = reading(measured(table.outline, sizes), what)
    assert abs(actual - float(printed)) <= half_digit(printed) * (1 + 1e-9)


@pytest.mark.parametrize(("table", "sizes", "printed", "what"), figures((TAPERED_I, TAPERED_CHANNEL)))
def test_tapered_section_comes_as_close_as_its_table_allows(
    table: Table, sizes: tuple[float, ...], printed: str, what: str
) -> None:
    actual = reading(measured(table.outline, sizes), what)
    assert abs(actual - float(printed)) <= half_digit(printed) + TAPERED * float(printed)


@pytest.mark.parametrize(("table", "name", "column", "printed", "true"), MISPRINTED)
def test_figure_known_to_be_misprinted_is_not_reproduced(
    table: Table, name: str, column: str, printed: str, true: float
) -> None:
    sizes, _ = table.rows()[name]
    for what in table.columns[column]:
        actual = reading(measured(table.outline, sizes), what)
        assert actual == pytest.approx(true, rel=1e-6)
        assert abs(actual - float(printed)) > half_digit(printed)
