"""Makes the expected results of the cases: python3 independent.py CASE [CASE ...] (Debian packages python3-erfa, python3-mpmath, python3-numpy).

A second, slow reconciliation, written from the description of the file formats and conventions alone, without a look at the program that it
checks: Python 3, ERFA 2.0.0 (the full IAU 2006/2000A model, Earth ephemeris epv00, leap seconds), whole picoseconds and fractions for
times, 50 digits for frames, and every pair of triggers looked at. It takes its network file to be right and only sets records aside.

A case is a folder with case.json (logs, and where they are used live, earthOrientation, limit), network.json and the logs. Written are
CASE/expected/*.csv and summary.json, and frames.csv: the four-velocity of each frame at each set, from which a test can tell what the boost
did from what the Earth's orientation did.
"""
import bisect
import csv
import datetime
import hashlib
import json
import math
import os
import re
import sys
from decimal import Decimal
from fractions import Fraction

import erfa
import mpmath as mp
import numpy as np

mp.mp.dps = 50
C = 299792458
PS = 10**12
DAY_S = 86400
DAY_PS = DAY_S * PS
AU_M = 149597870700
ARCSEC = math.pi / 648000
TT_PS = 32184 * 10**9
UNIX_DAY = datetime.date(1970, 1, 1).toordinal()
UNIX_MJD = 40587


def real(x):
    """A fraction with 50 digits."""
    return mp.mpf(x.numerator) / x.denominator if isinstance(x, Fraction) else mp.mpf(x)


# ---------------------------------------------------------------- scales
STEPS = [(datetime.date(int(s['year']), int(s['month']), 1).toordinal() - UNIX_DAY, int(s['tai_utc']))
         for s in erfa.leap_seconds.get() if s['year'] >= 1972]  # (first day, TAI - UTC)


def tai_utc_on(day):
    i = bisect.bisect_right([d for d, _ in STEPS], day) - 1
    return STEPS[i][1] if i >= 0 else None


def tai_utc_at(tai_s):
    return ([v for d, v in STEPS if d * DAY_S + v <= tai_s] or [STEPS[0][1]])[-1]


class Fault(Exception):
    """Why a record is set aside."""


READING = re.compile(r'(\d{4})-(\d\d)-(\d\d)[T ](\d\d):(\d\d):(\d\d)(?:\.(\d{1,12}))?(Z?)', re.ASCII)


def to_tai(groups, scale):
    year, month, day, hour, minute, second = (int(x) for x in groups[:6])
    try:
        day = datetime.date(year, month, day).toordinal() - UNIX_DAY
    except ValueError:
        raise Fault('date')
    if hour > 23 or minute > 59 or second > 60:
        raise Fault('time-of-day')
    if second == 60 and not (scale == 'UTC' and (hour, minute) == (23, 59) and any(d == day + 1 for d, _ in STEPS[1:])):
        raise Fault('no-leap-second')
    label = (day * DAY_S + hour * 3600 + minute * 60 + second) * PS + int((groups[6] or '0').ljust(12, '0'))
    if scale == 'UTC':
        if tai_utc_on(day) is None:
            raise Fault('before-1972')
        return label + tai_utc_on(day) * PS
    return label + {'TAI': 0, 'GPS': 19 * PS, 'TT': -TT_PS}[scale]


def stated_time(text):
    found = re.fullmatch(r'(.*?)(Z| UTC| TAI| GPS| TT|)', text, re.ASCII)
    return to_tai(READING.fullmatch(found[1]).groups(), found[2].strip().replace('Z', 'UTC') or 'UTC')


def tai_text(ps):
    second, rest = divmod(ps, PS)
    return (datetime.datetime(1970, 1, 1) + datetime.timedelta(seconds=second)).isoformat() + f'.{rest:012d}'


# ---------------------------------------------------------------- the network file
def geodetic(lat, lon, height):
    """WGS 84."""
    a, f = mp.mpf(6378137), 1 / mp.mpf('298.257223563')
    lat, lon, height = mp.radians(real(lat)), mp.radians(real(lon)), real(height)
    e2 = f * (2 - f)
    n = a / mp.sqrt(1 - e2 * mp.sin(lat) ** 2)
    return [(n + height) * mp.cos(lat) * mp.cos(lon), (n + height) * mp.cos(lat) * mp.sin(lon), (n * (1 - e2) + height) * mp.sin(lat)]


class Network:
    def __init__(self, doc):
        number = lambda o, key, default=0: Fraction(o.get(key, default))
        self.run_from = stated_time(doc['run']['from'])
        self.run_to = stated_time(doc['run']['to']) if 'to' in doc['run'] else None
        self.origin = stated_time(doc['origin']['time']) if 'time' in doc.get('origin', {}) else self.run_from
        self.references = {r['code']: number(r, 'sigma_ns') for r in doc.get('references', [])}
        self.clocks = {}
        for clock in doc.get('clocks', []):
            segments = []
            for j, s in enumerate(clock['segments']):
                start = stated_time(s['from'])
                segments.append({'id': (clock['code'], j), 'from': start, 'at': stated_time(s['at']) if 'at' in s else start,
                                 'offset': number(s, 'offset_ns'), 'offset_sigma': number(s, 'offset_sigma_ns'), 'rate': number(s, 'rate_ns_per_day'),
                                 'rate_sigma': number(s, 'rate_sigma_ns_per_day'), 'covariance': number(s, 'covariance_ns2_per_day'),
                                 'reference': s.get('reference')})
            self.clocks[clock['code']] = sorted(segments, key=lambda s: s['from'])
        self.sites = {}
        for s in doc['sites']:
            g = s['position'].get('geodetic')
            place = geodetic(*(number(g, k) for k in ('latitude_deg', 'longitude_deg', 'height_m'))) if g else s['position']['itrs_m']
            self.sites[s['code']] = {'scale': s['scale'], 'clock': s['clock'], 'itrs': np.array([float(x) for x in place]),
                                     'position_sigma': number(s, 'position_sigma_m'), 'delay': number(s, 'delay_ns'),
                                     'delay_sigma': number(s, 'delay_sigma_ns'), 'reading_sigma': number(s, 'reading_sigma_ns') if 'reading_sigma_ns' in s else None}
        self.frames = {f['code']: f for f in doc.get('frames', [])}
        rule = doc['rule']
        self.rule_code, self.window = rule['code'], rule['window']
        self.minimum_fold, self.sigmas = int(rule.get('minimum_fold', 2)), number(rule, 'sigmas', 3)
        self.within = number(doc['neighbours'], 'within_ns') if 'neighbours' in doc else None
        self.selections = doc.get('selections', [])


# ---------------------------------------------------------------- the Earth
class Earth:
    def __init__(self, network, finals):
        self.itrs = {code: site['itrs'] for code, site in network.sites.items()}
        self.constant = -tai_utc_at(network.run_from // PS)
        self.rows = []
        for line in open(finals) if finals else []:
            mjd = int(float(line[7:15]))
            self.rows.append((mjd, float(line[58:68]) - tai_utc_on(mjd - UNIX_MJD), float(line[18:27]) * ARCSEC, float(line[37:46]) * ARCSEC))
        self.known = {}

    @staticmethod
    def julian(ps):
        day, rest = divmod(ps, DAY_PS)
        return 2400000.5 + UNIX_MJD + day, rest / DAY_PS

    def orientation(self, tai):
        """UT1 - TAI, s, and the pole, rad: linear between the daily rows, the last one after them."""
        if not self.rows:
            return self.constant, 0.0, 0.0
        mjd = (tai - tai_utc_at(tai // PS) * PS) / DAY_PS + UNIX_MJD
        mjd = max(self.rows[0][0], min(self.rows[-1][0], mjd))
        i = max(1, bisect.bisect_left([r[0] for r in self.rows], mjd))
        a, b = self.rows[i - 1], self.rows[i]
        return tuple(x + (y - x) * (mjd - a[0]) / (b[0] - a[0]) for x, y in zip(a[1:], b[1:]))

    def place(self, site, tai):
        if tai not in self.known:
            ut1, x, y = self.orientation(tai)
            self.known[tai] = np.array(erfa.c2t06a(*self.julian(tai + TT_PS), *self.julian(tai + round(ut1 * PS)), x, y)).T
        return self.known[tai] @ self.itrs[site]

    def velocity(self, tai):
        """Barycentric, in c, ICRS axes."""
        state = erfa.epv00(*self.julian(tai + TT_PS))[1]
        return np.array(state['v']) * (AU_M / DAY_S / C)


# ---------------------------------------------------------------- frames
def boost(gamma, proper):
    """To a frame of proper velocity gamma beta, acting on (ct, x, y, z)."""
    m = mp.eye(4)
    m[0, 0] = gamma
    for i in range(3):
        m[0, i + 1] = m[i + 1, 0] = -proper[i]
        for j in range(3):
            m[i + 1, j + 1] += proper[i] * proper[j] / (1 + gamma)
    return m


class Frames:
    def __init__(self, network, earth):
        self.network, self.earth, self.known = network, earth, {}

    def own(self, frame, tai):
        velocity = frame.get('velocity')
        if velocity is None:
            beta = [-mp.mpf(float(x)) for x in self.earth.velocity(tai)]
        elif 'beta' in velocity:
            beta = [real(Fraction(x)) for x in velocity['beta']]
        else:
            toward = velocity['toward']
            if 'baseline' in toward:
                first, second = (self.earth.place(site, tai) for site in toward['baseline'])
                d = [mp.mpf(float(y)) - mp.mpf(float(x)) for x, y in zip(first, second)]
                n = [x / mp.sqrt(sum(y * y for y in d)) for x in d]
            else:
                ra, dec = (mp.radians(real(Fraction(toward[k]))) for k in ('ra_deg', 'dec_deg'))
                n = [mp.cos(dec) * mp.cos(ra), mp.cos(dec) * mp.sin(ra), mp.sin(dec)]
            if 'rapidity' in velocity:
                w = real(Fraction(velocity['rapidity']))
                return boost(mp.cosh(w), [mp.sinh(w) * x for x in n])
            speed = real(Fraction(velocity['speed_c'])) if 'speed_c' in velocity else real(Fraction(velocity['speed_km_s'])) * 1000 / C
            beta = [speed * x for x in n]
        gamma = 1 / mp.sqrt(1 - sum(x * x for x in beta))
        return boost(gamma, [gamma * x for x in beta])

    def matrix(self, code, tai):
        """From the geocentric frame, taken at an event at tai."""
        if code == 'geocentric':
            return mp.eye(4)
        frame = self.network.frames[code]
        if (code, tai) not in self.known:
            own = self.own(frame, self.network.origin if frame.get('at') == 'origin' else tai)
            self.known[code, tai] = own * self.matrix(frame.get('parent', 'geocentric'), tai)
        return self.known[code, tai]

    def row(self, code, tai):
        m = self.matrix(code, tai)
        return [m[0, i] for i in range(4)]


# ---------------------------------------------------------------- logs
def records(text):
    """(line, text, cells, well formed) of each record (RFC 4180); a quote within an unquoted cell is a character of it."""
    i, n, line = 0, len(text), 1
    while i < n:
        start, start_line, cells, good, raw = i, line, [], True, None
        while raw is None:
            cell, quoted = [], text[i:i + 1] == '"'
            if quoted:
                i += 1
                while i < n and not (text[i] == '"' and text[i + 1:i + 2] != '"'):
                    line += text[i] == '\n'
                    cell.append(text[i])
                    i += 2 if text[i] == '"' else 1
                good = good and i < n
                i += 1
            while True:
                if i >= n:
                    raw = text[start:]
                    break
                if text[i] == ',':
                    i += 1
                    break
                if text[i] == '\n' or text[i:i + 2] == '\r\n':
                    raw = text[start:i]
                    i += 1 if text[i] == '\n' else 2
                    line += 1
                    break
                good = good and not quoted
                cell.append(text[i])
                i += 1
            cells.append(''.join(cell))
        if raw:
            yield start_line, raw, cells, good


NUMBER = re.compile(r'[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?', re.ASCII)
CODE = re.compile(r'[A-Za-z0-9_-]{1,24}')


def finite(text):
    return bool(NUMBER.fullmatch(text)) and math.isfinite(float(text))


def record(row, named, network):
    cell = lambda name: row.get(name, '')
    code = row.get('site', named)
    if code not in network.sites or named not in (None, code):
        raise Fault('site')
    site = network.sites[code]
    if not re.fullmatch('[0-9]+', cell('sequence')):
        raise Fault('sequence')
    series = cell('series')
    if series and not CODE.fullmatch(series):
        raise Fault('series')
    kind = cell('kind') or 'trigger'
    if kind not in ('trigger', 'reference', 'test'):
        raise Fault('kind')
    if not cell('reading'):
        raise Fault('reading-empty')
    form = READING.fullmatch(cell('reading'))
    if not form or (form[8] and site['scale'] != 'UTC'):
        raise Fault('reading-form')
    tai = to_tai(form.groups(), site['scale'])
    sigma = cell('sigma_ns')
    if sigma:
        if not finite(sigma) or float(sigma) < 0:
            raise Fault('sigma')
        variance, source = Fraction(Decimal(sigma)) ** 2, 'record'
    elif site['reading_sigma'] is not None:
        variance, source = site['reading_sigma'] ** 2, 'site'
    else:
        variance, source = Fraction(10**9, 10 ** len(form[7] or '')) ** 2 / 12, 'resolution'
    if cell('amplitude') and not finite(cell('amplitude')):
        raise Fault('amplitude')
    undelayed = tai - site['delay'] * 1000
    segment, since, ahead = None, Fraction(0), Fraction(0)
    if site['clock'] != 'exact':
        held = [s for s in network.clocks[site['clock']] if s['from'] <= undelayed]
        if not held:
            raise Fault('before-clock-record')
        segment = held[-1]
        since = (undelayed - segment['at']) / DAY_PS
        ahead = (segment['offset'] + segment['rate'] * since) * 1000
    when = round(undelayed - ahead)  # to the nearest picosecond, halves to the even one
    if when < network.run_from or (network.run_to is not None and when > network.run_to):
        raise Fault('outside-run')
    sequence = int(cell('sequence'))
    return {'site': code, 'series': series, 'sequence': sequence, 'kind': kind, 'tai': when, 'variance': variance, 'source': source,
            'amplitude': cell('amplitude'), 'segment': segment, 'since': since,
            'content': {k: v.replace('\r\n', '\n') for k, v in row.items() if k != 'site' and v},
            'name': ':'.join([code, *([series] if series else []), str(sequence)])}


def intake(network, logs):
    aside, found, lines = [], {}, 0
    for named, path in logs:
        header = None
        for line, raw, cells, good in records(open(path, 'rb').read().decode('utf-8-sig', 'replace')):
            if header is None:
                header = cells
                continue
            lines += 1
            try:
                if not good or len(cells) != len(header):
                    raise Fault('columns')
                event = record(dict(zip(header, cells)), named, network)
                found.setdefault(event['name'], []).append((event, os.path.basename(path), line, raw))
            except Fault as fault:
                aside.append((os.path.basename(path), line, str(fault), raw))
    events, repeated = [], 0
    for same in found.values():
        if all(event['content'] == same[0][0]['content'] for event, *_ in same):
            events.append(same[0][0])
            repeated += len(same) - 1
        else:
            aside += [(name, line, 'conflict', raw) for _, name, line, raw in same]
    events.sort(key=lambda e: (e['tai'], e['site'], e['series'], e['sequence']))
    for i, event in enumerate(events):
        event['i'] = i
    return events, sorted(aside), lines, repeated


# ---------------------------------------------------------------- errors
def reference_variance(network, segment):
    return network.references[segment['reference']] ** 2 if segment and segment['reference'] else Fraction(0)


def segment_variance(segment, since):
    if segment is None:
        return Fraction(0)
    return segment['offset_sigma'] ** 2 + 2 * segment['covariance'] * since + (segment['rate_sigma'] * since) ** 2


def event_variance(network, e):
    clock = segment_variance(e['segment'], e['since']) + reference_variance(network, e['segment'])
    return e['variance'] + network.sites[e['site']]['delay_sigma'] ** 2 + clock


def time_variance(network, a, b):
    """Of the difference: what both share cancels."""
    v = a['variance'] + b['variance']
    if a['site'] != b['site']:
        v += sum(network.sites[e['site']]['delay_sigma'] ** 2 for e in (a, b))
    sa, sb = a['segment'], b['segment']
    if sa and sb and sa['id'] == sb['id']:
        return v + (sa['rate_sigma'] * (a['since'] - b['since'])) ** 2
    v += segment_variance(sa, a['since']) + segment_variance(sb, b['since'])
    if not (sa and sb and sa['reference'] and sa['reference'] == sb['reference']):
        v += reference_variance(network, sa) + reference_variance(network, sb)
    return v


def distance_variance(network, a, b):
    return Fraction(0) if a['site'] == b['site'] else sum(network.sites[e['site']]['position_sigma'] ** 2 for e in (a, b))


# ---------------------------------------------------------------- pairs and orders
def written(x):
    x = float(x)
    if math.isinf(x):
        return 'Infinity' if x > 0 else '-Infinity'
    return str(int(x)) if x == int(x) and abs(x) < 1e21 else repr(x)


def pair(network, a, b):
    dt = b['tai'] - a['tai']
    dx = [mp.mpf(float(y)) - mp.mpf(float(x)) for x, y in zip(a['place'], b['place'])]
    d = mp.sqrt(sum(x * x for x in dx))
    cdt = mp.mpf(dt) * C / PS
    vt, vd = real(time_variance(network, a, b)), real(distance_variance(network, a, b))
    sigma_dt, sigma_d = mp.sqrt(vt), mp.sqrt(vd)
    sigma_gap = mp.sqrt(vt + vd * mp.mpf(10) ** 18 / C**2)

    def in_sigmas(metres):
        if metres == 0:
            return mp.mpf(0)
        return metres / (C * sigma_gap) * 10**9 if sigma_gap else mp.sign(metres) * mp.inf

    margin, k, square = in_sigmas(cdt - d), real(network.sigmas), cdt**2 - d**2
    kind = 'timelike' if margin > k else 'spacelike' if margin < -k else 'undecided'
    turning = [''] * 5
    if kind == 'spacelike':
        v = cdt / d
        turning = [v, mp.sqrt((C * sigma_dt / 10**9) ** 2 + (v * sigma_d) ** 2) / d, *(x / d for x in dx)]
    proper = {'timelike': lambda: mp.sqrt(square) / C, 'spacelike': lambda: mp.sqrt(-square), 'undecided': lambda: ''}[kind]()
    cells = [Fraction(dt, 1000), d, sigma_dt, sigma_gap, margin, in_sigmas(cdt + d), square, kind, proper, *turning]
    return [x if isinstance(x, str) else written(x) for x in cells], dx, cdt, sigma_dt, sigma_d


def order(row, dx, cdt, sigma_dt, sigma_d, k):
    dt = (row[0] * cdt + sum(row[i + 1] * dx[i] for i in range(3))) / C * 10**9
    sigma = mp.sqrt((row[0] * sigma_dt) ** 2 + sum(x * x for x in row[1:]) * (sigma_d / C * 10**9) ** 2)
    return [written(dt), written(sigma), 'tie' if abs(dt) <= k * sigma else 'a' if dt > 0 else 'b']


# ---------------------------------------------------------------- coincidences
def near(network, frames, a, b):
    """For a before b in the order of events, of different sites."""
    window, dt = network.window, Fraction(b['tai'] - a['tai'], 1000)
    dx = b['place'] - a['place']
    if window['kind'] == 'light-time':
        d = math.sqrt(float(dx @ dx))
        sigma_gap = math.sqrt(float(time_variance(network, a, b)) + float(distance_variance(network, a, b)) * 1e18 / C**2)
        return float(dt) <= d / (float(window.get('speed_c', 1)) * C) * 1e9 + float(window.get('margin_ns', 0)) + float(network.sigmas) * sigma_gap
    if window.get('frame', 'geocentric') == 'geocentric':
        return dt <= Fraction(window['width_ns'])
    row = frames.row(window['frame'], a['tai'])
    return abs(row[0] * real(dt) + sum(row[i + 1] * mp.mpf(float(dx[i])) for i in range(3)) / C * 10**9) <= real(Fraction(window['width_ns']))


def neighbourhoods(network, frames, events):
    triggers = [e for e in events if e['kind'] == 'trigger']
    graph = {e['i']: set() for e in triggers}
    for i, a in enumerate(triggers):
        for b in triggers[i + 1:]:
            if a['site'] != b['site'] and near(network, frames, a, b):
                graph[a['i']].add(b['i'])
                graph[b['i']].add(a['i'])
    return graph


def maximal_sets(first, graph):
    """All maximal sets whose earliest event is `first` (Bron and Kerbosch)."""
    found = []

    def extend(chosen, possible, excluded):
        if not possible and not excluded:
            found.append(tuple(sorted(chosen)))
            return
        for u in sorted(possible):
            extend([*chosen, u], possible & graph[u], excluded & graph[u])
            possible = possible - {u}
            excluded = excluded | {u}

    extend([first], {u for u in graph[first] if u > first}, {u for u in graph[first] if u < first})
    return found


def coincidences(network, events, graph, limit):
    sets, crowded = [], []
    for first in sorted(graph):
        kept = [s for s in maximal_sets(first, graph) if len(s) >= network.minimum_fold]
        if len(kept) <= limit:
            sets += kept
            continue
        later = [first, *(u for u in graph[first] if u > first)]
        crowded.append([events[first]['name'], len({events[u]['site'] for u in later}), len(later), limit + 1])
    return sorted(sets), crowded


# ---------------------------------------------------------------- results
PAIR = ('dt_ns distance_m sigma_dt_ns sigma_gap_ns margin_sigma reverse_margin_sigma interval_m2 class proper turning_speed turning_sigma toward_x '
        'toward_y toward_z').split()


def counted(values):
    counts = {}
    for value in values:
        counts[str(value)] = counts.get(str(value), 0) + 1
    return counts


def outside_live(path, events):
    spans = {}
    for row in csv.DictReader(open(path, newline='', encoding='utf-8-sig')):
        spans.setdefault(row['site'], []).append((stated_time(row['from']), stated_time(row['to'])))
    return sum(e['kind'] == 'trigger' and not any(a <= e['tai'] <= b for a, b in spans.get(e['site'], [])) for e in events)


def reconcile(folder):
    at = lambda name: os.path.join(folder, name)
    case = json.load(open(at('case.json')))
    network = Network(json.load(open(at('network.json'), encoding='utf-8'), parse_float=Decimal))
    logs = [(site, at(path)) for site, path in case['logs']]
    events, aside, lines, repeated = intake(network, logs)
    earth = Earth(network, at(case['earthOrientation']) if 'earthOrientation' in case else None)
    frames = Frames(network, earth)
    for event in events:
        event['place'] = earth.place(event['site'], event['tai'])
    graph = neighbourhoods(network, frames, events)
    sets, crowded = coincidences(network, events, graph, case.get('limit', 10000))
    os.makedirs(at('expected'), exist_ok=True)

    def write(name, header, rows):
        with open(at(f'expected/{name}.csv'), 'w', newline='', encoding='utf-8') as file:
            csv.writer(file, lineterminator='\n').writerows([header, *rows])

    write('events', 'site series sequence kind tai sigma_ns sigma_from x_m y_m z_m amplitude'.split(),
          [[e['site'], e['series'], e['sequence'], e['kind'], tai_text(e['tai']), written(mp.sqrt(real(event_variance(network, e)))), e['source'],
            *map(written, e['place']), written(e['amplitude']) if e['amplitude'] else ''] for e in events])
    named, rows = [], []
    for rows_of in sets:
        of = [events[i] for i in rows_of]
        code = hashlib.sha256('\n'.join([network.rule_code, *sorted(e['name'] for e in of)]).encode()).hexdigest()[:12]
        named.append((code, of))
        rows.append([code, len(of), ' '.join(e['site'] for e in of), tai_text(of[0]['tai']), written(Fraction(of[-1]['tai'] - of[0]['tai'], 1000)),
                     ' '.join(e['name'] for e in of)])
    write('coincidences', 'set fold sites first_tai span_ns events'.split(), rows)
    by_name = {e['name']: e for e in events}
    named += [(s['code'], sorted((by_name[n] for n in s['events']), key=lambda e: e['i'])) for s in network.selections]
    pairs, orders, boosts, known = [], [], [], {}
    def kept(a, b):
        if (a['i'], b['i']) not in known:
            known[a['i'], b['i']] = pair(network, a, b)
        return known[a['i'], b['i']]

    for code, of in named:
        rows_of = [(f, frames.row(f, of[0]['tai'])) for f in ['geocentric', *network.frames]] if len(of) > 1 else []
        boosts += [[code, f, *(mp.nstr(x if i == 0 else -x, 17) for i, x in enumerate(row))] for f, row in rows_of]
        for i, a in enumerate(of):
            for b in of[i + 1:]:
                cells, *lengths = kept(a, b)
                pairs.append([code, a['name'], b['name'], *cells])
                orders += [[code, a['name'], b['name'], f, *order(row, *lengths, real(network.sigmas))] for f, row in rows_of]
    write('pairs', ['set', 'a', 'b', *PAIR], pairs)
    write('orders', 'set a b frame dt_ns sigma_ns order'.split(), orders)
    write('frames', 'set frame gamma gamma_beta_x gamma_beta_y gamma_beta_z'.split(), boosts)
    inside = {i for s in sets for i in s}
    write('neighbours', ['a', 'b', *PAIR],
          [[a['name'], b['name'], *kept(a, b)[0]] for a in events for b in events[a['i'] + 1:]
           if network.within is not None and Fraction(b['tai'] - a['tai'], 1000) <= network.within and {a['i'], b['i']} & inside])
    write('crowded', 'event sites events sets_at_least'.split(), crowded)
    write('set-aside', 'file line reason text'.split(), aside)
    summary = {'lines': lines, 'repeated': repeated, 'events': counted(e['kind'] for e in events), 'set_aside': counted(row[2] for row in aside),
               'coincidences': counted(len(s) for s in sets), 'pairs': counted(row[10] for row in pairs), 'crowded': len(crowded),
               'triggers_outside': outside_live(at(case['live']), events) if 'live' in case else None}
    json.dump(summary, open(at('expected/summary.json'), 'w'), indent=2)
    open(at('expected/summary.json'), 'a').write('\n')


for case_folder in sys.argv[1:]:
    reconcile(case_folder)
