import { z } from 'zod';

export const uploadIdSchema = z.string().regex(/^[A-Za-z0-9_-]{16,64}$/);
export const sha256Schema = z.string().regex(/^[0-9a-f]{64}$/);

/** What the browser says of the files it is about to send: one item per file, in the same order. */
export const uploadInputSchema = z
  .object({
    entryId: z.uuid(),
    files: z
      .array(z.object({ uploadId: uploadIdSchema, sha256: sha256Schema }).strict())
      .min(1)
      .max(20),
  })
  .strict();
export type UploadInput = z.infer<typeof uploadInputSchema>;

/** What the server answers for each file once it has it. */
export type UploadOutcome = { traceId: string; state: 'received' | 'parsed' | 'unreadable' } | { error: string };
