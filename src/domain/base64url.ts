const ALPHABET = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789-_';

/** Bytes as unpadded base64url (RFC 4648 section 5). */
export function toBase64url(bytes: Uint8Array): string {
  let text = '';
  for (let i = 0; i < bytes.length; i += 3) {
    const [a = 0, b, c] = bytes.subarray(i, i + 3);
    const bits = (a << 16) | ((b ?? 0) << 8) | (c ?? 0);
    const characters = b === undefined ? 2 : c === undefined ? 3 : 4;
    for (let n = 0; n < characters; n += 1) text += ALPHABET.charAt((bits >> (18 - 6 * n)) & 63);
  }
  return text;
}

/** The bytes of an unpadded base64url text. Each bytes have one text: spare bits that are not zero are refused. */
export function fromBase64url(text: string): Uint8Array<ArrayBuffer> {
  const bytes = new Uint8Array(Math.floor((text.length * 3) / 4));
  let bits = 0;
  let held = 0;
  let length = 0;
  for (const character of text) {
    const value = ALPHABET.indexOf(character);
    if (value === -1) throw new RangeError('The text has a character that base64url does not know.');
    bits = ((bits << 6) | value) & 0xfff;
    held += 6;
    if (held >= 8) {
      held -= 8;
      bytes[length] = (bits >> held) & 0xff;
      length += 1;
    }
  }
  if (held === 6 || (bits & ((1 << held) - 1)) !== 0)
    throw new RangeError('The base64url text is cut short or altered.');
  return bytes;
}
