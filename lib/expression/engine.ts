/**
 * Version of the calculation: written into every stored result, and raised whenever a digit that is shown may come out
 * differently for the same input.
 */
export const engineVersion = '1';
