import { AppError } from '@/lib/errors/app-error';
import type { NodeJson } from './json';

/** What any document may be, before its schema is asked. All walks are loops: depth cannot overflow the stack. */
export const documentLimits = { depth: 64, nodes: 50_000, bytes: 4 * 1024 * 1024 } as const;

const nodeKeys = new Set(['type', 'attrs', 'content', 'marks', 'text']);
const markKeys = new Set(['type', 'attrs']);
const hostileKeys = new Set(['__proto__', 'constructor', 'prototype']);

export function refuse(place: string, message: string): never {
  throw new AppError('invalid', `${place}: ${message}`, { field: 'doc', details: { place } });
}

type Work = { value: unknown; role: 'node' | 'mark' | 'plain'; depth: number; block: number };

const placeOf = (block: number) => (block === 0 ? 'The document' : `Block ${block}`);

function fields(value: unknown, place: string, what: string): [string, unknown][] {
  if (typeof value !== 'object' || value === null || Array.isArray(value))
    refuse(place, `${what} has to be an object.`);
  const prototype: unknown = Object.getPrototypeOf(value);
  if (prototype !== Object.prototype && prototype !== null) refuse(place, `${what} has to be a plain object.`);
  return Object.entries(value);
}

const utf8Length = (text: string) => {
  let length = text.length;
  for (let i = 0; i < text.length; i += 1) {
    const unit = text.charCodeAt(i);
    if (unit > 0x7ff) length += unit >= 0xd800 && unit <= 0xdfff ? 1 : 2;
    else if (unit > 0x7f) length += 1;
  }
  return length;
};

/**
 * Refuses with an AppError 'invalid' what is not a tree of nodes within the limits: foreign keys, `__proto__`,
 * lone surrogates, NUL, numbers that JSON does not know, more than 64 levels, 50 000 nodes or 4 MB.
 */
export function checkStructure(json: unknown): asserts json is NodeJson {
  const work: Work[] = [{ value: json, role: 'node', depth: 1, block: 0 }];
  let nodes = 0;
  let bytes = 0;
  const addText = (text: string, place: string) => {
    bytes += utf8Length(text);
    if (/\p{Surrogate}/u.test(text))
      refuse(place, 'holds half of a character (a lone surrogate). Type that place again.');
    if (text.includes('\u0000')) refuse(place, 'holds a NUL character, which cannot be kept. Remove it.');
  };
  for (let item = work.pop(); item !== undefined; item = work.pop()) {
    const { value, role, depth, block } = item;
    const place = placeOf(block);
    if (role === 'node') nodes += 1;
    bytes += 8;
    if (depth > documentLimits.depth) refuse(place, `is nested more than ${documentLimits.depth} levels deep.`);
    if (nodes > documentLimits.nodes) {
      refuse('The document', `holds more than ${documentLimits.nodes} nodes. Continue in a new entry.`);
    }
    if (bytes > documentLimits.bytes) refuse('The document', 'is longer than 4 MB. Continue in a new entry.');
    if (role === 'plain') {
      if (typeof value === 'string') addText(value, place);
      else if (typeof value === 'number') {
        if (!Number.isFinite(value)) refuse(place, 'holds a number that is not finite.');
      } else if (Array.isArray(value)) {
        for (const child of value) work.push({ value: child, role, depth: depth + 1, block });
      } else if (typeof value === 'object' && value !== null) {
        for (const [key, child] of fields(value, place, 'an attribute')) {
          if (hostileKeys.has(key)) refuse(place, `has a field “${key}”, which no document has.`);
          addText(key, place);
          work.push({ value: child, role, depth: depth + 1, block });
        }
      } else if (typeof value !== 'boolean' && value !== null) refuse(place, 'holds something that is not JSON.');
      continue;
    }
    const allowed = role === 'node' ? nodeKeys : markKeys;
    let typed = false;
    for (const [key, child] of fields(value, place, `a ${role}`)) {
      if (!allowed.has(key)) refuse(place, `a ${role} has a field “${key.slice(0, 60)}”, which no ${role} has.`);
      if (key === 'type') {
        if (typeof child !== 'string') refuse(place, `a ${role}’s type has to be text.`);
        typed = true;
      } else if (key === 'text') {
        if (typeof child !== 'string' || child === '') refuse(place, 'a text node has to hold text.');
        addText(child, place);
      } else if (key === 'attrs') {
        fields(child, place, 'the attributes');
        work.push({ value: child, role: 'plain', depth, block });
      } else {
        if (!Array.isArray(child)) refuse(place, `“${key}” has to be a list.`);
        if (key === 'marks' && child.length > 16) refuse(place, 'a text has more than 16 marks.');
        for (let i = 0; i < child.length; i += 1) {
          const inner = depth === 1 && key === 'content' ? i + 1 : block;
          const childRole = key === 'marks' ? ('mark' as const) : ('node' as const);
          work.push({ value: child[i], role: childRole, depth: depth + 1, block: inner });
        }
      }
    }
    if (!typed) refuse(place, `a ${role} has no type.`);
  }
}
