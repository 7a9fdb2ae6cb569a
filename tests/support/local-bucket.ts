import { createHash, createHmac, timingSafeEqual } from 'node:crypto';
import { once } from 'node:events';
import { createServer, type IncomingMessage } from 'node:http';
import type { AddressInfo } from 'node:net';
import type { BucketSettings } from '@/server/settings';

/*
 * A strict fake of an object store: it takes and gives single objects of one bucket, and answers nothing whose
 * signature (AWS Signature Version 4, as its public description has it) does not hold.
 */

export interface LocalBucket extends BucketSettings {
  objects: Map<string, Buffer>;
  stop(): Promise<void>;
}

interface Answer {
  status: number;
  body?: Buffer | string;
}

/** Starts the fake on a free port of this machine. */
export async function startLocalBucket(): Promise<LocalBucket> {
  const settings = {
    bucket: 'witnessmark-test',
    region: 'eu-test-1',
    keyId: 'TESTKEYID',
    secret: 'test secret',
  };
  const objects = new Map<string, Buffer>();
  const server = createServer((request, response) => {
    answer(request).then(
      ({ status, body = '' }) =>
        response.writeHead(status, { 'content-length': Buffer.byteLength(body) }).end(body),
      (error: unknown) => response.writeHead(500).end(String(error)),
    );
  });

  async function answer(request: IncomingMessage): Promise<Answer> {
    const chunks: Buffer[] = [];
    for await (const chunk of request as AsyncIterable<Buffer>) chunks.push(chunk);
    const body = Buffer.concat(chunks);
    if (!isSigned(request, body, settings)) return refusal(403, 'SignatureDoesNotMatch');
    const [, bucket, ...rest] = new URL(request.url ?? '', 'http://localhost').pathname.split('/');
    const key = rest.join('/');
    if (bucket !== settings.bucket || key === '') return refusal(404, 'NoSuchBucket');
    const held = objects.get(key);
    switch (request.method) {
      case 'PUT':
        objects.set(key, body);
        return { status: 200 };
      case 'GET':
        return held === undefined ? refusal(404, 'NoSuchKey') : { status: 200, body: held };
      case 'HEAD':
        return { status: held === undefined ? 404 : 200 };
      case 'DELETE':
        objects.delete(key);
        return { status: 204 };
      default:
        return refusal(405, 'MethodNotAllowed');
    }
  }

  server.listen(0, '127.0.0.1');
  await once(server, 'listening');
  return {
    ...settings,
    objects,
    endpoint: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    stop: async () => {
      const closed = once(server, 'close');
      server.close();
      server.closeAllConnections();
      await closed;
    },
  };
}

function refusal(status: number, code: string): Answer {
  return { status, body: `<?xml version="1.0"?><Error><Code>${code}</Code></Error>` };
}

function isSigned(
  request: IncomingMessage,
  body: Buffer,
  { region, keyId, secret }: Pick<BucketSettings, 'region' | 'keyId' | 'secret'>,
): boolean {
  const wanted =
    /^AWS4-HMAC-SHA256 Credential=([^/]+)\/(\d{8})\/([^/]+)\/s3\/aws4_request, SignedHeaders=([^,]+), Signature=([0-9a-f]{64})$/.exec(
      request.headers.authorization ?? '',
    );
  const claimed = String(request.headers['x-amz-content-sha256']);
  if (wanted === null || (claimed !== 'UNSIGNED-PAYLOAD' && claimed !== sha256(body))) return false;
  const [, id, day = '', inRegion = '', names = '', signature = ''] = wanted;
  if (id !== keyId || inRegion !== region) return false;
  const url = new URL(request.url ?? '', 'http://localhost');
  url.searchParams.sort();
  const headers = names.split(';').map((name) => `${name}:${String(request.headers[name]).trim()}\n`);
  const canonical = [
    request.method,
    url.pathname,
    url.search.slice(1),
    headers.join(''),
    names,
    claimed,
  ].join('\n');
  const scope = `${day}/${inRegion}/s3/aws4_request`;
  const toSign = ['AWS4-HMAC-SHA256', String(request.headers['x-amz-date']), scope, sha256(canonical)].join(
    '\n',
  );
  const key = [day, inRegion, 's3', 'aws4_request'].reduce<string | Buffer>(
    (from, part) => createHmac('sha256', from).update(part).digest(),
    `AWS4${secret}`,
  );
  const holds = createHmac('sha256', key).update(toSign).digest();
  return timingSafeEqual(holds, Buffer.from(signature, 'hex'));
}

function sha256(content: Buffer | string): string {
  return createHash('sha256').update(content).digest('hex');
}
