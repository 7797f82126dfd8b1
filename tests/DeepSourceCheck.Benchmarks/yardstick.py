"""The kernels of the benchmarks in vectorised numpy, float64, one thread: prints `kernel<TAB>seconds a dipole`, the least of twenty passes.

200 dipoles at a time, along the last axis: long loops whose arrays stay near the processor. Same sizes as KernelWork: 64 electrodes, 291 axial gradiometers of two points.
EEG: Legendre recurrence over 35 degrees, the mean that 300,000 dipoles within 0.6 of the inner radius need for a tail of 1e-12.
MEG: Sarvas 1987 eq. 25. Split: batched singular values. Projection: mean and largest squared channel. Weights of the series are arbitrary numbers: only time is measured.
"""
import time

import numpy as np

ELECTRODES, CHANNELS, DEGREES = 64, 291, 35
rng = np.random.default_rng(1)


def unit(n):
    v = rng.normal(size=(n, 3))
    return v / np.linalg.norm(v, axis=1)[:, None]


def positions(n):
    return unit(n) * (0.6 * 0.078 * np.cbrt(rng.random(n)))[:, None]


def eeg(x, e, weights):
    r = np.linalg.norm(x, axis=1)
    c = e @ (x / r[:, None]).T                                   # electrode x dipole
    p, q = np.ones_like(c), np.zeros_like(c)                     # P_n', P_(n-1)'
    along, across = np.zeros_like(c), np.zeros_like(c)
    power = np.ones_like(r)
    for n in range(1, DEGREES + 1):
        w = weights[n] * power
        along += w * p
        across += w * q
        p, q = ((2 * n + 1) * c * p - (n + 1) * q) / n, p
        power = power * r
    return along[:, None, :] * e[:, :, None] - across[:, None, :] * x.T[None, :, :]


def meg(r0, r, k, share):
    x = r0.T[None]                                               # 1 x 3 x dipole
    a = r[:, :, None] - x
    norm = np.sqrt((a * a).sum(1))
    radius = np.linalg.norm(r, axis=1)[:, None]
    ar = np.einsum("pcd,pc->pd", a, r)
    f = norm * (radius * norm + ar)
    b = norm + 2 * radius + ar / norm
    alpha = b + norm * norm / radius + norm
    kr = (k * r).sum(1)[:, None]
    gradient = alpha * kr - b * np.einsum("pc,cd->pd", k, r0.T)
    h = k[:, :, None] / f[:, None] - r[:, :, None] * (gradient / (f * f))[:, None]
    h = (share[:, None, None] * h).reshape(CHANNELS, 2, 3, -1).sum(1)
    return np.stack([x[:, 1] * h[:, 2] - x[:, 2] * h[:, 1], x[:, 2] * h[:, 0] - x[:, 0] * h[:, 2], x[:, 0] * h[:, 1] - x[:, 1] * h[:, 0]], 1)


def split(rows):
    return np.linalg.svd(np.linalg.qr(rows, mode="r"))


def project(rows, u):
    p = np.einsum("dcx,x->dc", rows, u) ** 2
    return p.mean(1), p.max(1), p.argmax(1)


def least(work, dipoles):
    times = []
    for _ in range(20):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return min(times) / dipoles


axes = unit(CHANNELS)
points = np.stack([0.122 * axes, 0.182 * axes], 1).reshape(-1, 3)
share = np.tile([1.0, -1.0], CHANNELS)
few, electrodes, weights = positions(200), unit(ELECTRODES), rng.random(DEGREES + 1)
leadfield = np.ascontiguousarray(np.moveaxis(meg(few, points, np.repeat(axes, 2, 0), share), 2, 0))
factor = np.linalg.cholesky(np.eye(CHANNELS) + np.cov(rng.normal(size=(CHANNELS, 1000))))
inverse = np.linalg.inv(factor)
flat = np.ascontiguousarray(np.moveaxis(leadfield, 0, 1).reshape(CHANNELS, -1))

for name, work in (
    ("eeg", lambda: eeg(few, electrodes, weights)),
    ("meg", lambda: meg(few, points, np.repeat(axes, 2, 0), share)),
    ("split", lambda: split(leadfield)),
    ("projection", lambda: project(leadfield, np.array([0.3, -0.5, 0.8]))),
    ("whitening", lambda: inverse @ flat),
):
    print(f"{name}\t{least(work, len(few)):.6e}")
