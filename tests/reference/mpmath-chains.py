"""Makes mpmath-chains.json: python3 mpmath-chains.py > mpmath-chains.json (Debian package python3-mpmath).

Chains of three rotation-free boosts as 4 by 4 matrices in 50 digits: none of the forms that the project uses. Inputs are doubles, and taken
as the exact numbers that they are.
"""
import json
import random

import mpmath as mp

mp.mp.dps = 50
C = mp.mpf(299792458)
dice = random.Random(19051905)


def boost(gb):
    g = mp.sqrt(1 + sum(c * c for c in gb))
    b = [c / g for c in gb]
    b2 = sum(c * c for c in b)
    m = mp.eye(4)
    m[0, 0] = g
    for i in range(3):
        m[0, i + 1] = m[i + 1, 0] = -g * b[i]
        for j in range(3):
            m[i + 1, j + 1] = (1 if i == j else 0) + ((g - 1) * b[i] * b[j] / b2 if b2 else 0)
    return m


def direction():
    while True:
        v = [dice.uniform(-1, 1) for _ in range(3)]
        r = sum(c * c for c in v) ** 0.5
        if 0.1 < r < 1:
            return [c / r for c in v]


def row(kind, links, dt_s, dx_m):
    total = mp.eye(4)
    for gb in links:
        total = boost([mp.mpf(c) for c in gb]) * total
    gamma = total[0, 0]
    gb = [-total[0, i] for i in (1, 2, 3)]
    turn = total * boost([-c for c in gb])  # total = turn * direct boost
    # Coordinates turn by minus the angle of the axes: the antisymmetric part of the transpose is the axes' own turn.
    sine = [(turn[2, 3] - turn[3, 2]) / 2, (turn[3, 1] - turn[1, 3]) / 2, (turn[1, 2] - turn[2, 1]) / 2]
    size = mp.sqrt(sum(c * c for c in sine))
    angle = mp.atan2(size, (turn[1, 1] + turn[2, 2] + turn[3, 3] - 1) / 2)
    event = mp.matrix([C * mp.mpf(dt_s)] + [mp.mpf(c) for c in dx_m])
    seen = total * event
    text = lambda x: mp.nstr(x, 25)
    return {
        "kind": kind,
        "links": links,
        "dtS": dt_s,
        "dxM": dx_m,
        "gamma": text(gamma),
        "gammaBeta": [text(c) for c in gb],
        "rapidity": text(mp.asinh(mp.sqrt(sum(c * c for c in gb)))),
        "wignerRad": text(angle if angle > mp.mpf(10) ** -30 else mp.mpf(0)),
        "wignerAxis": [text(c / size) for c in sine] if size > mp.mpf(10) ** -30 else None,
        "dtFrameS": text(seen[0] / C),
        "dxFrameM": [text(seen[i]) for i in (1, 2, 3)],
    }


def pair():
    d = 10 ** dice.uniform(3, 7)
    return dice.choice([-1, 1]) * 10 ** dice.uniform(-6, 2.9), [d * c for c in direction()]


def link(least, most):
    size = 10 ** dice.uniform(least, most)
    return [size * c for c in direction()]


rows = []
for _ in range(14):  # as slow as the Earth
    rows.append(row("slow", [link(-5, -3) for _ in range(3)], *pair()))
for _ in range(24):  # whole chain below gamma 10 or so
    rows.append(row("moderate", [link(-1, 0) for _ in range(3)], *pair()))
for _ in range(10):
    rows.append(row("fast", [link(0, 2) for _ in range(3)], *pair()))
for _ in range(6):  # any directions, gamma to 1e6 in the first link
    rows.append(row("extreme", [link(5, 6), link(-1, 0.5), link(-1, 0.5)], *pair()))
for _ in range(8):  # out to gamma 1e6 and some of the way back, along powers of two so that the links are exactly collinear
    out = float(2**20)
    axis = dice.choice([[1, 0, 0], [0.5, -1, 0.25], [-0.25, 0.5, 0.5]])
    back = -float(round(2 ** dice.uniform(5, 20)))
    rows.append(row("there and back", [[out * c for c in axis], [back * c for c in axis], link(-1, 0)], *pair()))
print(
    json.dumps(
        {
            "source": "mpmath 1.3.0, 50 digits: products of 4 by 4 boosts, made by mpmath-chains.py beside this file",
            "columns": "links: gamma beta of each frame in its parent's axes; the pair dtS, dxM is geocentric; wigner: turn of the frame's axes against those of the direct boost",
            "rows": rows,
        },
        indent=1,
    )
)
