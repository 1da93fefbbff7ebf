"""Reference capacitances with a general finite-element library (scikit-fem).

    python values_capacitance.py FOLDER [--rounds]

Reads the sections beside this file, solves each with second-order elements on its own
triangulation (points along the outlines and inside, Delaunay by scipy, refined where the
flux jumps) and writes FOLDER/capacitance.json: Maxwell's matrix over the vacuum permittivity
times the vacuum permittivity in aF/um. Only the energy from above, refined until it moves
by less than 3e-4; no part of the mesh or of the method is shared with the program.

With `--rounds`, prints one line of JSON a section and round of refinement: the matrix, and the
CPU seconds from the outlines to it.
"""

import json
import sys
import time
from pathlib import Path

import numpy as np
import shapely
from scipy.sparse.linalg import splu
from scipy.spatial import Delaunay
from skfem import Basis, BilinearForm, ElementTriP0, ElementTriP2, InteriorFacetBasis, MeshTri
from skfem import Functional, asm
from skfem.helpers import dot, grad

EPSILON_0 = 8.8541878128
HERE = Path(__file__).parent


def load(path):
    """Frame, regions (polygon, electrode name or None, permittivity) of a section file."""
    data = json.loads(path.read_text())
    (x0, x1), (y0, y1) = data["section"]["x"], data["section"]["y"]
    regions = []
    for feature in data["features"]:
        shape = shapely.geometry.shape(feature["geometry"])
        properties = feature["properties"]
        regions.append((shape, properties.get("electrode"), properties.get("permittivity", 1.0)))
    if data["section"].get("top", "open") == "open":
        # All sections here end in vacuum: a strip of vacuum stands for the half-plane.
        y1 += 1.5 * (x1 - x0)
    return (x0, x1, y0, y1), regions


def triangulate(frame, regions, spacing):
    """A triangulation that keeps the outlines: they are sampled finer than what lies inside."""
    x0, x1, y0, y1 = frame
    box = shapely.box(x0, y0, x1, y1)
    lines = shapely.unary_union(
        [box.exterior] + [shape.boundary.intersection(box) for shape, _, _ in regions]
    )
    points = []
    for line in shapely.get_parts(lines):
        ends = np.asarray(line.coords)
        for a, b in zip(ends[:-1], ends[1:]):
            count = max(1, int(np.ceil(np.hypot(*(b - a)) / spacing)))
            points.append(a + (b - a) * np.arange(count + 1)[:, None] / count)
    points = np.unique(np.round(np.vstack(points), 9), axis=0)
    across = np.arange(x0 + spacing, x1, 2.0 * spacing)
    up = np.arange(y0 + spacing, max(shape.bounds[3] for shape, _, _ in regions), 1.7 * spacing)
    inside = np.array([(x + (0.5 * spacing if i % 2 else 0.0), y)
                       for i, y in enumerate(up) for x in across])
    clear = shapely.distance(lines, shapely.points(inside)) > 0.8 * spacing
    inside = inside[clear & (inside[:, 0] < x1)]
    points = np.vstack([points, inside])
    cells = Delaunay(points).simplices
    a, b, c = (points[cells[:, k]] for k in range(3))
    area = np.abs((b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0])
    return MeshTri(points.T.copy(), cells[area > 1e-9].T.copy())


@BilinearForm
def energy(u, v, w):
    return w["epsilon"] * dot(grad(u), grad(v))


@Functional
def jump(w):
    n = w.n
    flux = (w["k1"] * dot(grad(w["u1"]), n) - w["k2"] * dot(grad(w["u2"]), n)) ** 2
    return w.h * flux / (w["k1"] + w["k2"])


def matrices(frame, regions, spacing, tolerance=3e-4, rounds=12):
    """Maxwell's matrix of round after round, conductors without a name floating."""
    names = list(dict.fromkeys(name for _, name, _ in regions if name))
    conductors = [name for name in names if name != "floating"]
    order = conductors + [name for name in names if name == "floating"]
    mesh = triangulate(frame, regions, spacing)
    previous = None
    for _ in range(rounds):
        middles = shapely.points(mesh.p[:, mesh.t].mean(axis=1).T)
        epsilon = np.ones(mesh.t.shape[1])
        holder = np.full(mesh.t.shape[1], -1)
        for shape, name, k in regions:
            shapely.prepare(shape)
            here = shapely.contains(shape, middles)
            epsilon[here] = k
            holder[here] = order.index(name) if name else -1
        basis = Basis(mesh, ElementTriP2())
        flat = basis.with_element(ElementTriP0())
        stiffness = asm(energy, basis, epsilon=flat.interpolate(np.where(holder < 0, epsilon, 1.0)))
        dofs = [np.unique(basis.element_dofs[:, holder == i]) for i in range(len(order))]
        fixed = np.unique(np.concatenate(dofs))
        free = np.setdiff1d(np.arange(basis.N), fixed)
        fields = np.zeros((len(order), basis.N))
        for i in range(len(order)):
            fields[i, dofs[i]] = 1.0
        # Factorised once for all conductors; the ordering is the best of those that scipy has.
        factor = splu(stiffness[free][:, free].tocsc(), permc_spec="MMD_AT_PLUS_A",
                      options={"SymmetricMode": True})
        fields[:, free] = -factor.solve((stiffness[free] @ fields.T)).T
        full = fields @ (stiffness @ fields.T)
        n = len(conductors)
        form = full[:n, :n] - full[:n, n:] @ np.linalg.solve(full[n:, n:], full[n:, :n])
        yield conductors, EPSILON_0 * form, mesh.t.shape[1]
        if previous is not None and np.max(np.abs(form - previous)) < tolerance * np.max(form):
            return
        previous = form
        share = np.zeros(mesh.t.shape[1])
        sides = [InteriorFacetBasis(mesh, ElementTriP2(), side=s) for s in (0, 1)]
        k = [side.with_element(ElementTriP0()).interpolate(np.where(holder < 0, epsilon, 1e-9))
             for side in sides]
        facets = mesh.facets.shape[1]
        for u in fields[:n]:
            eta = np.zeros(facets)
            values = jump.elemental(sides[0], u1=sides[0].interpolate(u), u2=sides[1].interpolate(u),
                                    k1=k[0], k2=k[1])
            eta[sides[0].find] = values
            share += eta[mesh.t2f].sum(axis=0)
        share[holder >= 0] = 0.0
        marked = np.nonzero(share > 0.1 * np.max(share))[0]
        ranked = np.argsort(-share)[: max(len(marked), mesh.t.shape[1] // 6)]
        mesh = mesh.refined(ranked)


def thick(regions):
    """Whether no film is thinner than 4 nm, which coarse points along outlines would miss."""
    distances = [shapely.distance(a.boundary, b.boundary) for a, _, _ in regions
                 for b, _, _ in regions if a is not b]
    return all(d == 0.0 or d >= 4.0 for d in distances)


def main():
    folder = Path(sys.argv[1])
    folder.mkdir(parents=True, exist_ok=True)
    answers = {}
    for path in sorted((HERE / "sections").glob("*.geojson")):
        frame, regions = load(path)
        begin = time.process_time()
        for names, form, triangles in matrices(frame, regions, 4.0 if thick(regions) else 2.5):
            answer = {"electrodes": names, "matrix_af_per_um": form.round(6).tolist()}
            if "--rounds" in sys.argv:
                seconds = time.process_time() - begin
                print(json.dumps({"section": path.stem, "seconds": seconds,
                                  "triangles": triangles, **answer}), flush=True)
        answers[path.stem] = answer
    (folder / "capacitance.json").write_text(json.dumps(answers, indent=1) + "\n")


if __name__ == "__main__":
    main()
