/** Elementary charge, exact in the SI since 2019 (BIPM, SI Brochure, 9th edition, table 1). */
export const elementaryCharge = 1.602176634e-19;

/** An on-off run of a pump with a repeatable scatter, made here and not by the product: samples and the file that holds them. */
export function onOffRun(frequencyHz: number, escape: number, offsetFa: number, rows = 2400) {
  let state = 20310211;
  const uniform = () => {
    // Numerical Recipes' "quick and dirty" congruential generator (Press et al., 2nd edition, section 7.1).
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 4294967296;
  };
  const samples: { t: number; current: number }[] = [];
  const lines = ['# INVENTED DATA for a test: on-off run', 't (s),I (fA)'];
  for (let i = 0; i < rows; i += 1) {
    const t = Number(((i * 120) / rows).toFixed(3));
    const on = (t >= 14 && t < 46) || (t >= 74 && t < 106);
    const scatter = uniform() + uniform() + uniform() + uniform() - 2;
    const current = Number((offsetFa + (on ? escape * elementaryCharge * frequencyHz * 1e15 : 0) + scatter).toFixed(3));
    samples.push({ t, current });
    lines.push(`${t.toFixed(3)},${current.toFixed(3)}`);
  }
  const mean = (intervals: [number, number][]) => {
    const inside = samples.filter(({ t }) => intervals.some(([low, high]) => t >= low && t <= high));
    return inside.reduce((sum, { current }) => sum + current, 0) / inside.length;
  };
  return { file: `${lines.join('\n')}\n`, mean };
}
