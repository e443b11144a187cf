import 'server-only';

const secretName = /pass|secret|token|cookie|authorization|code$/i;

/**
 * One JSON line on stderr per trouble. JSON escapes line breaks and terminal codes, so nothing a stranger sends can forge
 * or colour a line; fields named like secrets are left out, and bodies are never given here.
 */
export function report(event: string, detail: Record<string, unknown> = {}, error?: unknown): void {
  const safe = Object.fromEntries(
    Object.entries(detail).map(([key, value]) => [key, secretName.test(key) ? '(left out)' : value]),
  );
  const line = {
    at: new Date().toISOString(),
    event,
    ...safe,
    ...(error === undefined ? {} : { error: describe(error) }),
  };
  process.stderr.write(`${escapeControls(JSON.stringify(line))}\n`);
}

function escapeControls(text: string): string {
  // JSON leaves U+007F–U+009F and the line separators as they are; some terminals act on them.
  return text.replace(/[\u007f-\u009f\u2028\u2029]/g, (c) => `\\u${c.charCodeAt(0).toString(16).padStart(4, '0')}`);
}

function describe(error: unknown): unknown {
  if (!(error instanceof Error)) return String(error);
  const code = (error as { code?: unknown }).code;
  return {
    name: error.name,
    // A failed query's message carries its parameters, which may be somebody's text.
    message: error.message.replace(/\nparams:[\s\S]*$/, ''),
    ...(typeof code === 'string' ? { code } : {}),
    stack: error.stack
      ?.split('\n')
      .filter((line) => line.trimStart().startsWith('at '))
      .slice(0, 8),
    ...(error.cause === undefined ? {} : { cause: describe(error.cause) }),
  };
}
