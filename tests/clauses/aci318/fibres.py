"""A second road to bending strength: a section cut into thin strips, strains plane, forces summed.

It shares no code with the package. Concrete follows the rectangular block strip by strip (0.85 f'c where a
strip lies within β1 c), bars are elastic-plastic in their own layers, the neutral axis is found by halving.
"""

STRIPS = 20000


def strength(strips, bars, fc, fy, modulus, beta):
    """Nominal moment and neutral axis; strips (width at depth, height), bars (area, depth) from the top."""
    width_at, height = strips
    thick = height / STRIPS
    concrete = [((n + 0.5) * thick, width_at((n + 0.5) * thick) * thick) for n in range(STRIPS)]

    def forces(c):
        found = [(0.85 * fc * area, y) for y, area in concrete if y <= beta * c]
        for area, y in bars:
            strain = 0.003 * (c - y) / c  # compression positive
            stress = max(-fy, min(fy, strain * modulus))
            if y < beta * c:
                stress -= 0.85 * fc  # the concrete that the bar displaces
            found.append((stress * area, y))
        return found

    low, high = 1e-6 * height, height
    for _ in range(60):
        c = (low + high) / 2
        if sum(force for force, _ in forces(c)) > 0:
            high = c
        else:
            low = c
    balanced = forces(c)
    return -sum(force * y for force, y in balanced), c
