import sharp from 'sharp';

/** A picture like no other: the camera's place is taken by a plain ground of its own colour. */
export function picture(nth: number): Promise<Buffer> {
  const background = { r: (nth * 67) % 256, g: (nth * 29) % 256, b: 90 };
  return sharp({ create: { width: 640, height: 480, channels: 3, background } })
    .jpeg()
    .toBuffer();
}
