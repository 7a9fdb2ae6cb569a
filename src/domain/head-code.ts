import type { SignedHead } from './trail-export';

/** A signed head as one line that can be printed, scanned, and compared letter by letter. */
export function headCode({ trail, seq, hash, at, key, signature }: SignedHead): string {
  return ['witnessmark-head', '1', trail, seq, hash, at, key, signature].join(' ');
}
