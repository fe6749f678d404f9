"""Makes earth-terms.ts: python3 earth-terms.py epv00.c > earth-terms.ts (src/epv00.c of ERFA 2.0.0, as in Debian's source package erfa).

Only the numbers are read, digit by digit; nothing is rounded. The notice that goes with them is LICENSE-erfa.txt.
"""
import re
import sys

WIDTH = 140
NUMBER = r'[-+]?\d+\.\d+(?:e[-+]?\d+)?'
source = open(sys.argv[1], encoding='utf8').read()


def digits(text):
    """A number as JavaScript writes it: the shortest digits that give the same double."""
    value = float(text)
    plain = repr(int(value)) if value == int(value) else repr(value)
    return re.sub(r'e([-+])0*', lambda match: 'e-' if match[1] == '-' else 'e', plain)


def terms(name):
    body = re.search(rf'\b{name}\[\] = \{{(.*?)\}};', source, re.S)[1]
    numbers = re.findall(NUMBER, body)
    assert len(numbers) % 3 == 0 and re.sub(rf'{NUMBER}|[\s,]', '', body) == '', name
    return ['[' + ', '.join(map(digits, numbers[at:at + 3])) + ']' for at in range(0, len(numbers), 3)]


def packed(items):
    """Items in lines of at most WIDTH."""
    line = '     '
    for item in items:
        if len(line) + len(item) + 2 > WIDTH:
            yield line
            line = '     '
        line += f' {item},'
    yield line


def series(letter):
    for axis in 'xyz':
        yield f'  [ // {axis}'
        for power in range(3):
            yield f'    [ // t^{power}'
            yield from packed(terms(f'{letter}{power}{axis}'))
            yield '    ],'
        yield '  ],'


def element(name):
    return digits(re.search(rf'\b{name} = +({NUMBER})', source)[1])


axes = [['1', element('am12'), element('am13')], [element(f'am2{n}') for n in '123'], ['0', element('am32'), element('am33')]]
rows = [f"  [{', '.join(row)}]," for row in axes]
sun_to_earth, barycentre_to_sun = ['\n'.join(series(letter)) for letter in 'es']
print(f"""import {{ type Mat3 }} from '#shared/relativity/vector';

/*! Coefficients from ERFA 2.0.0, Copyright (C) 2013-2021 NumFOCUS Foundation, BSD-3-Clause: backend/frames/LICENSE-erfa.txt */

// Made by earth-terms.py: change that, not this.
// Source: the planetary theory VSOP2000 of Moisson and Bretagnon 2001, Celestial Mechanics and Dynamical Astronomy 80, 205, simplified by
// Bretagnon (2000) and brought onto the axes of the ephemeris DE405; the fit is for 1900 to 2100.

/** One term t^n amplitude cos(phase + rate t), with t in Julian years of TDB since J2000.0: au a year^n, radians, radians a year. */
export type EarthTerm = readonly [amplitudeAu: number, phaseRad: number, rateRad: number];

/** Terms by the power n of t, from 0 to 2. */
export type TermsByPower = readonly (readonly EarthTerm[])[];

/** The terms along the axes of the theory: x and y in the ecliptic, z to its north. */
export type EarthTerms = readonly [x: TermsByPower, y: TermsByPower, z: TermsByPower];

/** The matrix that takes the theory's ecliptic axes to those of the ICRS: 23 deg 26' 21.4091" about x and 0.0475" about z. */
export const ECLIPTIC_TO_ICRS: Mat3 = [
{chr(10).join(rows)}
];

/** The Earth's centre against the Sun's. */
// prettier-ignore
export const SUN_TO_EARTH: EarthTerms = [
{sun_to_earth}
];

/** The Sun's centre against the solar-system barycentre. */
// prettier-ignore
export const BARYCENTRE_TO_SUN: EarthTerms = [
{barycentre_to_sun}
];""")
