import { describe, expect, it, vi } from 'vitest';
import { documentSchema } from '@/lib/document/extensions';
import type { DocumentJson, NodeJson } from '@/lib/document/json';
import { sampleTrace } from '@/lib/document/sample';
import { evaluateSheet } from '@/lib/expression/evaluate';
import type { ValueResult } from '@/lib/expression/contract';
import type { TraceDto } from '@/lib/schemas/entry';
import { SheetStore, type SheetPorts } from './sheet-store';
import { longestLocalTrace } from './trace-source';

const cell = (id: string, source: string): NodeJson => ({
  type: 'paragraph',
  attrs: { id: `p_${id}` },
  content: [{ type: 'value', attrs: { id, source, unit: null, digits: null, shown: null } }],
});
const nodeOf = (...content: NodeJson[]) =>
  documentSchema().nodeFromJSON({ type: 'doc', content } satisfies DocumentJson);
const file = (rows: number): TraceDto => ({
  id: String(sampleTrace().attrs!.traceId),
  entryId: 'e1',
  fileName: 'on-off.csv',
  mediaType: 'text/csv',
  bytes: 1,
  sha256: 'b71e04dd'.repeat(8),
  state: 'parsed',
  problem: null,
  rows,
  columns: [],
  comments: [],
  uploadedBy: { id: 'p', name: 'Tomas Reinholt', initials: 'TR' },
  receivedAt: '2026-11-19T09:36:00Z',
});

function storeWith(parts: Partial<SheetPorts> = {}) {
  const ports: SheetPorts = {
    evaluate: evaluateSheet,
    fetchColumn: vi.fn(() => Promise.reject(new Error('no samples'))),
    evaluateRemotely: vi.fn(() => Promise.reject(new Error('no server'))),
    nextFrame: (run) => {
      const timer = setTimeout(run, 0);
      return () => clearTimeout(timer);
    },
    delay: (run) => {
      const timer = setTimeout(run, 1);
      return () => clearTimeout(timer);
    },
    ...parts,
  };
  return { store: new SheetStore(ports), ports };
}
const until = (check: () => void) => vi.waitFor(check, { timeout: 3000 });

describe('SheetStore', () => {
  it('fetches a column once, when a value reads it, and shows its mean', async () => {
    // 1000 samples of 30 fA while "on" (t from 16 s to 44 s) and 0 outside; the settings' gain is 1e9 V/A of volts read as fA here.
    const t = Float64Array.from({ length: 1000 }, (_, i) => i * 0.06);
    const current = t.map((time, i) => (time >= 16 && time <= 44 ? 30 : 0) + (i % 2 === 0 ? 0.01 : -0.01));
    const fetchColumn = vi.fn((_id: string, index: number) => Promise.resolve(index === 0 ? t : current));
    const { store } = storeWith({ fetchColumn });
    const trace = sampleTrace();
    (trace.attrs!.settings as { columns: { gain: null }[] }).columns[1]!.gain = null;
    store.setTraces([file(1000)]);
    store.setDocument(nodeOf(trace, cell('value_on', 'I_on = mean(t1.I, on)')));
    await until(() => expect(store.result('value_on')?.state).toBe('ok'));
    expect(store.result('value_on')!.text).toMatch(/^(30|29\.9|30\.0)/);
    expect(fetchColumn.mock.calls.length).toBe(2);
    store.setDocument(nodeOf(trace, cell('value_on', 'I_on = mean(t1.I, on)'), cell('value_tw', 'x = 2*I_on')));
    await until(() => expect(store.result('value_tw')?.state).toBe('ok'));
    expect(fetchColumn.mock.calls.length).toBe(2);
  });

  it('says why when samples cannot be fetched, and tries again when asked', async () => {
    const { store, ports } = storeWith();
    const trace = sampleTrace();
    store.setTraces([file(1000)]);
    store.setDocument(nodeOf(trace, cell('value_on', 'I_on = mean(t1.I, on)')));
    await until(() => expect(store.result('value_on')?.state).toBe('error'));
    expect(store.result('value_on')!.error!.message).toContain('no samples');
    const before = vi.mocked(ports.fetchColumn).mock.calls.length;
    store.retry();
    await until(() => expect(vi.mocked(ports.fetchColumn).mock.calls.length).toBeGreaterThan(before));
  });

  it('leaves traces of more than two million rows to the server, and asks it once', async () => {
    const remote = { id: 'value_on', symbol: 'I_on', state: 'ok', text: '29.66(12) fA' } as ValueResult;
    const { store, ports } = storeWith({ evaluateRemotely: vi.fn(() => Promise.resolve([remote])) });
    store.setTraces([file(longestLocalTrace + 1)]);
    store.setDocument(nodeOf(sampleTrace(), cell('value_on', 'I_on = mean(t1.I, on)')));
    await until(() => expect(store.result('value_on')?.text).toBe('29.66(12) fA'));
    expect(ports.fetchColumn).not.toHaveBeenCalled();
    expect(ports.evaluateRemotely).toHaveBeenCalledTimes(1);
  });

  it('shows what a version has bound, whatever a recalculation would give', async () => {
    const { store } = storeWith();
    store.bind([{ id: 'value_f', symbol: 'f', state: 'ok', text: '200 kHz' } as ValueResult]);
    store.setDocument(nodeOf(cell('value_f', 'f = 300 kHz exactly')));
    await new Promise((resolve) => setTimeout(resolve, 20));
    expect(store.result('value_f')!.text).toBe('200 kHz');
  });

  it('follows every keystroke through 200 values that hang on one another', async () => {
    const { store } = storeWith();
    const chain = (start: number) =>
      Array.from({ length: 200 }, (_, i) =>
        cell(`value_${i}_x`, i === 0 ? `x_0 = ${start}.0(1) pA` : `x_${i} = x_${i - 1}*1.001 + x_0`),
      );
    // How long that takes is measured by the bench, never by a test.
    for (let round = 1; round <= 3; round += 1) {
      store.setDocument(nodeOf(...chain(round)));
      await until(() => expect(store.result('value_0_x')?.text).toContain(`${round}.0`));
      expect(store.result('value_199_x')!.state).toBe('ok');
      // x_n = r·x_(n−1) + x_0 from x_0: the sum of a geometric series, r = 1.001.
      expect(store.result('value_199_x')!.value).toBeCloseTo((round * (1.001 ** 200 - 1)) / 0.001, 6);
    }
  });
});
