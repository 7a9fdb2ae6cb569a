/*
 * A photograph is drawn anew before it is hashed: upright, no larger than needed, and without whatever the
 * camera wrote into the file. From then on its bytes are what the hash and the signature stand for.
 */
import { sha256OfBytes } from './hashing';
import { browserStorage } from './persistence';

const LONGEST_SIDE = 2048;
const JPEG_QUALITY = 0.85;
const MB = 1024 * 1024;
/** Room that records must have before a photograph may take any. */
const RESERVED_BYTES = 50 * MB;

export interface PreparedPhoto {
  hash: string;
  bytes: ArrayBuffer;
  type: 'image/jpeg';
  width: number;
  height: number;
}

/** What a browser does with pixels; a test stands in for it. */
export interface Darkroom {
  /** The picture, turned as its file says. */
  develop(file: Blob): Promise<{ width: number; height: number; close(): void }>;
  /** The picture at this size, as JPEG bytes. */
  print(picture: { width: number; height: number }, width: number, height: number): Promise<Blob>;
}

/** The file can't be read as a picture. */
export class PhotoError extends Error {
  readonly code = 'unreadable-photo';
  constructor(cause: unknown) {
    super('This picture can’t be read. Nothing was recorded: take it again, or choose another file.', {
      cause,
    });
    this.name = 'PhotoError';
  }
}

/** Turns, bounds, strips and hashes a picture; throws `PhotoError` if it is none. */
export async function preparePhoto(file: Blob, darkroom: Darkroom = browserDarkroom): Promise<PreparedPhoto> {
  let bytes: ArrayBuffer;
  let size: { width: number; height: number };
  try {
    const picture = await darkroom.develop(file);
    size = boundedSize(picture.width, picture.height, LONGEST_SIDE);
    const printed = await darkroom.print(picture, size.width, size.height);
    picture.close();
    bytes = await printed.arrayBuffer();
  } catch (error) {
    throw new PhotoError(error);
  }
  return { hash: sha256OfBytes(new Uint8Array(bytes)), bytes, type: 'image/jpeg', ...size };
}

/** The size with the same shape whose longest side is no longer than asked; never larger than it was. */
export function boundedSize(
  width: number,
  height: number,
  longest: number,
): { width: number; height: number } {
  const scale = Math.min(1, longest / Math.max(width, height));
  return { width: Math.max(1, Math.round(width * scale)), height: Math.max(1, Math.round(height * scale)) };
}

const browserDarkroom: Darkroom = {
  develop: (file) => createImageBitmap(file, { imageOrientation: 'from-image' }),
  async print(picture, width, height) {
    const canvas = document.createElement('canvas');
    canvas.width = width;
    canvas.height = height;
    const context = canvas.getContext('2d');
    if (!context) throw new Error('This browser gives no canvas.');
    context.drawImage(picture as ImageBitmap, 0, 0, width, height);
    return new Promise((resolve, reject) => {
      canvas.toBlob(
        (blob) => (blob ? resolve(blob) : reject(new Error('The canvas gave no picture.'))),
        'image/jpeg',
        JPEG_QUALITY,
      );
    });
  },
};

/** Is there room for photographs beside the records? In words when not; `low` is false where nobody can tell. */
export async function roomForPhotos(
  storage: Pick<StorageManager, 'estimate'> | undefined = browserStorage(),
): Promise<{ low: boolean; words?: string | undefined }> {
  const { quota, usage } = (await storage?.estimate()) ?? {};
  if (quota === undefined || usage === undefined || quota - usage >= RESERVED_BYTES) return { low: false };
  return {
    low: true,
    words:
      'This tablet is nearly full. What room there is left is kept for records: connect to the network so that photographs can be sent, or free some space.',
  };
}
