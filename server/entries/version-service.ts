import 'server-only';
import { now } from '@/server/clock/service';
import { randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import type { DocumentJson } from '@/lib/document/json';
import { readRecord, versionRecordSchema, type VersionRecord } from '@/lib/document/version';
import { AppError } from '@/lib/errors/app-error';
import type { Sheet, ValueResult } from '@/lib/expression/contract';
import { engineVersion } from '@/lib/expression/engine';
import type { VersionContentDto, VersionDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { getDb, type DbOrTx, type Tx } from '@/server/db/client';
import { entry, entryDraft, entryVersion } from '@/server/db/schema/entries';
import { sealRecord } from '@/server/digest/service';
import { secrets } from '@/server/env/env';
import { evaluateOnServer, partsOf } from '@/server/evaluation/service';
import { appendLog } from '@/server/log/service';
import { peopleById } from '@/server/people/service';
import { questionsOf } from '@/server/questions/service';
import * as queries from './queries';
import { refuseFrozen } from './states';

const schemaNumber = 1;

/**
 * Cuts the next version from the draft at `basedOn`: evaluates every value again, refuses where a shown digit differs, and
 * stores the canonical bytes with the digest of the version before. A draft that has not changed since gives the newest version.
 * @throws AppError conflict (another revision), invalid with `details.differing`, frozen.
 */
export async function cutVersion(
  entryId: string,
  person: Person,
  basedOn: number,
  reason: string | null,
): Promise<VersionDto> {
  const db = await getDb();
  const draft = await queries.findDraft(db, entryId);
  if (draft.revision !== basedOn) throw stale();
  const files = await queries.filesOf(db, entryId);
  // Outside the transaction: statistics over long traces must not hold up everybody's saving.
  const { cells, traces } = partsOf(draft.doc);
  const sheet = await evaluateOnServer(cells, traces, new Map(files.map((file) => [file.id, file])));
  refuseDiffering(cells, sheet);
  return db.transaction(async (tx) => {
    const row = await queries.lockEntry(tx, entryId);
    refuseFrozen(row.state);
    const current = await queries.findDraft(tx, entryId);
    if (current.revision !== basedOn) throw stale();
    if (current.cutRevision === basedOn && row.headSeq > 0 && !reason) {
      return toVersionDto(tx, (await queries.findVersion(tx, entryId, row.headSeq))!);
    }
    const record = await buildRecord(tx, row, current, files, sheet, person, reason);
    const { canonical, digest } = sealRecord(record);
    const version = {
      id: randomUUID(),
      entryId,
      seq: record.seq,
      canonical,
      digest,
      previous: record.previous,
      title: record.title,
      reason,
      createdAt: new Date(record.time),
      createdBy: person.id,
    };
    await tx.insert(entryVersion).values(version);
    await tx.update(entry).set({ headSeq: record.seq, changedAt: version.createdAt }).where(eq(entry.id, entryId));
    await tx.update(entryDraft).set({ cutRevision: basedOn }).where(eq(entryDraft.entryId, entryId));
    await appendLog(tx, {
      kind: 'version',
      actorId: person.id,
      notebookId: row.notebookId,
      entryId,
      detail: { seq: record.seq, digest, previous: record.previous },
    });
    return toVersionDto(tx, version);
  });
}

const stale = () =>
  new AppError(
    'conflict',
    'The text has changed since this page read it. Nothing was cut; look at the newest text first.',
  );

function refuseDiffering(cells: { id: string; shown: string | null }[], sheet: Sheet): void {
  const differing = cells.flatMap((cell) => {
    const computed = sheet.results.get(cell.id);
    if (cell.shown === null || !computed || computed.state === 'pending' || cell.shown === computed.text) return [];
    return [
      {
        id: cell.id,
        symbol: computed.symbol,
        shown: cell.shown,
        computed: computed.text ?? computed.error?.message ?? '',
      },
    ];
  });
  if (differing.length === 0) return;
  const [first] = differing;
  throw new AppError(
    'invalid',
    `The page shows ${first.symbol ?? 'a value'} = ${first.shown}, and the server calculates ${first.computed}. No version was cut; ` +
      'the draft is kept. Reload the page, so that it calculates anew.',
    { details: { differing } },
  );
}

async function buildRecord(
  tx: Tx,
  row: queries.EntryRow,
  draft: queries.DraftRow,
  files: queries.TraceRow[],
  sheet: Sheet,
  person: Person,
  reason: string | null,
): Promise<VersionRecord> {
  const notebook = await queries.notebookOf(tx, row.notebookId);
  const previous = row.headSeq > 0 ? await queries.findVersion(tx, row.id, row.headSeq) : null;
  const contributors = (await queries.contributorsOf(tx, row.id)).filter((c) => c.wroteAt !== null);
  const people = await peopleById(tx, [row.authorId, person.id, ...contributors.map((c) => c.userId)]);
  const named = (id: string) => ({ id, name: people.get(id)!.name });
  const { cells, traces } = partsOf(draft.doc);
  const pictureIds = new Set<string>();
  JSON.stringify(draft.doc, (key, value) => {
    if (key === 'pictureId' && typeof value === 'string') pictureIds.add(value);
    return value;
  });
  // Parsed by the closed schema, so that nothing is bound that a reader of the format does not expect.
  return versionRecordSchema.parse({
    format: 'kelvinleaf-version',
    number: 1,
    installation: secrets().installation,
    notebook: notebook.code,
    leaf: row.leaf,
    entry: row.id,
    seq: row.headSeq + 1,
    title: draft.title.trim() || row.title,
    workDate: row.workDate,
    cooldown: await queries.cooldownOf(tx, row.cooldownId),
    devices: await queries.devicesOf(tx, row.id),
    documentSchema: schemaNumber,
    document: draft.doc,
    stamps: draft.stamps,
    engine: engineVersion,
    values: cells.map((cell) => bindValue(cell.source, sheet.results.get(cell.id)!)),
    traces: traces.flatMap(({ traceId, handle, settings, spans }) => {
      const file = files.find((f) => f.id === traceId);
      if (!file) return [];
      const { fileName, mediaType, bytes, sha256, rows } = file;
      return [{ handle, traceId, fileName, mediaType, bytes, sha256, rows, settings, spans }];
    }),
    pictures: files
      .filter((file) => pictureIds.has(file.id))
      .map(({ id, fileName, mediaType, bytes, sha256 }) => ({ pictureId: id, fileName, mediaType, bytes, sha256 })),
    questions: (await questionsOf(tx, row.id, person.id)).map((q) => ({
      id: q.id,
      text: q.text,
      askedBy: q.askedBy.name,
      askedAt: q.askedAt,
      answers: q.answers.map((a) => a.text),
    })),
    author: named(row.authorId),
    contributors: contributors.map((c) => named(c.userId)),
    cutBy: named(person.id),
    time: now().toISOString(),
    reason,
    previous: previous?.digest ?? null,
  } satisfies Record<keyof VersionRecord, unknown>);
}

function bindValue(source: string, result: ValueResult): VersionRecord['values'][number] {
  const text = (value: number | null) => (value === null || !Number.isFinite(value) ? null : String(value));
  return {
    id: result.id,
    source,
    symbol: result.symbol,
    state: result.state,
    text: result.text,
    value: text(result.value),
    unit: result.unit,
    u: text(result.u),
    dof: text(result.dof),
    error: result.error?.message ?? null,
    // An infinite number of degrees of freedom has no JSON form and means "none stated".
    result: JSON.parse(JSON.stringify(result)) as Record<string, unknown>,
  };
}

type VersionFacts = Omit<queries.VersionRow, 'canonical'>;

export async function toVersionDto(db: DbOrTx, version: VersionFacts): Promise<VersionDto> {
  const people = await peopleById(db, [version.createdBy]);
  return serializeVersion(version, people);
}

function serializeVersion(version: VersionFacts, people: Awaited<ReturnType<typeof peopleById>>): VersionDto {
  return {
    id: version.id,
    entryId: version.entryId,
    seq: version.seq,
    digest: version.digest,
    previous: version.previous,
    createdAt: version.createdAt.toISOString(),
    createdBy: people.get(version.createdBy)!,
    reason: version.reason,
    title: version.title,
  };
}

export async function listVersions(entryId: string): Promise<VersionDto[]> {
  const db = await getDb();
  const rows = await queries.listVersionRows(db, entryId);
  const people = await peopleById(
    db,
    rows.map((row) => row.createdBy),
  );
  return rows.map((row) => serializeVersion(row, people));
}

export async function readVersion(entryId: string, seq: number): Promise<VersionContentDto> {
  const db = await getDb();
  const version = await queries.findVersion(db, entryId, seq);
  if (!version) throw new AppError('not_found', 'This entry has no such version.');
  const record = readRecord(version.canonical);
  return {
    ...(await toVersionDto(db, version)),
    doc: record.document as DocumentJson,
    stamps: record.stamps,
    values: record.values.map((value) => value.result as unknown as ValueResult),
    traces: record.traces.map(({ handle, traceId, fileName, sha256, bytes }) => ({
      handle,
      traceId,
      fileName,
      sha256,
      bytes,
    })),
  };
}

/**
 * Makes the text of an older version the draft again and cuts a version from it; nothing is lost, the versions between stay.
 * @throws AppError conflict, frozen, not_found.
 */
export async function restoreVersion(
  entryId: string,
  person: Person,
  seq: number,
  basedOn: number,
): Promise<VersionDto> {
  const old = await readVersion(entryId, seq);
  const db = await getDb();
  const revision = await db.transaction(async (tx) => {
    const row = await queries.lockEntry(tx, entryId);
    refuseFrozen(row.state);
    const draft = await queries.findDraft(tx, entryId);
    if (draft.revision !== basedOn) throw stale();
    await tx
      .update(entryDraft)
      .set({
        revision: basedOn + 1,
        title: old.title,
        doc: old.doc,
        stamps: old.stamps,
        savedAt: now(),
        savedBy: person.id,
        lastSaveId: null,
      })
      .where(eq(entryDraft.entryId, entryId));
    await tx.update(entry).set({ title: old.title, changedAt: now() }).where(eq(entry.id, entryId));
    return basedOn + 1;
  });
  return cutVersion(entryId, person, revision, `Restored from version ${seq}`);
}
