"""Sections in lb and in, as numbers in kN and m, and as sheets to write lines on."""

from calcpack.clauses.aci318.arrangement import Cage, arranged
from calcpack.clauses.aci318.materials import Size, state_materials
from calcpack.clauses.aci318.strength import INCH, PSI
from calcpack.clauses.bars import bar
from calcpack.job.model import Material
from calcpack.sheet import Sheet
from calcpack.sheet.expression import Operation, walk

KSI = 1000 * PSI
ES = 29000 * KSI
KIP = 1000 * PSI * INCH**2
KIP_FT = 12 * KIP * INCH


def cage(width, depth, cover=1.5, stirrup=0.375, aggregate=0.75):
    return Cage(width * INCH, depth * INCH, cover * INCH, stirrup * INCH, aggregate * INCH)


def group(count, size, *args, **keys):
    return arranged(count, bar(size), cage(*args, **keys))


def bounded(line):
    """Whether a line's formula has a least or a greatest value in it."""
    return any(isinstance(each, Operation) and each.name in ("min", "max") for each in walk(line.expression))


def begin(fc=4000, fy=60, width=12, depth=20, flange=None, system="SI", cover=1.5, stirrup=0.375):
    """A sheet with materials and sizes on it; ``flange`` is (width, depth)."""
    sheet = Sheet("B1", system)
    sheet.section("Test")
    values = {"fc": fc * PSI, "fy": fy * KSI, "Es": ES}
    modulus = 57000 * fc**0.5 * PSI
    material = Material(key="c", kind="concrete", modulus=modulus, unit_weight=23.6, values=values)
    materials = state_materials(sheet, material)

    def take(symbol, inches):
        return sheet.take(symbol, inches * 25.4, "mm", symbol, "test")

    size = Size(take("b_w", width), take("h", depth), take("c_c", cover), take("d_st", stirrup))
    if flange:
        size = size._replace(face=take("b_f", flange[0]), flange=take("h_f", flange[1]))
    return sheet, materials, size
