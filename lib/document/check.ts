import { z } from 'zod';
import { AppError } from '@/lib/errors/app-error';
import {
  blockIdSchema,
  cautionNodeSchema,
  equationNodeSchema,
  logLineNodeSchema,
  pictureNodeSchema,
  traceNodeSchema,
  valueNodeSchema,
} from './attributes';
import { documentSchema } from './extensions';
import type { DocumentJson, NodeJson } from './json';
import { allowedLink } from './nodes/link';
import { widestSpan } from './nodes/table-cells';
import { checkStructure, refuse } from './structure-check';

export { documentLimits } from './structure-check';

const id = z.nullish(blockIdSchema);
const span = z.number().int().min(1).max(widestSpan).optional();
const cell = z
  .object({
    colspan: span,
    rowspan: span,
    colwidth: z.array(z.number().int().min(0).max(10_000)).max(1000).nullable().optional(),
    align: z.enum(['left', 'center', 'right']).nullable().optional(),
  })
  .strict();
const onlyId = z.object({ id }).strict();
const none = z.object({}).strict();

/** Attributes by node type. A node that is not listed does not exist. */
const attributesOf: Record<string, z.core.$ZodType> = {
  doc: none,
  text: none,
  hardBreak: none,
  paragraph: onlyId,
  blockquote: onlyId,
  bulletList: onlyId,
  taskList: onlyId,
  table: onlyId,
  horizontalRule: onlyId,
  listItem: none,
  tableRow: none,
  tableCell: cell,
  tableHeader: cell,
  heading: z.object({ id, level: z.number().int().min(1).max(3) }).strict(),
  orderedList: z
    .object({
      id,
      start: z.number().int().min(0).max(1_000_000).optional(),
      type: z.enum(['1', 'a', 'A', 'i', 'I']).nullable().optional(),
    })
    .strict(),
  codeBlock: z.object({ id, language: z.string().max(60).nullable().optional() }).strict(),
  taskItem: z.object({ checked: z.boolean().optional() }).strict(),
  equation: equationNodeSchema,
  equationBlock: z.strictObject({ ...equationNodeSchema.shape, id }),
  logLine: logLineNodeSchema,
  caution: cautionNodeSchema,
  trace: traceNodeSchema,
  value: valueNodeSchema,
  picture: pictureNodeSchema,
};

const attributesOfMark: Record<string, z.core.$ZodType> = {
  bold: none,
  italic: none,
  strike: none,
  code: none,
  subscript: none,
  superscript: none,
  link: z.object({ href: z.string() }).strict(),
};

const has = (record: object, key: string) => Object.prototype.hasOwnProperty.call(record, key);

function checkAttributes(place: string, what: string, schema: z.core.$ZodType, attrs: unknown): void {
  const outcome = z.core.safeParse(schema, attrs ?? {});
  if (outcome.success) return;
  const issue = outcome.error.issues[0];
  const field = issue?.path.length ? `attribute “${issue.path.join('.')}”` : 'the attributes';
  refuse(place, `${what}: ${field}: ${issue?.message ?? 'not of the right kind'}.`);
}

function checkNode(node: NodeJson, place: string): void {
  const schema = has(attributesOf, node.type) ? attributesOf[node.type] : undefined;
  if (!schema) refuse(place, `a document has no node “${node.type.slice(0, 60)}”.`);
  if ((node.type === 'text') !== (node.text !== undefined)) refuse(place, 'text stands in text nodes only.');
  checkAttributes(place, node.type, schema, node.attrs);
  for (const mark of node.marks ?? []) {
    const markSchema = has(attributesOfMark, mark.type) ? attributesOfMark[mark.type] : undefined;
    if (!markSchema) refuse(place, `a document has no mark “${mark.type.slice(0, 60)}”.`);
    checkAttributes(place, mark.type, markSchema, mark.attrs);
    if (mark.type === 'link' && allowedLink(mark.attrs?.href) === null) {
      refuse(place, 'a link leads to an http, https or mailto address, or to an entry; this one does not.');
    }
  }
}

/**
 * The document in the schema's own form (every attribute present), or an AppError 'invalid' whose sentence names the
 * place. Refuses everything that is not a document: see checkStructure for the bounds; then unknown nodes and marks,
 * attributes of the wrong kind, links elsewhere than http, https, mailto and entries, blocks without an id of their
 * own, two traces of one handle, and content that the schema does not allow.
 */
export function checkDocument(json: unknown): DocumentJson {
  checkStructure(json);
  if (json.type !== 'doc') refuse('The document', 'has to begin with a node “doc”.');
  const ids = new Set<string>();
  const handles = new Set<string>();
  const work: { node: NodeJson; block: number; top: boolean }[] = [{ node: json, block: 0, top: false }];
  for (let item = work.pop(); item !== undefined; item = work.pop()) {
    const { node, block, top } = item;
    const place = block === 0 ? 'The document' : `Block ${block}`;
    checkNode(node, place);
    const own: unknown = node.attrs?.id;
    if (typeof own === 'string') {
      if (ids.has(own)) refuse(place, `the id “${own}” is used twice.`);
      ids.add(own);
    } else if (top) refuse(place, 'has no id.');
    if (node.type === 'trace') {
      const handle = String(node.attrs?.handle);
      if (handles.has(handle)) refuse(place, `the handle “${handle}” names two traces.`);
      handles.add(handle);
    }
    const children = node.content ?? [];
    for (let i = children.length - 1; i >= 0; i -= 1) {
      const child = children[i];
      if (child) work.push({ node: child, block: block === 0 ? i + 1 : block, top: node === json });
    }
  }
  try {
    const document = documentSchema().nodeFromJSON(json);
    document.check();
    return document.toJSON() as DocumentJson;
  } catch (cause) {
    if (!(cause instanceof RangeError)) throw cause;
    throw new AppError('invalid', `The document does not have the shape of one: ${cause.message}.`, {
      field: 'doc',
      cause,
    });
  }
}
