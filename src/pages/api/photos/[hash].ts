import * as z from 'zod';
import { AppError } from '@/server/errors';
import { endpoint } from '@/server/http';
import { getPhoto, PHOTO_LIMIT_BYTES, PHOTO_TYPES, storePhoto } from '@/server/photos';

const HASH = /^[0-9a-f]{64}$/;

export const PUT = endpoint(
  {
    method: 'PUT',
    path: '/api/photos/{hash}',
    summary: 'Send the bytes of a photograph, named by their SHA-256; the same again does no harm',
    who: 'session or tablet',
    body: { raw: true, types: PHOTO_TYPES, maxBytes: PHOTO_LIMIT_BYTES },
    answer: z.strictObject({ hash: z.string() }),
    status: 201,
    statusAgain: 200,
  },
  async ({ app, device, params, body }) => {
    const hash = requireHash(params.hash);
    const { isNew } = await storePhoto(app, { hash, ...body }, device);
    return Response.json({ hash }, { status: isNew ? 201 : 200, headers: { 'cache-control': 'no-store' } });
  },
);

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/photos/{hash}',
    summary: 'The photograph, or a small copy of it',
    who: 'session or tablet',
    query: z.strictObject({ size: z.enum(['full', 'thumb']).default('full') }),
    answer: z.unknown(),
    answerTypes: PHOTO_TYPES,
  },
  async ({ app, asker, params, query }) => {
    const { bytes, type } = await getPhoto(app, asker, requireHash(params.hash), query.size);
    return new Response(new Uint8Array(bytes), {
      headers: {
        'content-type': type,
        'content-length': String(bytes.byteLength),
        // The address names the bytes, so they never change; no shared cache may keep them.
        'cache-control': 'private, max-age=31536000, immutable',
        // Somebody else at this browser may see less.
        vary: 'cookie, authorization',
        'content-disposition': 'inline',
        'x-content-type-options': 'nosniff',
      },
    });
  },
);

function requireHash(hash: string | undefined): string {
  if (hash !== undefined && HASH.test(hash)) return hash;
  throw new AppError(
    'invalid-field',
    'A photograph is named by the SHA-256 of its bytes, in lower-case hex.',
    {
      field: 'hash',
    },
  );
}
