import type { TraceSettings } from '@/lib/document/attributes';
import { isSymbol } from '@/lib/document/symbol';
import { parseUnit } from '@/lib/units/parse';

/** What a trace's settings are before its author has said anything: names, symbols and units from the file, nothing guessed. */
export function firstSettings(columns: { name: string; symbol: string; unit: string | null }[]): TraceSettings {
  return {
    columns: columns.slice(0, 256).map(({ name, symbol, unit }, i) => ({
      name: name.slice(0, 300),
      symbol: isSymbol(symbol) ? symbol : `c${i + 1}`,
      unit: unit === null ? null : unit.slice(0, 60),
      gain: null,
      offset: null,
    })),
    scanKind: null,
    sign: null,
    signConvention: null,
    drive: { frequency: null, waveform: null, amplitude: null, load: null, wait: null, eject: null },
    instrument: { name: null, range: null, bandwidth: null, integrationTime: null, overload: null },
    sweepDirection: null,
  };
}

/** Sentences about settings, by the place they concern: `columns.0.unit`. Shown beside it, and by whoever has more to say. */
export type SettingsProblems = Record<string, string>;

/** What is missing or cannot be used in the settings themselves. */
export function settingsProblems({ columns }: TraceSettings): SettingsProblems {
  const problems: SettingsProblems = {};
  const taken = new Map<string, number>();
  columns.forEach(({ symbol, unit }, i) => {
    if (!isSymbol(symbol)) {
      problems[`columns.${i}.symbol`] = 'A symbol is letters, digits and _, beginning with a letter: I, V_exit.';
    } else if (taken.has(symbol)) {
      problems[`columns.${i}.symbol`] = `The column ${(taken.get(symbol) as number) + 1} has this symbol already.`;
    }
    taken.set(symbol, i);
    if (unit === null) {
      problems[`columns.${i}.unit`] = 'unit not stated';
      return;
    }
    try {
      parseUnit(unit);
    } catch (error) {
      problems[`columns.${i}.unit`] = error instanceof Error ? error.message : String(error);
    }
  });
  return problems;
}
