/** Speed of light in vacuum, m/s, exact. Source: SI Brochure, 9th edition (2019), definition of the metre. */
export const C_M_S = 299_792_458;
