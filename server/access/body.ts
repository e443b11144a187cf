import 'server-only';
import { AppError } from '@/lib/errors/app-error';

/**
 * Reads a JSON body of at most `maxBytes` bytes.
 * @throws AppError wrong_type, too_large, invalid.
 */
export async function readJsonBody(request: Request, maxBytes: number): Promise<unknown> {
  if (!/^application\/json\b/i.test(request.headers.get('content-type') ?? '')) {
    throw new AppError('wrong_type', 'This address takes JSON (content-type application/json).');
  }
  const tooLarge = () =>
    new AppError(
      'too_large',
      `This is larger than the ${Math.round(maxBytes / 1e6)} MB taken here. It is kept in this browser; make it smaller.`,
    );
  if (Number(request.headers.get('content-length') ?? 0) > maxBytes) throw tooLarge();
  const chunks: Uint8Array[] = [];
  let size = 0;
  const reader = request.body?.getReader();
  for (let part = await reader?.read(); part && !part.done; part = await reader?.read()) {
    size += part.value.byteLength;
    if (size > maxBytes) {
      await reader?.cancel();
      throw tooLarge();
    }
    chunks.push(part.value);
  }
  try {
    return JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(Buffer.concat(chunks)));
  } catch (cause) {
    throw new AppError('invalid', 'The body is not JSON in UTF-8.', { cause });
  }
}
