import { randomBytes } from 'node:crypto';
import type { FileHandle } from 'node:fs/promises';
import { mkdir, open, readdir, readFile, rename, rm, stat } from 'node:fs/promises';
import path from 'node:path';

/**
 * What the service keeps, in one flat folder: `<key>.json` what it was told, `<key>.part` what has arrived, `<key>` the whole
 * file. A file becomes whole by a rename after it and its folder are on disk.
 */

export type Registration = { metadata: unknown; callbackUrl: string; callbackSlug: string; awaitServerData: boolean };

export type FileRecord = {
  key: string;
  registration: Registration | null;
  /** Who this key was first used for; null until the first byte is sent. */
  address: { name: string; size: number; type: string; customId: string | null } | null;
  uploadedAt: number | null;
  fileHash: string | null;
  sha256: string | null;
  /** The application has answered the callback. */
  acknowledged: boolean;
  callbackData: unknown;
};

const keyShape = /^[A-Za-z0-9_-]{8,120}$/;

export class UploadStore {
  readonly folder: string;

  constructor(dataDir: string) {
    this.folder = path.join(/* turbopackIgnore: true */ dataDir, 'uploads');
  }

  static isKey(key: string): boolean {
    return keyShape.test(key);
  }

  file(key: string): string {
    if (!UploadStore.isKey(key)) throw new RangeError('not a key');
    return path.join(/* turbopackIgnore: true */ this.folder, key);
  }

  part(key: string): string {
    return `${this.file(key)}.part`;
  }

  async read(key: string): Promise<FileRecord | null> {
    try {
      return JSON.parse(await readFile(`${this.file(key)}.json`, 'utf8')) as FileRecord;
    } catch (error) {
      if (isMissingFile(error)) return null;
      throw error;
    }
  }

  async write(record: FileRecord): Promise<void> {
    await mkdir(this.folder, { recursive: true, mode: 0o700 });
    const target = `${this.file(record.key)}.json`;
    const draft = `${target}.${randomBytes(6).toString('hex')}.new`;
    try {
      const handle = await open(draft, 'wx', 0o600);
      try {
        await handle.writeFile(JSON.stringify(record));
        await handle.sync();
      } finally {
        await handle.close();
      }
      await rename(draft, target);
    } catch (error) {
      await rm(draft, { force: true });
      throw error;
    }
    await this.syncFolder();
  }

  async openPart(key: string): Promise<FileHandle> {
    await mkdir(this.folder, { recursive: true, mode: 0o700 });
    const existing = await this.size(this.part(key));
    return open(this.part(key), existing === null ? 'wx+' : 'r+', 0o600);
  }

  async size(file: string): Promise<number | null> {
    try {
      return (await stat(file)).size;
    } catch (error) {
      if (isMissingFile(error)) return null;
      throw error;
    }
  }

  /** The part is on disk already; makes it the file. */
  async complete(key: string): Promise<void> {
    await rename(this.part(key), this.file(key));
    await this.syncFolder();
  }

  async remove(key: string): Promise<boolean> {
    const had = (await this.size(this.file(key))) !== null || (await this.size(this.part(key))) !== null;
    for (const ending of ['', '.part', '.json']) await rm(this.file(key) + ending, { force: true });
    await this.syncFolder();
    return had;
  }

  async records(): Promise<FileRecord[]> {
    const names = await this.names();
    const records: FileRecord[] = [];
    for (const name of names) {
      if (!name.endsWith('.json')) continue;
      const record = await this.read(name.slice(0, -5));
      if (record) records.push(record);
    }
    return records;
  }

  /** Bytes that files and parts take. */
  async total(): Promise<number> {
    let sum = 0;
    for (const name of await this.names())
      sum += (await this.size(path.join(/* turbopackIgnore: true */ this.folder, name))) ?? 0;
    return sum;
  }

  private async names(): Promise<string[]> {
    try {
      return await readdir(this.folder);
    } catch (error) {
      if (isMissingFile(error)) return [];
      throw error;
    }
  }

  private async syncFolder(): Promise<void> {
    let handle: FileHandle;
    try {
      handle = await open(this.folder, 'r');
    } catch (error) {
      if (isMissingFile(error)) return;
      throw error;
    }
    try {
      await handle.sync();
    } finally {
      await handle.close();
    }
  }
}

export function isMissingFile(error: unknown): boolean {
  return error instanceof Error && 'code' in error && error.code === 'ENOENT';
}
