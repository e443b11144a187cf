import { Mark } from '@tiptap/core';

const longest = 2000;

/**
 * The address a link may have, normalised, or null. Allowed are absolute http, https and mailto addresses and
 * `/entries/…` on this server. The address is read as a browser reads it (WHATWG URL, "basic URL parser"), which drops
 * tabs and line ends inside a scheme and control characters around it; whatever could be read in two ways is refused.
 */
export function allowedLink(href: unknown): string | null {
  if (typeof href !== 'string' || href.length === 0 || href.length > longest) return null;
  // Controls, white space, zero-width and bidirectional marks have no place in an address, escaped or not.
  if (/[\u0000-\u0020\u007f-\u00a0\u00ad\u200b-\u200f\u2028-\u202e\u2060-\u2069\ufeff\\]/.test(href)) return null;
  if (href.startsWith('/')) {
    if (!/^\/entries\/[A-Za-z0-9_-]+(\/[A-Za-z0-9_/-]*)?(#[A-Za-z0-9_-]*)?$/.test(href)) return null;
    return href.includes('//') ? null : href;
  }
  let url: URL;
  try {
    url = new URL(href);
  } catch {
    return null;
  }
  if (url.protocol === 'mailto:') return /^mailto:[^:/?#]+@[^:/?#]+(\?[^#]*)?$/i.test(href) ? href : null;
  if (url.protocol !== 'http:' && url.protocol !== 'https:') return null;
  if (!/^https?:\/\/[^/]/i.test(href) || url.username !== '' || url.password !== '') return null;
  return href;
}

/** A link; the only attribute is an allowed address. */
export const link = Mark.create({
  name: 'link',
  priority: 1000,
  inclusive: false,
  addAttributes: () => ({
    href: {
      isRequired: true,
      validate: (value: unknown) => {
        if (allowedLink(value) === null) {
          throw new RangeError('attribute “href”: a link leads to an http, https or mailto address, or to an entry');
        }
      },
      parseHTML: (element: HTMLElement) => allowedLink(element.getAttribute('href')),
      renderHTML: (attributes: Record<string, unknown>) => {
        const href = allowedLink(attributes.href);
        return href === null ? {} : { href };
      },
    },
  }),
  parseHTML: () => [
    { tag: 'a[href]', getAttrs: (element) => (allowedLink(element.getAttribute('href')) === null ? false : null) },
  ],
  renderHTML: ({ HTMLAttributes }) => ['a', { ...HTMLAttributes, rel: 'noopener noreferrer nofollow' }, 0],
});
