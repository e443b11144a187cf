/** A name that expressions can use: `I`, `V_exit`, `on`. */
export const symbolPattern = /^[A-Za-zΑ-Ωα-ωµ][A-Za-z0-9_Α-Ωα-ω]{0,63}$/;

export const isSymbol = (text: string): boolean => symbolPattern.test(text);
