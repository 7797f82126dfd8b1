"""The voxel solver's sphere in a general library: PETSc, conjugate gradients with smoothed aggregation (GAMG).

Same labelled volume, same trilinear cubes (plain grid), same right-hand sides, same relative residual 1e-6.
Run by the benchmark mode `voxels-petsc`, with MILLIMETRES and LOADS as arguments; with mpirun on two ranks where it works. Prints: ranks, seconds of set-up, mean seconds a load, mean iterations.
"""
import glob
import math
import sys
import time

# Debian keeps the bindings beside the library.
sys.path += glob.glob("/usr/lib/petscdir/petsc3*/*-real/lib/python3/dist-packages")

import numpy as np
from petsc4py import PETSc

edge = float(sys.argv[1]) * 1e-3
loads = int(sys.argv[2])
pairs, dense = 64, 291
comm = PETSc.COMM_WORLD
rank = comm.getRank()

radii = [0.092, 0.086, 0.080, 0.078]
sigma_of = np.array([0.0, 0.43, 0.01, 1.79, 0.33])
half = math.ceil(radii[0] / edge) + 1
n = 2 * half
axis = (np.arange(n) - half + 0.5) * edge
x, y, z = np.meshgrid(axis, axis, axis, indexing="ij")
r = np.sqrt(x * x + y * y + z * z)
label = sum((r < radius).astype(int) for radius in radii)
cells = np.argwhere(label > 0)
sigma = sigma_of[label[label > 0]]


def golden(k, count, lowest=-1.0):
    """Point k of a golden-angle lattice on the unit sphere above a height."""
    height = 1 - (1 - lowest) * (k + 0.5) / count
    angle = (k + 0.5) * math.pi * (3 - math.sqrt(5))
    ring = math.sqrt(max(0.0, 1 - height * height))
    return np.array([ring * math.cos(angle), ring * math.sin(angle), height])


number = -np.ones((n + 1,) * 3, dtype=np.int64)
corners = np.stack([cells + np.array([c & 1, c >> 1 & 1, c >> 2]) for c in range(8)], axis=1)
flat = np.ravel_multi_index(corners.reshape(-1, 3).T, number.shape)
live, compact = np.unique(flat, return_inverse=True)
compact = compact.reshape(-1, 8).astype(PETSc.IntType)
count = live.size

# Stiffness of a unit cube, 2 x 2 x 2 Gauss points.
unit = np.zeros((8, 8))
gauss = 1 / math.sqrt(3)
signs = np.array([[(-1, 1)[c & 1], (-1, 1)[c >> 1 & 1], (-1, 1)[c >> 2]] for c in range(8)])
for gx in (-gauss, gauss):
    for gy in (-gauss, gauss):
        for gz in (-gauss, gauss):
            fx, fy, fz = 1 + signs[:, 0] * gx, 1 + signs[:, 1] * gy, 1 + signs[:, 2] * gz
            b = np.stack([signs[:, 0] * fy * fz, signs[:, 1] * fx * fz, signs[:, 2] * fx * fy]) / 4
            unit += b.T @ b / 8
unit *= edge

start = time.perf_counter()
a = PETSc.Mat().createAIJ((count, count), nnz=(27, 27), comm=comm)
low, high = a.getOwnershipRange()
mine = np.nonzero((compact.min(axis=1) < high) & (compact.min(axis=1) >= low))[0]
for e in mine:
    a.setValues(compact[e], compact[e], sigma[e] * unit, addv=True)
a.assemble()
a.setNullSpace(PETSc.NullSpace().create(constant=True, comm=comm))
a.setOption(PETSc.Mat.Option.SPD, False)
a.setOption(PETSc.Mat.Option.SYMMETRIC, True)
ksp = PETSc.KSP().create(comm)
ksp.setOperators(a)
ksp.setType("cg")
ksp.setNormType(PETSc.KSP.NormType.UNPRECONDITIONED)
ksp.getPC().setType("gamg")
options = PETSc.Options()
options["pc_gamg_type"] = "agg"
options["pc_gamg_agg_nsmooths"] = 1
ksp.setFromOptions()
ksp.setTolerances(rtol=1e-6, max_it=500)
ksp.setUp()
set_up = time.perf_counter() - start

places = np.stack(np.unravel_index(live, number.shape), axis=1) * edge - half * edge
centres = axis[cells]
nearest = [int(np.argmin(((places - 0.97 * 0.092 * golden(k, pairs + 1, -0.5)) ** 2).sum(axis=1))) for k in range(pairs + 1)]


def load(s):
    b = np.zeros(count)
    if s < pairs:
        b[nearest[s]], b[nearest[pairs]] = 1, -1
        return b
    direction = golden(s - pairs, dense, -0.4)
    distance = 0.12 * direction - centres
    field = np.cross(distance, np.roll(direction, -1)) * (sigma * edge * edge / 4 / np.linalg.norm(distance, axis=1) ** 3)[:, None]
    for c in range(8):
        b += np.bincount(compact[:, c], field @ signs[c], minlength=count)
    return b


# Every so many of all 355, so that pairs and coils keep their shares.
seconds, iterations = [], []
u, f = a.createVecs()
for s in np.linspace(0, pairs + dense - 1, loads).astype(int):
    b = load(s)
    f.setArray(b[low:high])
    u.set(0)
    start = time.perf_counter()
    ksp.solve(f, u)
    seconds.append(time.perf_counter() - start)
    iterations.append(ksp.getIterationNumber())
    if ksp.getConvergedReason() < 0:
        raise SystemExit(f"load {s} did not converge: reason {ksp.getConvergedReason()}")

if rank == 0:
    print(f"{comm.getSize()}\t{set_up:.3f}\t{np.mean(seconds):.4f}\t{np.mean(iterations):.1f}", flush=True)
