import fs from 'node:fs';
import path from 'node:path';
import { describe, expect, it } from 'vitest';
import { attackCases, faultCases } from './cases';

const span = (from: number, to: number) => Array.from({ length: to - from + 1 }, (_, i) => from + i);

/** The cases that this system has to stand, counted out here so that none can drop out of the registry unseen. */
const attacksWanted = [
  ...[...span(1, 13), ...span(15, 18), ...span(20, 32), ...span(34, 36), ...span(38, 42)],
  ...[...span(50, 58), 60, ...span(62, 73), ...span(79, 83), 90, ...span(92, 95), 98, 101, ...span(104, 106)],
];
const faultsWanted = [1, 2, 10, 11, 12, 17, 21, ...span(23, 30), ...span(33, 36), 38, 39];

/** Numbers that begin the name of a test or of a group: `7, 10 a code …`, `68–71 equations …`, `attack 101: …`. */
function numbersIn(file: string): Set<number> {
  const source = fs.readFileSync(path.join('tests', file), 'utf8');
  const numbers = new Set<number>();
  for (const [, name] of source.matchAll(
    /\b(?:it|test|describe)(?:\.each\([^)]*\))?\(\s*['"`](?:attack )?(\d[\d,– ]*)/g,
  )) {
    for (const part of name.split(',')) {
      const [from, to = from] = part.split('–').map((text) => Number.parseInt(text.trim(), 10));
      if (Number.isInteger(from)) for (const number of span(from, to)) numbers.add(number);
    }
  }
  return numbers;
}

describe.each([
  ['attack', attackCases, attacksWanted],
  ['fault', faultCases, faultsWanted],
] as const)('%s cases', (_, registry, wanted) => {
  it.each(wanted)('%d has a test of its number in the file that the registry names', (number) => {
    const file = registry[number];
    expect(file, 'named in tests/attacks/cases.ts').toBeDefined();
    expect([...numbersIn(file)]).toContain(number);
  });
});
