import { unsentDrafts } from './draft-store';

/**
 * Asks before signing out while this browser holds text of this person that the server does not have. True when there
 * is none, or when they sign out all the same: the text stays in the browser for their next sign-in here.
 */
export async function maySignOut(
  personId: string,
  ask: (sentence: string) => boolean = (s) => window.confirm(s),
): Promise<boolean> {
  let unsent: { title: string }[];
  try {
    unsent = await unsentDrafts(personId);
  } catch {
    // No store in this browser, so nothing is kept in it either; an open page asks by itself before it is left.
    return true;
  }
  if (unsent.length === 0) return true;
  const titles = unsent.map(({ title }) => `“${title || 'without a title'}”`).join(', ');
  return ask(
    `Text of ${titles} has not reached the server. It stays in this browser until you sign in here again; nobody else who signs in here sees it. Sign out all the same?`,
  );
}
