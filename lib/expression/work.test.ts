import { describe, expect, it } from 'vitest';
import { mostKept, mostWork, Work } from './work';

describe('work of an entry', () => {
  it('is counted, whether done or taken over, and ends at the bound', () => {
    const work = new Work();
    work.spend(mostWork / 2);
    work.takeOver(mostWork / 2, mostKept);
    expect(work.done).toBe(mostWork);
    expect(() => work.spend(1)).toThrow('split it');
    expect(() => work.keep(1)).toThrow('rows together');
  });
});
