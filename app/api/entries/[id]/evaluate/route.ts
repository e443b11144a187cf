import { z } from 'zod';
import { handleSchema, spanSchema, traceSettingsSchema } from '@/lib/document/attributes';
import { takeTurn } from '@/server/access/rate';
import { withAccess } from '@/server/access/route';
import { evaluateForEntry } from '@/server/entries/evaluation-service';

const bodySchema = z
  .object({
    cells: z
      .array(
        z
          .object({
            id: z.string().max(64),
            source: z.string().max(2000),
            unit: z.string().max(60).nullable(),
            digits: z.number().int().min(1).max(4).nullable(),
          })
          .strict(),
      )
      .max(2000),
    traces: z
      .array(
        z
          .object({
            traceId: z.uuid(),
            handle: handleSchema,
            settings: traceSettingsSchema,
            spans: z.array(spanSchema).max(200),
          })
          .strict(),
      )
      .max(200),
  })
  .strict();

export const POST = withAccess({ action: 'entry.read', body: bodySchema }, async ({ scope, body }) => {
  await takeTurn(`evaluate:${scope.person.id}`, 600, 600);
  return evaluateForEntry(scope.entry.id, body.cells, body.traces);
});
