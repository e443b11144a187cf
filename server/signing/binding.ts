import 'server-only';
import { documentText } from '@/lib/document/text';
import type { DocumentJson, NodeJson } from '@/lib/document/json';
import type { VersionRecord } from '@/lib/document/version';

// Bidirectional controls, zero-width space, word joiner and byte-order mark; not the joiners that scripts and emoji need.
const misleadingCharacters = /[\u200b\u200e\u200f\u202a-\u202e\u2060-\u2064\u2066-\u2069\ufeff]/g;

/** Sentences about what is unfinished in a version; they warn and do not forbid. */
export function unfinished(record: VersionRecord, attached: { id: string; fileName: string }[]): string[] {
  const doc = record.document as DocumentJson;
  const warnings: string[] = [];
  for (const title of emptySections(doc)) warnings.push(`The section “${title}” is empty.`);
  for (const value of record.values) {
    if (value.state !== 'ok')
      warnings.push(
        `The value ${value.symbol ?? `“${value.source}”`} has no result: ${value.error ?? 'its data is not there yet.'}`,
      );
  }
  const usedTexts = record.values.map((value) => value.source).join('\n');
  for (const trace of record.traces) {
    if (!usedTexts.includes(`${trace.handle}.`))
      warnings.push(`The trace ${trace.handle} (${trace.fileName}) is attached and used in no value.`);
    const missing = trace.settings.columns.filter((column) => column.unit === null);
    if (missing.length > 0)
      warnings.push(
        `The trace ${trace.handle} has columns without a stated unit: ${missing.map((c) => c.symbol).join(', ')}.`,
      );
  }
  const placed = new Set([...record.traces.map((t) => t.traceId), ...record.pictures.map((p) => p.pictureId)]);
  for (const file of attached) {
    if (!placed.has(file.id))
      warnings.push(`The file ${file.fileName} was uploaded to this entry and is not in the text.`);
  }
  const misleading = `${record.title} ${documentText(doc)}`.match(misleadingCharacters)?.length ?? 0;
  if (misleading > 0) {
    warnings.push(
      `The text holds ${misleading} invisible or direction-changing characters: it may read otherwise than it is stored.`,
    );
  }
  for (const block of doc.content ?? []) {
    if (block.type === 'caution' && !block.attrs?.acknowledgedAt)
      warnings.push('The caution at the top is not acknowledged.');
  }
  return warnings;
}

function emptySections(doc: DocumentJson): string[] {
  const blocks = doc.content ?? [];
  const empty: string[] = [];
  blocks.forEach((block, index) => {
    if (block.type !== 'heading') return;
    const level = Number(block.attrs?.level);
    const rest = blocks.slice(index + 1);
    const end = rest.findIndex((later) => later.type === 'heading' && Number(later.attrs?.level) <= level);
    if (!(end === -1 ? rest : rest.slice(0, end)).some(hasContent))
      empty.push(documentText({ type: 'doc', content: [block] }).trim());
  });
  return empty;
}

function hasContent(block: NodeJson): boolean {
  if (['trace', 'picture', 'equationBlock', 'table', 'value'].includes(block.type)) return true;
  return documentText({ type: 'doc', content: [block] }).trim() !== '';
}
