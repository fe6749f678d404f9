/** Speed of light in vacuum, m/s, exact. Source: SI Brochure, 9th edition (2019), definition of the metre. */
export const C_M_S = 299_792_458;

/** Nanoseconds that light needs for a metre. */
export const NS_PER_LIGHT_M = 1e9 / C_M_S;

/** SI seconds in a day of a uniform scale. Source: SI Brochure, 9th edition (2019), table 8. */
export const S_PER_DAY = 86_400;

/** TAI minus GPS time, s, exact by convention. Source: IS-GPS-200 (GPS time equals UTC at 1980-01-06, when TAI-UTC was 19 s). */
export const TAI_MINUS_GPS_S = 19;

/** TT minus TAI, ps, exact. Source: IAU 1991 Recommendation IV (32.184 s). */
export const TT_MINUS_TAI_PS = 32_184_000_000_000;

/** 1 - dTT/dTCG, exact. Source: IAU 2000 Resolution B1.9. */
export const L_G = 6.969290134e-10;

/** Days from 1900-01-01 (NTP's epoch) to 1970-01-01: 70 years with 17 leap days. Source: RFC 5905 (2010), section 6. */
export const NTP_TO_1970_DAYS = 25_567;

/** Julian date of 1970-01-01T00:00:00. Source: IAU 1997 Resolution B1 (JD 2451545.0 is 2000-01-01T12:00:00). */
export const JD_OF_1970 = 2_440_587.5;
