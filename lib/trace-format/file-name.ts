/** Names of attached files: shown and served, never used as a path. */

const longest = 255;
// Control characters, and those that turn the direction of the text around them (Unicode UAX #9, table 4) or take no room.
const unseen = /[\u0000-\u001f\u007f-\u009f\u061c\u200b-\u200f\u2028-\u202e\u2060-\u2069\ufeff]/g;

/**
 * The name as it is recorded: its last path part without control and direction characters, at most 255 characters with the
 * ending kept. Letters stay as they came, NFC or NFD.
 */
export function cleanFileName(name: string): string {
  const last = name.replace(unseen, '').split(/[/\\]/).pop() ?? '';
  const trimmed = last.trim();
  if (trimmed === '' || /^\.+$/.test(trimmed)) return 'file without a name';
  const chars = Array.from(trimmed);
  if (chars.length <= longest) return trimmed;
  const dot = trimmed.lastIndexOf('.');
  const ending = dot > 0 ? Array.from(trimmed.slice(dot)) : [];
  if (ending.length === 0 || ending.length > 20) return chars.slice(0, longest).join('');
  return chars.slice(0, longest - ending.length).join('') + ending.join('');
}

// Characters that stand for themselves in ext-value, RFC 8187 3.2.1.
const plain = /[A-Za-z0-9!#$&+.^_`|~-]/;
// Reserved names of Windows file systems; a browser that saves there must not meet them.
const reserved = /^(?:con|prn|aux|nul|com[0-9]|lpt[0-9])(?:\.|$)/i;

/** Content-Disposition for a download (RFC 6266), with the name twice: in ASCII, and in UTF-8 by RFC 8187. */
export function attachmentHeader(name: string): string {
  const cleaned = cleanFileName(name);
  const safe = reserved.test(cleaned) ? `_${cleaned}` : cleaned;
  const ascii = Array.from(safe.normalize('NFKD').replace(/[\u0300-\u036f]/g, ''))
    .map((char) => (/[ -~]/.test(char) && !/["\\%]/.test(char) ? char : '_'))
    .join('');
  const encoded = Array.from(new TextEncoder().encode(safe))
    .map((byte) => {
      const char = String.fromCharCode(byte);
      return byte < 128 && plain.test(char) ? char : `%${byte.toString(16).toUpperCase().padStart(2, '0')}`;
    })
    .join('');
  return `attachment; filename="${ascii}"; filename*=UTF-8''${encoded}`;
}
