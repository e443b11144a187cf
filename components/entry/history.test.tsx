import { cleanup, render, screen } from '@testing-library/react';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { sampleDocument } from '@/lib/document/sample';
import type { VersionContentDto, VersionDto } from '@/lib/schemas/entry';
import { History } from './history';

vi.mock('next/navigation', () => ({ useRouter: () => ({ push: vi.fn() }) }));
afterEach(() => {
  cleanup();
  vi.unstubAllGlobals();
});

const version = (seq: number): VersionDto => ({
  id: `v${seq}`,
  entryId: 'e1',
  seq,
  digest: String(seq).repeat(64),
  previous: null,
  createdAt: '2026-11-19T12:00:00.000Z',
  createdBy: { id: 'p1', name: 'Tomas Reinholt', initials: 'TR' },
  reason: null,
  title: 'Day two',
});

describe('History', () => {
  it('shows what changed from the last but one version to the last, in more than colour', async () => {
    const old = sampleDocument();
    const now = sampleDocument();
    now.content![1]!.content![0]!.text = 'Bath at 4.25 K, level 61 %. Gain from ';
    vi.stubGlobal('fetch', (url: string) => {
      const seq = Number(url.split('/').pop());
      const content: Partial<VersionContentDto> = {
        ...version(seq),
        doc: seq === 2 ? now : old,
        stamps: {},
        values: [],
        traces: [],
      };
      return Promise.resolve(new Response(JSON.stringify(content)));
    });
    render(<History entryId="e1" versions={[version(1), version(2)]} mayRestore />);
    await screen.findByText(/1 changed, 0 added, 0 removed, 0 moved/);
    expect(document.querySelector('ins')!.textContent).toContain('4.25');
    expect(document.querySelector('del')!.textContent).toContain('4.21');
    expect(screen.getAllByRole('button', { name: 'Restore' })).toHaveLength(2);
  });

  it('says how versions come about where there is none', () => {
    render(<History entryId="e1" versions={[]} mayRestore={false} />);
    expect(screen.getByText(/No version has been cut yet/)).toBeTruthy();
  });
});
