import path from 'node:path';
import type { ParsedTrace } from '@/lib/trace-format/parsed-trace';

/**
 * Files derived from one received file, in `DATA_DIR/columns/<sha256>`: `c<i>.f64` the samples of column i as little-endian
 * binary64, `p<i>.f64` its pyramid, level after level, min and max in turn, and `parse.json`. All can be made again.
 */

/** Raised when the derived files change their form: older ones are then made again. */
export const derivedForm = 1;

export type DerivedFacts = { form: number; trace: ParsedTrace };

export const columnFile = (folder: string, index: number) =>
  path.join(/* turbopackIgnore: true */ folder, `c${index}.f64`);
export const pyramidFile = (folder: string, index: number) =>
  path.join(/* turbopackIgnore: true */ folder, `p${index}.f64`);
export const factsFile = (folder: string) => path.join(/* turbopackIgnore: true */ folder, 'parse.json');

export type IngestTask = { source: string; target: string };
export type IngestResult = { ok: true; trace: ParsedTrace } | { ok: false; problem: string };
