import * as z from 'zod';
import { pin } from '@/server/fields';
import { endpoint } from '@/server/http';
import { checkPin } from '@/server/pins';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/pins/check',
    summary: 'Check your own PIN, for example when who is working changes; attempts are counted',
    who: 'session',
    body: z.strictObject({ pin }),
    answer: z.discriminatedUnion('result', [
      z.strictObject({ result: z.literal('right') }),
      z.strictObject({ result: z.literal('wrong'), left: z.int(), lockedUntil: z.string().optional() }),
      z.strictObject({ result: z.literal('locked'), until: z.string() }),
      z.strictObject({ result: z.literal('none set') }),
    ]),
  },
  async ({ app, actor, body }) => checkPin(app, actor.personId, body.pin, { purpose: 'checking it' }),
);
