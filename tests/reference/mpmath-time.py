"""Makes mpmath-time.json: /usr/bin/python3 mpmath-time.py > mpmath-time.json (Debian package python3-mpmath).

TAI to TT, GPS time and TCG to the picosecond, from 1972 to 2040, in 50 digits: the defining constants and nothing else.
"""
import datetime
import json
import random

import mpmath as mp

mp.mp.dps = 50
SEED = 1972
dice = random.Random(SEED)

PS = 10**12
DAY_S = 86400
L_G = mp.mpf('6.969290134e-10')  # IAU 2000 Resolution B1.9: dTT/dTCG = 1 - L_G
TT_MINUS_TAI_PS = 32_184 * 10**9  # IAU 1991 Recommendation IV
TAI_MINUS_GPS_PS = 19 * PS  # IS-GPS-200; BIPM Circular T, section 4
EPOCH = datetime.datetime(1970, 1, 1)


def seconds(*date):
    return int((datetime.datetime(*date) - EPOCH).total_seconds())


T0_PS = seconds(1977, 1, 1) * PS  # TAI at which TT = TCG = 1977-01-01T00:00:32.184 (IAU 2000 Resolution B1.9, note 3)


def text(ps):
    whole, rest = divmod(ps, PS)
    return (EPOCH + datetime.timedelta(seconds=whole)).isoformat() + f'.{rest:012d}'


def row(tai_ps):
    tt_since_epoch_ps = mp.mpf(tai_ps - T0_PS)
    tcg_minus_tt_ps = int(mp.nint(L_G / (1 - L_G) * tt_since_epoch_ps))
    tt_ps = tai_ps + TT_MINUS_TAI_PS
    return [text(tai_ps), text(tt_ps), text(tai_ps - TAI_MINUS_GPS_PS), text(tt_ps + tcg_minus_tt_ps)]


MARKS = [
    seconds(1972, 1, 1, 0, 0, 10),  # UTC in whole seconds begins
    seconds(1977, 1, 1),
    seconds(1980, 1, 6, 0, 0, 19),  # GPS time begins
    seconds(2000, 1, 1, 11, 59, 27),  # within a second of J2000.0 TT
    seconds(2017, 1, 1, 0, 0, 36),  # the leap second of 2016
    seconds(2039, 12, 31, 23, 59, 59),
]
first, last = seconds(1972, 1, 1), seconds(2040, 1, 1)
instants = [mark * PS + ps for mark in MARKS for ps in (0, 1, PS - 1)]
instants += [dice.randrange(first, last) * PS + dice.randrange(PS) for _ in range(24)]

head = {
    'about': 'TAI to TT, GPS time and TCG, each to the nearest picosecond, from 1972 to 2040',
    'source': f'mpmath {mp.__version__}, {mp.mp.dps} digits, seed {SEED}: IAU 2000 Resolution B1.9, IAU 1991 Recommendation IV, IS-GPS-200',
    'status': 'derived',
    'columns': ['tai', 'tt', 'gps', 'tcg'],
}
print(json.dumps(head, indent=2)[:-2] + ',\n  "rows": [')
print(',\n'.join('    ' + json.dumps(row(tai_ps)) for tai_ps in sorted(instants)))
print('  ]\n}')
