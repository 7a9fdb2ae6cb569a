import * as z from 'zod';
import { cursor } from '@/server/fields';
import { endpoint } from '@/server/http';
import { listMail } from '@/server/mail-queue';

export const GET = endpoint(
  {
    method: 'GET',
    path: '/api/mail',
    summary: 'The letters that left or are to leave, the newest first, a page at a time',
    who: ['owner'],
    query: z.strictObject({ cursor }),
    answer: z.strictObject({
      mail: z.array(
        z.strictObject({
          id: z.string(),
          purpose: z.enum(['head to witness', 'heads of the day', 'handover to customer', 'trial']),
          job: z.string().nullable(),
          address: z.string(),
          subject: z.string(),
          body: z.string(),
          madeAt: z.string(),
          state: z.enum(['waiting', 'sent', 'failed']),
          sentAt: z.string().nullable(),
          /** `here` where no mail service is set and the letter stayed on this machine. */
          via: z.enum(['service', 'here']).nullable(),
          trouble: z.string().nullable(),
        }),
      ),
      cursor: z.string().optional(),
    }),
  },
  async ({ app, actor, query }) => listMail(app.db, actor, query),
);
