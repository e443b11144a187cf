import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { GET as getPicture } from '@/app/api/pictures/[id]/route';
import { GET as getFile } from '@/app/api/traces/[id]/file/route';
import { GET as getTrace } from '@/app/api/traces/[id]/route';
import type { TraceDetail } from '@/server/traces/service';
import { call } from '../integration/harness';
import { newEntry, sendFile, startUploads, type Uploads } from '../integration/uploads';

let lab: Uploads;
let entryId: string;
beforeAll(async () => {
  lab = await startUploads();
  entryId = await newEntry(lab);
});
afterAll(() => lab.close());

const send = (name: string, content: string | Uint8Array, options: Parameters<typeof sendFile>[5] = {}) =>
  sendFile(
    lab,
    lab.people.author,
    entryId,
    name,
    typeof content === 'string' ? Buffer.from(content) : content,
    options,
  );
const idOf = (sent: Awaited<ReturnType<typeof send>>) => {
  if (!sent.outcome || 'error' in sent.outcome) throw new Error(JSON.stringify(sent));
  return sent.outcome.traceId;
};
const detail = async (id: string) =>
  (await call<TraceDetail>(getTrace, { as: lab.people.author, params: { id } })).body;
const download = (id: string) =>
  getFile(new Request(`${lab.origin}/f`, { headers: { cookie: lab.people.author.cookie } }), {
    params: Promise.resolve({ id }),
  });

// The first bytes of a PNG file, ISO/IEC 15948 5.2, and its header chunk.
const png = Buffer.concat([Buffer.from('89504e470d0a1a0a0000000d49484452', 'hex'), Buffer.alloc(64)]);
const script = '<svg xmlns="http://www.w3.org/2000/svg"><script>alert(1)</script></svg>';

describe('79: type, name and content that disagree', () => {
  it('a picture named .csv is kept and named for what it is', async () => {
    const id = idOf(await send('scan.csv', png));
    expect(await detail(id)).toMatchObject({ state: 'unreadable', problem: expect.stringContaining('a PNG picture') });
  });

  it('a table sent as a picture is refused by its content, whatever type it claims', async () => {
    const sent = await send('photo.png', 't,I\n0,1\n', { slug: 'picture', type: 'image/png' });
    expect(sent.outcome).toMatchObject({ error: expect.stringContaining('no PNG, JPEG, GIF or WebP picture') });
  });

  it('a picture is served as what its bytes are, not as what was claimed', async () => {
    const id = idOf(await send('photo.html', png, { slug: 'picture', type: 'text/html' }));
    const { headers, status } = await call(getPicture, { as: lab.people.author, params: { id } });
    expect(status).toBe(200);
    expect(headers.get('content-type')).toBe('image/png');
    expect(headers.get('x-content-type-options')).toBe('nosniff');
    expect(headers.get('content-security-policy')).toContain('sandbox');
    // And a picture is not reachable as a trace, nor a trace as a picture.
    expect((await call(getTrace, { as: lab.people.author, params: { id } })).status).toBe(404);
  });
});

describe('80, 81: SVG with script, HTML named .csv', () => {
  it('SVG is no picture here', async () => {
    for (const content of [script, `<?xml version="1.0"?>${script}`, `GIF8${script}`]) {
      const sent = await send('drawing.svg', content, { slug: 'picture', type: 'image/svg+xml' });
      expect(sent.outcome).toMatchObject({ error: expect.stringContaining('was not attached') });
    }
  });

  it.each([
    ['drawing.svg', script],
    ['page.csv', '<!doctype html><script>alert(1)</script>'],
  ])('%s attached as a trace is only ever a download', async (name, content) => {
    const id = idOf(await send(name, content, { type: 'text/html' }));
    expect((await detail(id)).state).toBe('unreadable');
    const response = await download(id);
    expect(response.headers.get('content-type')).toBe('application/octet-stream');
    expect(response.headers.get('content-disposition')).toMatch(/^attachment; /);
    expect(response.headers.get('x-content-type-options')).toBe('nosniff');
    expect(response.headers.get('content-security-policy')).toContain('sandbox');
    expect(await response.text()).toBe(content);
  });
});

describe('82, 83: hostile names', () => {
  it.each([
    ['../../../etc/passwd', 'passwd'],
    ['..\\..\\windows\\scan.csv', 'scan.csv'],
    ['/etc/cron.d/x', 'x'],
    ['NUL.csv', 'NUL.csv'],
    ['scan\u202evsc.exe', 'scanvsc.exe'],
    ['a\r\nSet-Cookie: stolen=1\r\n.csv', 'aSet-Cookie: stolen=1.csv'],
    ['a"; filename="b.html', 'a"; filename="b.html'],
  ])('%j is recorded as %j and served safely', async (name, kept) => {
    const id = idOf(await send(name, `t,I\n0,${name.length}\n`));
    expect((await detail(id)).fileName).toBe(kept);
    const disposition = (await download(id)).headers.get('content-disposition') ?? '';
    expect(disposition).toMatch(/^attachment; filename="[^"\\\r\n]*"; filename\*=UTF-8''[A-Za-z0-9!#$&+.^_`|~%-]+$/);
    expect(disposition).not.toMatch(/filename="(?:nul|con)\b/i);
  });

  it('a name of 300 characters keeps its ending', async () => {
    const id = idOf(await send(`${'n'.repeat(300)}.csv`, 't,I\n0,300\n'));
    const { fileName } = await detail(id);
    expect(fileName).toHaveLength(255);
    expect(fileName.endsWith('.csv')).toBe(true);
  });
});
