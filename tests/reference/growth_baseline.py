"""The growth of one space to its closure, in straightforward Python: a measure of speed.

The same physics as the program: an isotropic gas that sticks with probability S and is otherwise
re-emitted diffusely, a front of facets that moves along its normals, corners that open into
fans, and a throat that is closed at half a nanometre. A dense array, space and line 32 nm, aspect
ratio 3, S = 0.3. The exchange matrix is compiled by numba and warmed up before the clock runs,
the gas is solved by LAPACK, everything else is numpy; shapely keeps the outline simple and measures
the void. Prints one line of JSON.

    python growth_baseline.py [FACET_NM]
"""

import json
import math
import sys
import time

import numpy as np
from numba import njit
from shapely.geometry import LineString, Polygon, box

SPACE, LINE, RATIO, STICKING = 32.0, 32.0, 3.0, 0.3
CLOSED = 0.5
HEIGHT, WIDTH = RATIO * SPACE, SPACE + LINE
FAN_STEP = 0.15  # radians between the facets of a fan


@njit(cache=False)
def blocked(px, pz, qx, qz, ax, az, bx, bz, skip):
    """Whether a facet other than `skip` crosses the way from p to q."""
    dx, dz = qx - px, qz - pz
    for k in range(ax.size):
        if k == skip:
            continue
        ex, ez = bx[k] - ax[k], bz[k] - az[k]
        det = ex * dz - ez * dx
        if det == 0.0:
            continue
        wx, wz = ax[k] - px, az[k] - pz
        t = (ex * wz - ez * wx) / det
        u = (dx * wz - dz * wx) / det
        if 1e-9 < t < 1.0 - 1e-9 and 0.0 < u < 1.0:
            return True
    return False


@njit(cache=False)
def view_factors(px, pz, nx, nz, own, ax, az, bx, bz):
    """Share of what leaves point i (normal n) that arrives at facet j."""
    factors = np.zeros((px.size, ax.size))
    for i in range(px.size):
        for j in range(ax.size):
            if j == own[i]:
                continue
            vax, vaz, vbx, vbz = ax[j] - px[i], az[j] - pz[i], bx[j] - px[i], bz[j] - pz[i]
            ha, hb = vax * nx[i] + vaz * nz[i], vbx * nx[i] + vbz * nz[i]
            if vax * vbz - vaz * vbx <= 0.0 or (ha <= 0.0 and hb <= 0.0):
                continue
            sa = (-nz[i] * vax + nx[i] * vaz) / math.hypot(vax, vaz) if ha > 0.0 else -1.0
            sb = (-nz[i] * vbx + nx[i] * vbz) / math.hypot(vbx, vbz) if hb > 0.0 else 1.0
            mx, mz = 0.5 * (ax[j] + bx[j]), 0.5 * (az[j] + bz[j])
            if sb > sa and not blocked(px[i], pz[i], mx, mz, ax, az, bx, bz, j):
                factors[i, j] = 0.5 * (sb - sa)
    return factors


def normals(points):
    along = np.diff(points, axis=0)
    along /= np.linalg.norm(along, axis=1)[:, None]
    return np.column_stack([-along[:, 1], along[:, 0]])


def resampled(points, facet, throat_z, throat):
    """Facets of the wanted length, finer near the throat."""
    kept = [points[0]]
    for k in range(1, len(points)):
        a, b = kept[-1], points[k]
        size = min(facet, max(0.1, 0.12 * throat) + 0.15 * abs(0.5 * (a[1] + b[1]) - throat_z))
        if k + 1 < len(points):
            along = points[k + 1] - a
            length = np.hypot(*along)
            aside = abs(along[0] * (b - a)[1] - along[1] * (b - a)[0]) / length
            if np.hypot(*(b - a)) < 0.4 * size and length < 1.4 * size and aside < 0.01 * size:
                continue
        count = max(1, math.ceil(np.hypot(*(b - a)) / (1.4 * size)))
        kept.extend(a + (b - a) * i / count for i in range(1, count + 1))
    return np.array(kept)


def fans(points, n):
    """Normals that each vertex opens into: none where the surface is smooth or concave."""
    turn = np.arctan2(n[1:, 0] * n[:-1, 1] - n[1:, 1] * n[:-1, 0], np.sum(n[1:] * n[:-1], axis=1))
    found = {}
    for k in np.nonzero(turn > 1.5 * FAN_STEP)[0]:
        steps = math.ceil(turn[k] / FAN_STEP)
        angles = -turn[k] * np.arange(1, steps) / steps
        cos, sin = np.cos(angles), np.sin(angles)
        x, z = n[k]
        found[k + 1] = np.column_stack([x * cos - z * sin, x * sin + z * cos])
    return found


def flux(points, n, fan):
    """Gas flux over that on an open flat, on the facets and on the facets of the fans."""
    a, b = points[:-1], points[1:]
    corner_points = [np.repeat(points[k][None], len(v), axis=0) for k, v in fan.items()]
    at = np.vstack([0.5 * (a + b), *corner_points])
    normal = np.vstack([n, *fan.values()])
    at = at + 1e-7 * normal
    own = np.concatenate([np.arange(len(a)), np.full(len(at) - len(a), -1)])
    factors = view_factors(
        *np.ascontiguousarray(at.T), *np.ascontiguousarray(normal.T), own,
        *np.ascontiguousarray(a.T), *np.ascontiguousarray(b.T),
    )
    sky = 1.0 - factors.sum(axis=1)
    m = len(a)
    gas = np.linalg.solve(np.eye(m) - (1.0 - STICKING) * factors[:m], sky[:m])
    return gas, sky[m:] + (1.0 - STICKING) * factors[m:] @ gas


def meeting(p, n, m, u, v):
    """Where the lines offset by u and v from p along n and m meet."""
    sine = n[0] * m[1] - n[1] * m[0]
    if abs(sine) < 0.05:
        middle = n + m
        return p + middle / np.linalg.norm(middle) * 0.5 * (u + v)
    return p + np.array([u * m[1] - v * n[1], n[0] * v - m[0] * u]) / sine


def moved(points, n, gas, fan, fan_gas, step):
    new, at = [], 0
    new.append(np.array([points[0][0], points[0][1] + step * gas[0] / max(n[0][1], 0.1)]))
    for k in range(1, len(points) - 1):
        ns, speeds = [n[k - 1]], [gas[k - 1]]
        if k in fan:
            ns.extend(fan[k])
            speeds.extend(fan_gas[at : at + len(fan[k])])
            at += len(fan[k])
        ns.append(n[k])
        speeds.append(gas[k])
        for i in range(len(ns) - 1):
            new.append(meeting(points[k], ns[i], ns[i + 1], step * speeds[i], step * speeds[i + 1]))
    new.append(np.array([points[-1][0], points[-1][1] + step * gas[-1] / max(n[-1][1], 0.1)]))
    return np.array(new)


def simple(points):
    """The outline without loops: the upper border of what lies under it."""
    line = LineString(points)
    if line.is_simple:
        return points
    ring = np.vstack([points, [WIDTH, -50.0], [0.0, -50.0]])
    solid = Polygon(ring).buffer(0)
    solid = max(getattr(solid, "geoms", [solid]), key=lambda part: part.area)
    border = np.array(solid.exterior.reverse().coords[:-1] if solid.exterior.is_ccw else solid.exterior.coords[:-1])
    start = int(np.argmin(border[:, 0] + 1e-3 * border[:, 1]))
    border = np.roll(border, -start, axis=0)
    return border[border[:, 1] > -49.0]


def throat_of(points):
    """Narrowest width between mirror images above something wider, and its height."""
    left = points[points[:, 0] <= 0.5 * WIDTH]
    left = left[left[:, 1] > 0.3 * HEIGHT]
    k = int(np.argmax(left[:, 0]))
    return WIDTH - 2.0 * left[k, 0], left[k, 1]


def grow(facet):
    points = np.array(
        [(0, HEIGHT), (LINE / 2, HEIGHT), (LINE / 2, 0), (LINE / 2 + SPACE, 0),
         (LINE / 2 + SPACE, HEIGHT), (WIDTH, HEIGHT)], dtype=float,
    )
    grown, steps, throat, throat_z = 0.0, 0, SPACE, HEIGHT
    while True:
        points = resampled(points, facet, throat_z, throat)
        n = normals(points)
        fan = fans(points, n)
        gas, fan_gas = flux(points, n, fan)
        step = min(facet, 0.03 * throat) if throat < 0.9 * SPACE else facet
        before, old = throat, points
        points = simple(moved(points, n, gas, fan, fan_gas, step))
        throat, throat_z = throat_of(points)
        steps += 1
        if throat <= CLOSED:
            share = (before - CLOSED) / (before - throat)
            open_space = Polygon(np.vstack([old, [WIDTH, 3 * HEIGHT], [0.0, 3 * HEIGHT]])).buffer(0)
            void = open_space.intersection(box(0, 0, WIDTH, throat_z))
            inside = void.intersection(box(LINE / 2, 0, LINE / 2 + SPACE, HEIGHT))
            return {
                "closes_at_nm": grown + share * step,
                "void_top_over_space": (throat_z - HEIGHT) / SPACE,
                "void_share": inside.area / (SPACE * HEIGHT),
                "steps": steps,
                "facets": len(old) - 1,
            }
        grown += step


def main(facet):
    grow_once = np.array([0.0, 1.0])
    view_factors(grow_once, grow_once, grow_once, grow_once, np.array([0, 1]), *[grow_once] * 4)
    start = time.perf_counter()
    figures = grow(facet)
    figures["seconds"] = time.perf_counter() - start
    print(json.dumps(figures))


if __name__ == "__main__":
    main(float(sys.argv[1]) if len(sys.argv) > 1 else 0.8)
