/**
 * Constants of the SI, exact by definition since 20 May 2019.
 * Source: SI Brochure, 9th edition (BIPM 2019), table 1; ħ = h/(2π).
 */
export type Constant = {
  symbol: string;
  name: string;
  /** In coherent SI units. */
  value: number;
  unit: string;
  source: string;
};

const source = 'SI Brochure, 9th edition (2019), table 1: exact by definition';

export const elementaryCharge: Constant = {
  symbol: 'e',
  name: 'elementary charge',
  value: 1.602176634e-19,
  unit: 'C',
  source,
};

export const planckConstant: Constant = {
  symbol: 'h',
  name: 'Planck constant',
  value: 6.62607015e-34,
  unit: 'J s',
  source,
};

export const reducedPlanckConstant: Constant = {
  symbol: 'hbar',
  name: 'reduced Planck constant',
  value: 6.62607015e-34 / (2 * Math.PI),
  unit: 'J s',
  source: 'h/(2π) with h of the SI Brochure, 9th edition (2019), table 1',
};

export const boltzmannConstant: Constant = {
  symbol: 'k_B',
  name: 'Boltzmann constant',
  value: 1.380649e-23,
  unit: 'J/K',
  source,
};

export const speedOfLight: Constant = {
  symbol: 'c_0',
  name: 'speed of light in vacuum',
  value: 299792458,
  unit: 'm/s',
  source,
};

/** The constants that expressions know by name. */
export const constants: ReadonlyMap<string, Constant> = new Map(
  [elementaryCharge, planckConstant, reducedPlanckConstant, boltzmannConstant, speedOfLight].map((constant) => [
    constant.symbol,
    constant,
  ]),
);
