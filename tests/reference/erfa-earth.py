"""Makes erfa-earth.json: python3 erfa-earth.py > erfa-earth.json (Debian packages python3-erfa and python3-numpy).

The full IAU 2006/2000A model of ERFA at random instants from 1980 to 2040 and its Earth ephemeris from 1900 to 2100, for comparison.
"""
import json

import erfa
import numpy as np

SEED = 20240607
dice = np.random.default_rng(SEED)
RAD_PER_ARCSEC = np.pi / 648000
AU_M = 149597870700
PS = 10**12
FROM_S, TO_S = 315532800, 2240524800  # 1980-01-01, 2041-01-01
EPHEMERIS_FROM_S, EPHEMERIS_TO_S = -2208988800, 4102444800  # 1900-01-01, 2100-01-01


def whole(least, end):
    return int(dice.integers(least, end))


def julian(tai_s, ps, ahead_s):
    """Whole day at 0 h and fraction: the split that loses least."""
    days, rest_s = divmod(tai_s, 86400)
    return 2440587.5 + days, (rest_s + ps * 1e-12 + ahead_s) / 86400


def tt(tai_s, ps):
    return julian(tai_s, ps, 32.184)


def orientation():
    """UT1 - TAI in seconds, pole x and y in arcseconds: invented."""
    return dict(
        ut1MinusTaiS=round(float(dice.uniform(-45, -15)), 7),
        poleXArcsec=round(float(dice.uniform(-0.6, 0.6)), 6),
        poleYArcsec=round(float(dice.uniform(-0.1, 0.7)), 6),
    )


def gcrs_to_itrs(tai_s, ps, eop):
    ut1 = julian(tai_s, ps, eop['ut1MinusTaiS'])
    return erfa.c2t06a(*tt(tai_s, ps), *ut1, eop['poleXArcsec'] * RAD_PER_ARCSEC, eop['poleYArcsec'] * RAD_PER_ARCSEC)


def itrs(latitude_deg, longitude_deg, height_m):
    return erfa.gd2gc(1, np.radians(longitude_deg), np.radians(latitude_deg), height_m)


SITES = [
    (0, 0, 0), (90, 0, 2800), (-90, 0, 2835), (0, 180, 10), (12.5, -180, 30), (46.45514666666667, -119.4076571388889, 142.554),
    (30.562894333333332, -90.77424038888888, -6.574), (43.631414472222225, 10.504496611111112, 51.884), (36.42, 137.3, 358),
    (-35.2, 149.1, 805), (-26.7, 116.63, 370), (71.3, -156.6, 8), (-54.8, -68.3, 20), (19.82, -155.47, 4205), (-69.0, 39.6, 29),
    (64.15, -21.9, 15),
]


def matrix_row():
    tai_s, ps, eop = whole(FROM_S, TO_S), whole(0, PS), orientation()
    x, y, s = erfa.xys06a(*tt(tai_s, ps))
    angle = erfa.era00(*julian(tai_s, ps, eop['ut1MinusTaiS']))
    matrix = gcrs_to_itrs(tai_s, ps, eop).ravel().tolist()
    return dict(taiS=tai_s, ps=ps, **eop, xRad=float(x), yRad=float(y), locatorRad=float(s), rotationAngleRad=float(angle), gcrsToItrs=matrix)


def pair_row(number):
    tai_s, ps, gap_ps = whole(FROM_S, TO_S), whole(0, PS), whole(-PS, PS + 1)
    if number < 10:  # across a whole hour
        tai_s, ps, gap_ps = tai_s // 3600 * 3600, 0 if number < 3 else whole(0, 4 * PS // 10), -whole(PS // 2, PS)
    elif number < 20:  # at one instant
        gap_ps = 0
    a, b = dice.choice(len(SITES), 2, replace=False).tolist()
    if 20 <= number < 24:  # one site twice
        b = a
    carry_s, later_ps = divmod(ps + gap_ps, PS)
    eop = orientation()
    place_a = gcrs_to_itrs(tai_s, ps, eop).T @ itrs(*SITES[a])
    place_b = gcrs_to_itrs(tai_s + carry_s, later_ps, eop).T @ itrs(*SITES[b])
    ends = dict(a=dict(site=a, taiS=tai_s, ps=ps), b=dict(site=b, taiS=tai_s + carry_s, ps=later_ps))
    return dict(**ends, **eop, distanceM=float(np.linalg.norm(place_b - place_a)))


EDGES = [
    (90, 0, 0), (-90, 0, -100), (0, 180, 0), (0, -90, 8848), (89.9999999, 45, 1000), (-89.9999999, -135, 1000), (1e-9, 179.999999999, 5),
    (45, 0, -10000),
]


def geodetic_row(number):
    latitude = round(float(np.degrees(np.arcsin(dice.uniform(-1, 1)))), 9)
    longitude = round(float(dice.uniform(-180, 180)), 9)
    height = round(float(dice.choice([dice.uniform(-500, 9000), dice.uniform(2e5, 1e6), dice.uniform(1e6, 4e7)])), 3)
    if number < len(EDGES):
        latitude, longitude, height = EDGES[number]
    place = itrs(latitude, longitude, height)
    back_longitude, back_latitude, back_height = erfa.gc2gd(1, place)
    back = dict(latitudeDeg=float(np.degrees(back_latitude)), longitudeDeg=float(np.degrees(back_longitude)), heightM=float(back_height))
    return dict(latitudeDeg=latitude, longitudeDeg=longitude, heightM=height, itrsM=place.tolist(), back=back)


def barycentric_row():
    tai_s, ps = whole(EPHEMERIS_FROM_S, EPHEMERIS_TO_S), whole(0, PS)
    _, earth = erfa.epv00(*tt(tai_s, ps))
    return dict(taiS=tai_s, ps=ps, placeM=(earth['p'] * AU_M).tolist(), velocityMS=(earth['v'] * (AU_M / 86400)).tolist())


print(json.dumps(dict(
    about='The full IAU 2006/2000A model of ERFA at random instants from 1980 to 2040 and its Earth ephemeris from 1900 to 2100',
    library=f'ERFA {erfa.version.erfa_version} through pyerfa {erfa.__version__}, numpy {np.__version__}, seed {SEED}',
    status='library',
    functions=dict(
        matrices='xys06a, era00, c2t06a (row by row)',
        pairs='the transpose of c2t06a at each event, applied to gd2gc of its site; the distance between the two places',
        geodetic='gd2gc and, back, gc2gd; ellipsoid 1 (WGS 84)',
        barycentric='epv00, TT in place of TDB, au = 149597870700 m',
    ),
    conventions='Instants are TAI seconds since 1970-01-01T00:00:00 TAI and picoseconds, TT = TAI + 32.184 s. UT1 - TAI and the pole are '
    'invented and constant within a row. No celestial pole offsets. Dates are handed over as whole day at 0 h and fraction.',
    sites=[dict(latitudeDeg=b, longitudeDeg=l, heightM=h, itrsM=itrs(b, l, h).tolist()) for b, l, h in SITES],
    matrices=[matrix_row() for _ in range(60)],
    pairs=[pair_row(number) for number in range(200)],
    geodetic=[geodetic_row(number) for number in range(60)],
    barycentric=[barycentric_row() for _ in range(300)],
)))
