/** Recognises files that are no text by their first bytes, so that the refusal can name what was attached. */

type Signature = { name: string; bytes: number[]; offset?: number };

// Magic numbers as their format specifications state them: PNG (ISO/IEC 15948), JPEG (ITU-T T.81), GIF89a, ZIP (APPNOTE),
// PDF (ISO 32000), HDF5 file format specification, NumPy NEP 1, gzip (RFC 1952).
const signatures: Signature[] = [
  { name: 'a PNG picture', bytes: [0x89, 0x50, 0x4e, 0x47] },
  { name: 'a JPEG picture', bytes: [0xff, 0xd8, 0xff] },
  { name: 'a GIF picture', bytes: [0x47, 0x49, 0x46, 0x38] },
  { name: 'a TIFF picture', bytes: [0x49, 0x49, 0x2a, 0x00] },
  { name: 'a WebP picture', bytes: [0x57, 0x45, 0x42, 0x50], offset: 8 },
  { name: 'an HDF5 file', bytes: [0x89, 0x48, 0x44, 0x46] },
  { name: 'a NumPy file', bytes: [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59] },
  { name: 'a ZIP archive or an office document', bytes: [0x50, 0x4b, 0x03, 0x04] },
  { name: 'a gzip archive', bytes: [0x1f, 0x8b] },
  { name: 'a PDF document', bytes: [0x25, 0x50, 0x44, 0x46, 0x2d] },
  { name: 'a MATLAB file', bytes: [0x4d, 0x41, 0x54, 0x4c, 0x41, 0x42, 0x20, 0x35] },
  { name: 'a program', bytes: [0x7f, 0x45, 0x4c, 0x46] },
];

/** What a file that starts with these bytes is (`a PNG picture`), or null where nothing is recognised. */
export function binaryKind(head: Uint8Array): string | null {
  for (const { name, bytes, offset = 0 } of signatures) {
    if (bytes.every((byte, i) => head[offset + i] === byte)) return name;
  }
  return null;
}

export type PictureType = 'image/png' | 'image/jpeg' | 'image/gif' | 'image/webp';

/** The type of a picture by its content, never by its name; null for everything else, SVG included. */
export function pictureType(head: Uint8Array): PictureType | null {
  const at = (offset: number, bytes: number[]) => bytes.every((byte, i) => head[offset + i] === byte);
  if (at(0, [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a])) return 'image/png';
  if (at(0, [0xff, 0xd8, 0xff])) return 'image/jpeg';
  if (at(0, [0x47, 0x49, 0x46, 0x38, 0x37, 0x61]) || at(0, [0x47, 0x49, 0x46, 0x38, 0x39, 0x61])) return 'image/gif';
  if (at(0, [0x52, 0x49, 0x46, 0x46]) && at(8, [0x57, 0x45, 0x42, 0x50])) return 'image/webp';
  return null;
}
