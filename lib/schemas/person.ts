import { z } from 'zod';
import { commonPasswords } from './common-passwords';

// Bidirectional controls, zero-width and other invisible characters, and control characters: a printed name shows what it is.
const invisible = /[\p{Cc}\p{Cf}\p{Zl}\p{Zp}\u034f\u115f\u1160\u17b4\u17b5\u3164\uffa0]/u;

// A word of one name in two alphabets that share letter shapes looks like somebody else's name.
const mixedAlphabets = (name: string) =>
  name
    .split(/\s+/)
    .some((word) => [/\p{sc=Latn}/u, /\p{sc=Cyrl}/u, /\p{sc=Grek}/u].filter((script) => script.test(word)).length > 1);

export const personNameSchema = z
  .string()
  .trim()
  .transform((name) => name.normalize('NFC'))
  .pipe(
    z
      .string()
      .min(2, 'Give the full name, as it is to be printed with a signature.')
      .max(120, 'A name has at most 120 characters.')
      .refine((name) => !invisible.test(name), 'The name has invisible or direction-changing characters; type it anew.')
      .refine(
        (name) => !mixedAlphabets(name),
        'A word of the name mixes two alphabets, so that it can look like another name; type it in one.',
      ),
  );

export const emailSchema = z
  .string()
  .trim()
  .toLowerCase()
  .max(254)
  .refine((email) => !/[\r\n\0]/.test(email), 'This is not an e-mail address.')
  .pipe(z.email('This is not an e-mail address.'));

/** 8 to 128 characters, none of the passwords that everyone tries first. */
export const passwordSchema = z
  .string()
  .min(8, 'A password has at least 8 characters.')
  .max(128, 'A password has at most 128 characters.')
  .refine(
    (password) => !commonPasswords.has(password.toLowerCase()),
    'This password is among the first that anyone tries; choose another.',
  );

export const installationRoles = ['administrator', 'member'] as const;
export const notebookRoles = ['lead', 'author', 'witness', 'reader'] as const;
export type InstallationRole = (typeof installationRoles)[number];
export type NotebookRole = (typeof notebookRoles)[number];

/** Initials for the time gutter: first letters of the first and last word. */
export function initialsOf(name: string): string {
  const words = name.trim().split(/\s+/);
  const letters = words.length === 1 ? [...words[0]].slice(0, 2) : [[...words[0]][0], [...words[words.length - 1]][0]];
  return letters.join('').toUpperCase();
}
