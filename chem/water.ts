// Properties of water at 25 °C with their sources. Other temperatures are refused until they are computed from the
// formulations themselves.

/** The one temperature, in °C, for which the constants below hold. */
export const TEMPERATURE_C = "25";

/**
 * pKw of water at 25 °C and 0.1 MPa, thermodynamic, amount-concentration scale.
 * 13.9944 on the molality scale by IAPWS R11-24 (13.9945 by R11-07(2019), Bandura and Lvov, J. Phys. Chem. Ref. Data 35
 * (2006) 15-30), plus 2 × 0.0013 for the density of water.
 */
export const pKw25 = {
  value: "13.997",
  source:
    "IAPWS R11-24 (2024), 25 °C, 0.1 MPa, converted from molality to amount concentration with the density of water",
} as const;

/**
 * Debye–Hückel A at 25 °C for amount concentrations, base 10, L^½ mol^-½, from the relative permittivity of water
 * (IAPWS R8-97: 78.408), its density (Kell 1975: 997.045 kg/m³) and the exact SI constants: 0.51053.
 */
export const debyeHuckelA25 = {
  value: "0.5105",
  source:
    "computed from the permittivity of water (IAPWS R8-97) and its density (G. S. Kell, J. Chem. Eng. Data 20 (1975) 97)",
} as const;

/** Density of water at 25 °C and 0.1 MPa in kg/L, IAPWS-95. */
export const WATER_DENSITY_25_KG_L = 0.997047;

/**
 * What one change in the number of dissolved particles adds to a thermodynamic lg K on going from molality to amount
 * concentration at 25 °C: −lg(0.997047) = 0.0013, added to a pKa, twice that to pKw.
 */
export const MOLALITY_TO_CONCENTRATION_25 = 0.0013;
