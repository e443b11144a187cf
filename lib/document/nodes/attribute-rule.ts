import type { Attribute } from '@tiptap/core';
import type * as z from 'zod/mini';

/**
 * One attribute of an own node: checked by ProseMirror's `check()` through the zod schema, and carried through the
 * clipboard as JSON in a data attribute. What does not parse on the way in becomes the default.
 */
export function attributeRule<T>(name: string, schema: z.ZodMiniType<T>, standard?: T): Partial<Attribute> {
  const key = `data-${name.toLowerCase()}`;
  return {
    ...(standard === undefined ? { isRequired: true } : { default: standard }),
    validate: (value: unknown) => {
      const outcome = schema.safeParse(value);
      if (!outcome.success) {
        throw new RangeError(`attribute “${name}”: ${outcome.error.issues[0]?.message ?? 'not of the right kind'}`);
      }
    },
    parseHTML: (element) => {
      const parsed = readAttribute(element, name, schema);
      return parsed === undefined ? (standard ?? null) : parsed;
    },
    renderHTML: (attributes) => ({ [key]: JSON.stringify(attributes[name] ?? null) }),
  };
}

/** The attribute as another editor wrote it to the clipboard; undefined when it is missing or not what it should be. */
export function readAttribute<T>(element: Element, name: string, schema: z.ZodMiniType<T>): T | undefined {
  const text = element.getAttribute(`data-${name.toLowerCase()}`);
  if (text === null || text.length > 200_000) return undefined;
  try {
    const outcome = schema.safeParse(JSON.parse(text));
    return outcome.success ? outcome.data : undefined;
  } catch {
    return undefined;
  }
}
