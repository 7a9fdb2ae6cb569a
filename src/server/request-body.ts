import { AppError } from './errors';

/** Reads a JSON body up to a limit, whatever its length claims to be. */
export async function readJson(request: Request, maxBytes: number): Promise<unknown> {
  requireType(request, ['application/json']);
  const bytes = await readLimited(request, maxBytes);
  let text: string;
  try {
    text = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch (error) {
    throw new AppError('invalid-json', 'The body is not UTF-8 text. Send JSON as UTF-8.', {
      field: 'body',
      cause: error,
    });
  }
  try {
    return JSON.parse(text);
  } catch (error) {
    throw new AppError('invalid-json', 'The body is not JSON. Send one JSON value.', {
      field: 'body',
      cause: error,
    });
  }
}

/** Reads a body of bytes of one of these types up to a limit. */
export async function readBytes(
  request: Request,
  types: readonly string[],
  maxBytes: number,
): Promise<{ bytes: Uint8Array; type: string }> {
  const type = requireType(request, types);
  return { bytes: await readLimited(request, maxBytes), type };
}

function requireType(request: Request, types: readonly string[]): string {
  const type = request.headers.get('content-type')?.split(';')[0]?.trim().toLowerCase() ?? '';
  if (types.includes(type)) return type;
  throw new AppError(
    'wrong-content-type',
    `The body has to be ${types.join(' or ')}, and its content type has to say so.`,
  );
}

async function readLimited(request: Request, maxBytes: number): Promise<Uint8Array> {
  const tooLarge = new AppError(
    'body-too-large',
    `The body is larger than ${maxBytes} bytes, the most that is taken here. Send less at a time.`,
  );
  if (Number(request.headers.get('content-length') ?? 0) > maxBytes) throw tooLarge;
  const chunks: Uint8Array[] = [];
  let length = 0;
  for await (const chunk of request.body ?? []) {
    length += chunk.byteLength;
    if (length > maxBytes) throw tooLarge;
    chunks.push(chunk);
  }
  return Buffer.concat(chunks, length);
}
