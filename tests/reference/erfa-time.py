"""Makes erfa-time.json: python3 erfa-time.py [ROWS] > erfa-time.json (Debian package python3-erfa).

UTC to TAI, TT and TCG by ERFA: leap seconds and their neighbours, beginnings of months, and random times from 1972 to 2027.
"""
import datetime
import json
import random
import sys
import warnings

import erfa

SEED = 7
ROWS = int(sys.argv[1]) if len(sys.argv) > 1 else 200
dice = random.Random(SEED)
warnings.simplefilter('ignore')  # "dubious year" after the release of the library

STEPS = [(int(s['year']), int(s['month'])) for s in erfa.leap_seconds.get() if s['year'] >= 1972][1:]
FIRST_DAY = datetime.date(1972, 1, 1)
DAYS = 20200


def drawn(kind):
    if kind == 0:
        year, month = dice.choice(STEPS)
        day = datetime.date(year, month, 1) - datetime.timedelta(days=1)
        return day.year, day.month, day.day, 23, 59, dice.choice([58, 59, 60, 60, 60])
    if kind == 1:
        year, month = dice.choice(STEPS) if dice.random() < 0.5 else (dice.randint(1972, 2026), dice.randint(1, 12))
        return year, month, 1, 0, 0, dice.choice([0, 0, 1])
    day = FIRST_DAY + datetime.timedelta(days=dice.randint(0, DAYS))
    return day.year, day.month, day.day, dice.randint(0, 23), dice.randint(0, 59), dice.randint(0, 59)


def text(year, month, day, hour, minute, second, ns):
    return f'{year:04d}-{month:02d}-{day:02d}T{hour:02d}:{minute:02d}:{second:02d}.{ns:09d}'


def written(scale, jd):
    year, month, day, time = erfa.d2dtf(scale, 9, *jd)
    return text(int(year), int(month), int(day), *(int(time[name]) for name in time.dtype.names))


rows = []
for i in range(ROWS):
    fields = drawn(i % 4)
    ns = dice.choice([0, 1, 999999999, dice.randint(0, 999999999)])
    utc = erfa.dtf2d('UTC', *fields[:5], fields[5] + ns / 1e9)
    if written('UTC', utc) != text(*fields, ns):
        sys.exit(f'the two doubles of ERFA lose {text(*fields, ns)}')
    tai = erfa.utctai(*utc)
    tt = erfa.taitt(*tai)
    rows.append([written('UTC', utc), written('TAI', tai), written('TT', tt), written('TCG', erfa.tttcg(*tt))])

head = {
    'about': 'UTC to TAI, TT and TCG: leap seconds and their neighbours, beginnings of months, random times from 1972 to 2027',
    'library': f'ERFA {erfa.version.erfa_version} through pyerfa {erfa.__version__}, seed {SEED}',
    'status': 'library',
    'functions': 'dtf2d, utctai, taitt, tttcg; written by d2dtf with 9 decimals',
    'columns': ['utc', 'tai', 'tt', 'tcg'],
}
print(json.dumps(head, indent=2)[:-2] + ',\n  "rows": [')
print(',\n'.join('    ' + json.dumps(row) for row in rows))
print('  ]\n}')
