import 'server-only';
import { createHash } from 'node:crypto';
import fs from 'node:fs/promises';
import path from 'node:path';
import { syncFolder } from './files';

/** One changed row, as PostgreSQL's to_jsonb writes it. */
export type RowChange = { table: string; op: 'put' | 'remove'; row: Record<string, unknown> };
export type JournalRecord = { seq: number; at: string; changes: RowChange[] } | { seq: number; void: true };

/** Line of the file: first 16 hex digits of the SHA-256 of the rest, a space, the record as JSON. */
function toLine(record: JournalRecord): string {
  const json = JSON.stringify(record);
  return `${createHash('sha256').update(json).digest('hex').slice(0, 16)} ${json}\n`;
}

function fromLine(line: string): JournalRecord | null {
  const json = line.slice(17);
  if (createHash('sha256').update(json).digest('hex').slice(0, 16) !== line.slice(0, 16)) return null;
  return JSON.parse(json) as JournalRecord;
}

const segmentName = (firstSeq: number) => `${String(firstSeq).padStart(12, '0')}.journal`;

/**
 * Append-only, fsynced journal of committed row changes in segment files.
 *
 * Guarantee: a record that `append` has returned is on the disk, except where the disk itself lies about fsync.
 * A last line cut short by a power failure was never acknowledged and is dropped; a damaged line before the last is an error.
 */
export class Journal {
  private constructor(
    private readonly folder: string,
    private handle: fs.FileHandle,
    private next: number,
    private size: number,
  ) {}

  static async open(folder: string): Promise<Journal> {
    await fs.mkdir(folder, { recursive: true, mode: 0o700 });
    await syncFolder(path.dirname(folder));
    const segments = await listSegments(folder);
    let next = 1;
    let name = segmentName(1);
    let size = 0;
    if (segments.length > 0) {
      name = segments[segments.length - 1];
      next = Number.parseInt(name, 10);
      const file = path.join(folder, name);
      const { records, goodBytes } = await readSegment(file, true);
      if (goodBytes < (await fs.stat(file)).size) await fs.truncate(file, goodBytes);
      size = goodBytes;
      for (const record of records) next = Math.max(next, record.seq + 1);
    }
    const handle = await fs.open(path.join(folder, name), 'a', 0o600);
    await syncFolder(folder);
    return new Journal(folder, handle, next, size);
  }

  /** Sequence number of the newest record, 0 when there is none. */
  get last(): number {
    return this.next - 1;
  }

  /** For a database that came without its journal (a restored folder): numbering goes on from there. */
  async startAfter(seq: number): Promise<void> {
    const empty = path.join(this.folder, segmentName(1));
    this.next = seq + 1;
    await this.rotate();
    await fs.rm(empty, { force: true });
  }

  async append(changes: RowChange[]): Promise<number> {
    const seq = this.next;
    this.next += 1;
    await this.write({ seq, at: new Date().toISOString(), changes });
    return seq;
  }

  /** Marks a record whose transaction did not commit. */
  async markVoid(seq: number): Promise<void> {
    await this.write({ seq, void: true });
  }

  private async write(record: JournalRecord): Promise<void> {
    const line = Buffer.from(toLine(record));
    try {
      await this.handle.appendFile(line);
      await this.handle.datasync();
      this.size += line.byteLength;
    } catch (error) {
      // A full disk may have taken half a line; what follows it must not be lost behind it.
      await this.handle.truncate(this.size);
      throw error;
    }
  }

  /** Bytes of the segment being written: when it grows long, it is time for a copy of the database. */
  get bytes(): number {
    return this.size;
  }

  /** Records after `seq` that took effect, in order. Throws a sentence when the journal no longer reaches back that far. */
  async readAfter(seq: number): Promise<{ seq: number; changes: RowChange[] }[]> {
    const segments = await listSegments(this.folder);
    const voided = new Set<number>();
    const found: { seq: number; changes: RowChange[] }[] = [];
    for (const [index, name] of segments.entries()) {
      const following = segments[index + 1];
      if (following && Number.parseInt(following, 10) <= seq + 1) continue;
      const { records } = await readSegment(path.join(this.folder, name), index === segments.length - 1);
      for (const record of records) {
        if ('void' in record) voided.add(record.seq);
        else if (record.seq > seq) found.push({ seq: record.seq, changes: record.changes });
      }
    }
    if (segments.length > 0 && Number.parseInt(segments[0], 10) > seq + 1) {
      throw new Error(
        `The database holds changes up to ${seq}, and the journal begins only at ${Number.parseInt(segments[0], 10)}: ` +
          'what lies between is missing, so nothing was replayed. Restore a newer copy of the database.',
      );
    }
    return found.filter((record) => !voided.has(record.seq));
  }

  /** Begins a new segment, so that older ones can go once a copy of the database covers them. */
  async rotate(): Promise<void> {
    await this.handle.close();
    this.handle = await fs.open(path.join(this.folder, segmentName(this.next)), 'a', 0o600);
    this.size = 0;
    await syncFolder(this.folder);
  }

  /** Removes segments whose every record is at or before `seq`. */
  async dropThrough(seq: number): Promise<void> {
    const segments = await listSegments(this.folder);
    for (const [index, name] of segments.entries()) {
      const following = segments[index + 1];
      if (following && Number.parseInt(following, 10) <= seq + 1) await fs.rm(path.join(this.folder, name));
    }
  }

  async close(): Promise<void> {
    await this.handle.close();
  }
}

async function listSegments(folder: string): Promise<string[]> {
  return (await fs.readdir(folder)).filter((name) => name.endsWith('.journal')).sort();
}

async function readSegment(file: string, isNewest: boolean): Promise<{ records: JournalRecord[]; goodBytes: number }> {
  const text = await fs.readFile(file, 'utf8');
  const records: JournalRecord[] = [];
  let goodBytes = 0;
  let start = 0;
  while (start < text.length) {
    const end = text.indexOf('\n', start);
    const line = text.slice(start, end === -1 ? text.length : end);
    const record = end === -1 ? null : fromLine(line);
    if (!record) {
      const isLastLine = end === -1 || end === text.length - 1;
      if (isNewest && isLastLine) break;
      throw new Error(
        `The journal file ${file} is damaged at byte ${goodBytes}; nothing was replayed and nothing removed.`,
      );
    }
    records.push(record);
    goodBytes += Buffer.byteLength(line) + 1;
    start = end + 1;
  }
  return { records, goodBytes };
}
