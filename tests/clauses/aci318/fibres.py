"""A second road to bending strength: a section cut into thin strips, strains plane, forces summed.

It shares no code with the package. Concrete follows the rectangular block strip by strip (0.85 f'c where a
strip lies within β1 c), bars are elastic-plastic in their own layers, the neutral axis is found by halving.
"""

import numpy as np

STRIPS = 20000


def strips(width_at, height):
    """Depth and area of each strip of a shape given by its width at (many) depths."""
    depth = (np.arange(STRIPS) + 0.5) * height / STRIPS
    return depth, width_at(depth) * np.full(STRIPS, height / STRIPS)


def strength(width_at, height, bars, fc, fy, modulus, beta):
    """Nominal moment and neutral axis; bars are (area, depth), depths count from the compressed face."""
    depth, area = strips(width_at, height)

    def forces(c):
        """All forces, compression positive, and their moment about the compressed face."""
        inside = depth <= beta * c
        force = 0.85 * fc * area[inside].sum()
        moment = 0.85 * fc * (area[inside] * depth[inside]).sum()
        for steel, y in bars:
            stress = max(-fy, min(fy, 0.003 * (c - y) / c * modulus))
            if y < beta * c:
                stress -= 0.85 * fc  # the concrete that the bar displaces
            force += stress * steel
            moment += stress * steel * y
        return force, moment

    low, high = 1e-6 * height, height
    for _ in range(50):
        c = (low + high) / 2
        low, high = (low, c) if forces(c)[0] > 0 else (c, high)
    return -forces(c)[1], c


def properties(width_at, height):
    """Area, centroid from the top and second moment of a shape."""
    depth, area = strips(width_at, height)
    whole = area.sum()
    centre = (area * depth).sum() / whole
    return whole, centre, (area * (depth - centre) ** 2).sum()
