import { describe, expect, it } from 'vitest';
import { sha256OfBytes } from './hashing';
import { boundedSize, preparePhoto, roomForPhotos, type Darkroom } from './photo';

/** Pixels are for a real browser; here only what is asked of it counts. */
function darkroom(width: number, height: number, asked: string[] = []): Darkroom {
  return {
    develop: async () => ({ width, height, close: () => asked.push('closed') }),
    print: async (_picture, printedWidth, printedHeight) => {
      asked.push(`${printedWidth}×${printedHeight}`);
      return new Blob(['jpeg bytes'], { type: 'image/jpeg' });
    },
  };
}

describe('a photograph', () => {
  it('is bounded to its longest side and keeps its shape', () => {
    expect(boundedSize(4000, 3000, 2048)).toEqual({ width: 2048, height: 1536 });
    expect(boundedSize(3000, 4000, 2048)).toEqual({ width: 1536, height: 2048 });
    expect(boundedSize(9000, 2, 2048)).toEqual({ width: 2048, height: 1 });
  });

  it('is never made larger', () => {
    expect(boundedSize(640, 480, 2048)).toEqual({ width: 640, height: 480 });
  });

  it('is hashed over the bytes that are kept, not over the file', async () => {
    const asked: string[] = [];
    const photo = await preparePhoto(new Blob(['camera file']), darkroom(4096, 2048, asked));
    expect(photo).toMatchObject({ type: 'image/jpeg', width: 2048, height: 1024 });
    expect(photo.hash).toBe(sha256OfBytes(new TextEncoder().encode('jpeg bytes')));
    expect(asked).toEqual(['2048×1024', 'closed']);
  });

  it('that cannot be read says what to do', async () => {
    const broken: Darkroom = { ...darkroom(1, 1), develop: () => Promise.reject(new Error('no picture')) };
    await expect(preparePhoto(new Blob(['text']), broken)).rejects.toThrow('take it again');
  });
});

describe('room', () => {
  it('is reserved for records before photographs', async () => {
    const nearlyFull = { estimate: async () => ({ quota: 1_000_000_000, usage: 970_000_000 }) };
    expect(await roomForPhotos(nearlyFull)).toMatchObject({
      low: true,
      words: expect.stringContaining('full'),
    });
    const ample = { estimate: async () => ({ quota: 1_000_000_000, usage: 10 }) };
    expect(await roomForPhotos(ample)).toEqual({ low: false });
  });

  it('is not called low where the browser does not tell', async () => {
    expect(await roomForPhotos({ estimate: async () => ({}) })).toEqual({ low: false });
  });
});
