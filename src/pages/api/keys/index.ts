import * as z from 'zod';
import { keyAnswer } from '@/server/answers';
import { enrolKey, listKeys } from '@/server/author-keys';
import { cursor } from '@/server/fields';
import { endpoint } from '@/server/http';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/keys',
    summary: 'Your author keys, or everybody’s if you may see all records, a page at a time',
    who: 'session',
    query: z.strictObject({ cursor }),
    answer: z.strictObject({ keys: z.array(keyAnswer), cursor: z.string().optional() }),
  },
  async ({ app, actor, query }) => listKeys(app.db, actor, query),
);

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/keys',
    summary:
      'Enrol the key with which you sign your entries on this tablet; again with the same key does no harm',
    who: 'session and tablet',
    /** `again`: the tablet had enrolled it before, and a restored server has forgotten it. */
    body: z.strictObject({ publicKey: z.string().max(100), again: z.literal(true).optional() }),
    /** `workshop`: the number of the workshop entry that enrolled it. */
    answer: z.strictObject({ id: z.string(), workshop: z.int() }),
    status: 201,
  },
  async ({ app, actor, device, body }) => {
    const key = await app.db.transaction().execute((trx) => enrolKey(trx, actor, device, body, app));
    return { id: key.id, workshop: key.workshopSeq };
  },
);
