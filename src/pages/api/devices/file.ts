import { endpoint } from '@/server/http';
import { SYNC_LIMIT_BYTES } from '@/server/sync-body';
import { bringInFile, tabletFileAnswer, tabletFileBody } from '@/server/tablet-file';

export const POST = endpoint(
  {
    method: 'POST',
    path: '/api/devices/file',
    summary:
      'Bring in what a tablet saved as a file, in parts no larger than a push; the same again does no harm',
    who: ['supervisor', 'owner'],
    body: tabletFileBody,
    answer: tabletFileAnswer,
    maxBytes: SYNC_LIMIT_BYTES,
  },
  async ({ app, actor, body }) => bringInFile(app, actor, body),
);
