import {
  DeleteObjectCommand,
  GetObjectCommand,
  HeadObjectCommand,
  PutObjectCommand,
  S3Client,
} from '@aws-sdk/client-s3';
import type { BucketSettings } from './settings';
import { requireKey, type Storage } from './storage';

/** Storage in a bucket of an object store that speaks S3; what is put is there when it returns. */
export function bucketStorage({ bucket, region, endpoint, keyId, secret }: BucketSettings): Storage {
  const client = new S3Client({
    region,
    credentials: { accessKeyId: keyId, secretAccessKey: secret },
    // Stores other than the first one want the bucket in the path, and know no checksum trailers.
    ...(endpoint === undefined ? {} : { endpoint, forcePathStyle: true }),
    requestChecksumCalculation: 'WHEN_REQUIRED',
    responseChecksumValidation: 'WHEN_REQUIRED',
  });
  const named = (key: string) => ({ Bucket: bucket, Key: requireKey(key) });
  return {
    async put(key, bytes) {
      await client.send(
        new PutObjectCommand({ ...named(key), Body: bytes, ContentLength: bytes.byteLength }),
      );
    },
    async find(key) {
      const found = await orNothing(() => client.send(new GetObjectCommand(named(key))));
      return found?.Body?.transformToByteArray();
    },
    async has(key) {
      return (await orNothing(() => client.send(new HeadObjectCommand(named(key))))) !== undefined;
    },
    async remove(key) {
      await client.send(new DeleteObjectCommand(named(key)));
    },
  };
}

/** What is not there is no error; whatever else the store says is. */
async function orNothing<T>(ask: () => Promise<T>): Promise<T | undefined> {
  try {
    return await ask();
  } catch (error) {
    if (error instanceof Error && (error.name === 'NoSuchKey' || error.name === 'NotFound')) return undefined;
    throw error;
  }
}
