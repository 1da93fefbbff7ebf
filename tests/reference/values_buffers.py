"""Conformal films and isotropic etches of random shapes, by polygon buffers.

A film that grows at the same rate everywhere is the buffer of the solid, an etch that removes at
the same rate everywhere is the buffer of the ambient, both with the mirror images at the
walls. Writes buffers.json to the folder given: twenty shapes, each with its solid, the
thickness, and what a film of it leaves covered and an etch of it leaves standing.

    python values_buffers.py FOLDER
"""

import json
import pathlib
import sys

import numpy as np
from shapely import affinity, set_precision
from shapely.geometry import MultiPolygon, Polygon, box
from shapely.ops import unary_union

WIDTH, BOTTOM, SKY = 60.0, -40.0, 60.0
SHAPES = 20
SEED = 20_240_611
ARC_SEGMENTS = 32  # in a quarter circle: within 3e-3 nm at these radii
CELL = box(0.0, BOTTOM, WIDTH, SKY)


def unfolded(shape):
    """The shape with its images in both walls."""
    left = affinity.scale(shape, -1.0, 1.0, origin=(0.0, 0.0))
    right = affinity.scale(shape, -1.0, 1.0, origin=(WIDTH, 0.0))
    return unary_union([left, shape, right])


def buffered(shape, distance):
    grown = unfolded(shape).buffer(distance, quad_segs=ARC_SEGMENTS)
    return grown.intersection(CELL)


def ambient_of(solid):
    """The open space that the sky reaches."""
    open_space = CELL.difference(solid)
    parts = open_space.geoms if isinstance(open_space, MultiPolygon) else [open_space]
    return max(parts, key=lambda part: part.bounds[3])


def random_solid(rng):
    """Ground with a few tilted blocks on it; what they enclose is filled."""
    blocks = [box(0.0, BOTTOM, WIDTH, 0.0)]
    for _ in range(rng.integers(2, 6)):
        x, width, height = rng.uniform(0.0, WIDTH), rng.uniform(4.0, 16.0), rng.uniform(5.0, 30.0)
        block = box(x - width / 2, -15.0, x + width / 2, height)
        blocks.append(affinity.rotate(block, rng.uniform(-35.0, 35.0), origin=(x, -10.0)))
    solid = set_precision(unary_union(blocks).intersection(CELL), 2.0**-10)
    return CELL.difference(ambient_of(solid))


def stays_open(solid, distance):
    """Whether a film of this thickness closes nothing."""
    covered = buffered(solid, distance)
    open_space = CELL.difference(covered)
    return isinstance(covered, Polygon) and not covered.interiors and isinstance(open_space, Polygon)


def rings(shape, digits):
    parts = shape.geoms if isinstance(shape, MultiPolygon) else [shape]
    return [
        [[round(x, digits), round(z, digits)] for x, z in ring.coords[:-1]]
        for part in parts
        for ring in [part.exterior, *part.interiors]
    ]


def main(folder):
    rng = np.random.default_rng(SEED)
    shapes = []
    while len(shapes) < SHAPES:
        solid, thickness = random_solid(rng), float(rng.uniform(1.0, 8.0))
        closes = any(not stays_open(solid, thickness * k / 20 + 0.5) for k in range(21))
        if not isinstance(solid, Polygon) or solid.interiors or closes:
            continue
        shapes.append(
            {
                "solid": rings(solid, 10),
                "thickness_nm": thickness,
                "covered": rings(buffered(solid, thickness), 4),
                "standing": rings(solid.difference(buffered(ambient_of(solid), thickness)), 4),
            }
        )
    document = {"walls": [0.0, WIDTH], "shapes": shapes}
    path = pathlib.Path(folder) / "buffers.json"
    path.write_text(json.dumps(document, separators=(",", ":")) + "\n")


if __name__ == "__main__":
    main(sys.argv[1])
