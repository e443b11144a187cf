import { z } from 'zod';

/** An IANA time zone that this engine knows. */
export const zoneSchema = z
  .string()
  .max(64)
  .refine((zone) => {
    try {
      new Intl.DateTimeFormat('en', { timeZone: zone });
      return true;
    } catch {
      return false;
    }
  }, 'The time zone of this browser is not known here.');

export const challengeSchema = z
  .object({ purpose: z.enum(['sign', 'countersign']), versionDigest: z.string().length(64) })
  .strict();

export const signSchema = z
  .object({
    challengeId: z.uuid(),
    versionDigest: z.string().length(64),
    password: z.string().min(1, 'Give your password.').max(128),
    zone: zoneSchema,
    lateReason: z.string().trim().max(2000).nullable(),
    witnessIds: z.array(z.string().max(64)).max(20),
  })
  .strict();
export type SignInput = z.infer<typeof signSchema>;

export type ChallengeDto = {
  challengeId: string;
  purpose: 'sign' | 'countersign';
  expiresAt: string;
  meaning: string;
  printedName: string;
  serverTime: string;
};

/** What the sign and countersign pages show: exactly what is bound, and what is unfinished. */
export type BindingDto = {
  title: string;
  notebook: string;
  leaf: number;
  workDate: string;
  seq: number;
  digest: string;
  values: { symbol: string | null; source: string; text: string | null; error: string | null }[];
  traces: { handle: string; fileName: string; bytes: number; sha256: string }[];
  pictures: { fileName: string; sha256: string }[];
  questions: number;
  meaning: string;
  printedName: string;
  late: { days: number; limit: number } | null;
  /** Sentences about what is unfinished. */
  warnings: string[];
  /** The draft has changes that this version does not hold. */
  draftIsNewer: boolean;
  revision: number;
};
