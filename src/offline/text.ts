/**
 * A document as it may be hashed: strings in NFC and without lone surrogates, `undefined` left out. People
 * type what their keyboards send; what is signed has one form.
 */
export function cleanText(value: unknown): unknown {
  if (typeof value === 'string') return value.replace(/\p{Surrogate}/gu, '\uFFFD').normalize('NFC');
  if (Array.isArray(value)) return value.map(cleanText);
  if (typeof value !== 'object' || value === null) return value;
  const kept = Object.entries(value).filter(([, inner]) => inner !== undefined);
  return Object.fromEntries(kept.map(([key, inner]) => [key, cleanText(inner)]));
}
