import 'server-only';
import { cache } from 'react';
import { headers } from 'next/headers';
import { notFound, redirect } from 'next/navigation';
import { AppError } from '@/lib/errors/app-error';
import { findPerson, type Person } from './person';
import type { Action } from './rights';
import { authorise, type ScopeOf } from './scope';

/** Who reads this page; asked once per request. */
export const currentPerson = cache(async (): Promise<Person | null> => findPerson(await headers()));

/**
 * The way into a page: the scope when the person may see it. Signed out: to the sign-in page and back; an outsider: not found.
 */
export async function pageAccess<A extends Action>(action: A, id: string | null, path: string): Promise<ScopeOf<A>> {
  const person = await currentPerson();
  try {
    return await authorise(action, person, id);
  } catch (error) {
    if (!(error instanceof AppError)) throw error;
    if (error.code === 'signed_out') redirect(`/sign-in?to=${encodeURIComponent(path)}`);
    if (error.code === 'not_found' || error.code === 'not_allowed' || error.code === 'frozen') notFound();
    throw error;
  }
}

/** A path of this application to go back to, never another site. */
export function safePath(to: string | undefined): string {
  if (!to || !/^\/[A-Za-z0-9]/.test(to) || /[\\\s]/.test(to)) return '/';
  return to;
}
