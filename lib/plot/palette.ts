/**
 * Colours of plots in a fixed order: the set of M. Okabe and K. Ito ("Color Universal Design", 2008), black last because
 * it vanishes on a dark ground. A curve is always named beside its colour.
 */
export const okabeIto = [
  '#0072b2',
  '#d55e00',
  '#009e73',
  '#cc79a7',
  '#e69f00',
  '#56b4e9',
  '#f0e442',
  '#000000',
] as const;

/** Dashes that tell curves apart without colour, in the same order. */
export const dashes: readonly (readonly number[])[] = [
  [],
  [6, 3],
  [2, 2],
  [8, 3, 2, 3],
  [12, 4],
  [4, 2, 1, 2],
  [1, 3],
  [10, 2],
];

export function seriesColour(index: number): string {
  return okabeIto[index % 7] as string;
}

export function seriesDash(index: number): readonly number[] {
  return dashes[index % dashes.length] as readonly number[];
}
