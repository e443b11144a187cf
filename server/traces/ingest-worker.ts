import fs from 'node:fs';
import { parentPort, workerData } from 'node:worker_threads';
import { PyramidBuilder } from '@/lib/plot/pyramid';
import { TraceFormatError } from '@/lib/trace-format/parsed-trace';
import { TextTraceParser } from '@/lib/trace-format/text-parser';
import type { DerivedFacts, IngestResult, IngestTask } from './layout';
import { columnFile, derivedForm, factsFile, pyramidFile } from './layout';

/** Thread that turns one received file into typed columns and their pyramids. Its memory does not grow with the file. */

function asBytes(samples: Float64Array): Uint8Array {
  return new Uint8Array(samples.buffer, samples.byteOffset, samples.byteLength);
}

function writeWhole(fd: number, bytes: Uint8Array): void {
  for (let done = 0; done < bytes.length;) done += fs.writeSync(fd, bytes, done, bytes.length - done);
}

function writeFile(file: string, write: (fd: number) => void): void {
  const fd = fs.openSync(file, 'wx', 0o600);
  try {
    write(fd);
    fs.fsyncSync(fd);
  } finally {
    fs.closeSync(fd);
  }
}

function ingest({ source, target }: IngestTask): IngestResult {
  const columns: { fd: number; pyramid: PyramidBuilder }[] = [];
  const input = fs.openSync(source, 'r');
  try {
    const parser = new TextTraceParser((block, rows) => {
      while (columns.length < block.length) {
        columns.push({
          fd: fs.openSync(columnFile(target, columns.length), 'wx', 0o600),
          pyramid: new PyramidBuilder(),
        });
      }
      block.forEach((samples, i) => {
        const { fd, pyramid } = columns[i] as { fd: number; pyramid: PyramidBuilder };
        writeWhole(fd, asBytes(samples.subarray(0, rows)));
        pyramid.add(samples, rows);
      });
    });
    const chunk = new Uint8Array(1 << 20);
    for (;;) {
      const read = fs.readSync(input, chunk, 0, chunk.length, null);
      if (read === 0) break;
      parser.push(chunk.subarray(0, read));
    }
    const trace = parser.finish();
    columns.forEach(({ fd, pyramid }, i) => {
      fs.fsyncSync(fd);
      writeFile(pyramidFile(target, i), (out) => {
        for (const { entries } of pyramid.finish()) writeWhole(out, asBytes(entries));
      });
    });
    const facts: DerivedFacts = { form: derivedForm, trace };
    writeFile(factsFile(target), (out) => writeWhole(out, new TextEncoder().encode(JSON.stringify(facts))));
    return { ok: true, trace };
  } catch (error) {
    if (error instanceof TraceFormatError) return { ok: false, problem: error.message };
    throw error;
  } finally {
    fs.closeSync(input);
    for (const { fd } of columns) fs.closeSync(fd);
  }
}

parentPort?.postMessage(ingest(workerData as IngestTask));
