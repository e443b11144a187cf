/** What an equation's markup is kept under: the same TeX is set otherwise in a line than on its own. */
export const equationKey = (tex: string, display: boolean): string => `${display ? 'displayed' : 'in line'} ${tex}`;
