import 'server-only';
import { createHash, randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import type { NodeJson } from '@/lib/document/json';
import type { TraceDto } from '@/lib/schemas/entry';
import type { Person } from '@/server/access/person';
import { authorise } from '@/server/access/scope';
import { atTime } from '@/server/clock/service';
import { getDb } from '@/server/db/client';
import { entryDraft } from '@/server/db/schema/entries';
import { saveDraft } from '@/server/entries/draft-service';
import { insertEntry, strikeOut } from '@/server/entries/service';
import { tracesOfEntry } from '@/server/entries/reading-service';
import { cutVersion } from '@/server/entries/version-service';
import { evaluateOnServer, partsOf } from '@/server/evaluation/service';
import { answerQuestion, ask } from '@/server/questions/service';
import { countersignVerified, issueChallenge, signVerified } from '@/server/signing/service';
import { noteServed } from '@/server/signing/witness-service';
import { receiveFile } from '@/server/traces/service';
import { demoEntries, type DemoEntry } from './entries';
import type { TraceFile } from './generator';
import { makePeople, makePlaces, type DemoPeople, type DemoPlaces } from './people';

/** Fills an empty installation with the invented notebook, through the same services as everybody else. */
export async function loadDemo(): Promise<void> {
  const db = await getDb();
  const people = await makePeople(db);
  const places = await makePlaces(db, people);
  // Oldest first, so that leaf numbers follow the days.
  const entries = [...demoEntries()].sort((a, b) => b.daysAgo - a.daysAgo);
  for (const entry of entries) await writeEntry(entry, people, places);
}

const at = (daysAgo: number, hour: number, minute: number): Date => {
  const time = new Date(Date.now() - daysAgo * 86_400_000);
  time.setUTCHours(hour, minute, 0, 0);
  return time.getTime() > Date.now() ? new Date(Date.now() - (24 - hour) * 60_000) : time;
};

async function writeEntry(entry: DemoEntry, people: DemoPeople, places: DemoPlaces): Promise<void> {
  const db = await getDb();
  const author = people[entry.author];
  const begun = at(entry.daysAgo, 8, 2);
  const notebookId = places.books[entry.book];
  const { id } = await db.transaction((tx) =>
    insertEntry(tx, {
      notebookId,
      authorId: author.id,
      title: entry.title,
      workDate: begun.toISOString().slice(0, 10),
      cooldownId: places.cooldowns[entry.cooldown],
      deviceIds: entry.devices.map((device) => places.devices[device]),
      doc: { type: 'doc', content: [{ type: 'paragraph', attrs: { id: 'first-block' } }] },
      requestKey: null,
      at: begun,
    }),
  );
  await atTime(at(entry.daysAgo, 8, 40), () => attach(entry.traces, id, notebookId, author));
  const traces = await tracesOfEntry(db, id);
  const blocks = entry.write({ author, begun, trace: (name) => traces.find((trace) => trace.fileName === name)! });
  await writeBlocks(id, author, entry, blocks, traces);
  if (entry.state === 'fresh') return;
  const seq = await atTime(at(entry.daysAgo, 15, 10), async () => cutVersion(id, author, await revisionOf(id), null));
  if (entry.state === 'draft') return;
  if (entry.state === 'struck out') {
    await atTime(at(entry.daysAgo, 16, 0), async () =>
      strikeOut(await authorise('entry.strike', author, id), entry.strikeReason ?? 'Begun twice.'),
    );
    return;
  }
  await atTime(at(entry.daysAgo - (entry.signedAfterDays ?? 0), 16, 5), async () => {
    const scope = await authorise('entry.sign', author, id);
    const { challengeId } = await issueChallenge(scope, 'sign', seq.digest);
    await signVerified(scope, {
      challengeId,
      versionDigest: seq.digest,
      zone: 'Europe/Oslo',
      lateReason: entry.lateReason ?? null,
      witnessIds: [people[entry.witness ?? 'priya'].id],
    });
  });
  await questionsAndWitness(entry, id, seq.digest, traces, people);
}

async function attach(files: TraceFile[], entryId: string, notebookId: string, author: Person): Promise<void> {
  for (const file of files) {
    const bytes = Buffer.from(file.text, 'utf8');
    await receiveFile({
      kind: 'trace',
      notebookId,
      entryId,
      personId: author.id,
      uploadId: randomUUID(),
      fileName: file.name,
      mediaType: 'text/csv',
      bytes: bytes.byteLength,
      sha256: createHash('sha256').update(bytes).digest('hex'),
      content: (async function* () {
        yield bytes;
      })(),
    });
  }
}

/** Writes the blocks one after another over the day, so that the gutter shows a day's times, with the results in place. */
async function writeBlocks(
  id: string,
  author: Person,
  entry: DemoEntry,
  blocks: NodeJson[],
  traces: TraceDto[],
): Promise<void> {
  const doc = { type: 'doc' as const, content: blocks };
  const { cells, traces: named } = partsOf(doc);
  const sheet = await evaluateOnServer(cells, named, new Map(traces.map((trace) => [trace.id, trace])));
  const fill = (node: NodeJson) => {
    if (node.type === 'value' && node.attrs) node.attrs.shown = sheet.results.get(String(node.attrs.id))?.text ?? null;
    node.content?.forEach(fill);
  };
  blocks.forEach(fill);
  const steps = Math.min(4, blocks.length);
  for (let step = 1; step <= steps; step += 1) {
    const until = Math.ceil((blocks.length * step) / steps);
    const written = at(entry.daysAgo, 8 + Math.floor((step * 5) / steps), (step * 17) % 60);
    await atTime(written, async () => {
      const iso = written.toISOString().replace(/\.\d+Z$/, '+00:00');
      await saveDraft(id, author, {
        basedOn: await revisionOf(id),
        title: entry.title,
        doc: { type: 'doc', content: blocks.slice(0, until) },
        written: Object.fromEntries(blocks.slice(0, until).map((block) => [String(block.attrs?.id), iso])),
        clockOffsetMs: 120,
        saveId: randomUUID(),
      });
    });
  }
}

async function revisionOf(id: string): Promise<number> {
  const [draft] = await (
    await getDb()
  )
    .select({ revision: entryDraft.revision })
    .from(entryDraft)
    .where(eq(entryDraft.entryId, id));
  return draft.revision;
}

async function questionsAndWitness(
  entry: DemoEntry,
  id: string,
  digest: string,
  traces: TraceDto[],
  people: DemoPeople,
): Promise<void> {
  const witness = people[entry.witness ?? 'priya'];
  const later = entry.daysAgo - (entry.signedAfterDays ?? 0) - 1;
  if (entry.question) {
    const { text, answer } = entry.question;
    const asked = await atTime(at(later, 10, 15), async () =>
      ask(await authorise('entry.ask', witness, id), { versionDigest: digest, blockId: null, quote: '', text }),
    );
    if (answer)
      await atTime(at(later, 13, 30), async () =>
        answerQuestion(await authorise('question.answer', people[entry.author], asked.id), answer),
      );
  }
  if (entry.state !== 'witnessed') return;
  await atTime(at(later, 14, 0), async () => {
    const scope = await authorise('entry.countersign', witness, id);
    for (const trace of traces) await noteServed(witness.id, scope.entry, trace.id);
    const { challengeId } = await issueChallenge(scope, 'countersign', digest);
    await countersignVerified(scope, {
      challengeId,
      versionDigest: digest,
      zone: 'Europe/Oslo',
      lateReason: null,
      witnessIds: [],
    });
  });
}
