import { createHash, createHmac } from 'node:crypto';
import { hmac } from '@noble/hashes/hmac.js';
import { sha256 as nobleSha256 } from '@noble/hashes/sha2.js';
import { bytesToHex } from '@noble/hashes/utils.js';
import canonicalize from 'canonicalize';
import { describe, expect, it } from 'vitest';
import { bytesOf, canonicalJson } from '@/domain/canonical';
import { identityCommitment } from '@/domain/trail';

// RFC 8785: github cyberphone/json-canonicalization, testdata/ at commit 19d51d7
const DOCUMENTS = [
  {
    name: 'arrays.json',
    json: '[\n  56,\n  {\n    "d": true,\n    "10": null,\n    "1": [ ]\n  }\n]\n',
    canonical: '[56,{"1":[],"10":null,"d":true}]',
    sha256: '099601b171cafed97c333f8878d68e7f8c8f795412adb34b2fdcf0e7c7beac42',
  },
  {
    name: 'french.json',
    json: '{\n  "peach": "This sorting order",\n  "p\u00e9ch\u00e9": "is wrong according to French",\n  "p\u00eache": "but canonicalization MUST",\n  "sin":   "ignore locale"\n}\n',
    canonical:
      '{"peach":"This sorting order","p\u00e9ch\u00e9":"is wrong according to French","p\u00eache":"but canonicalization MUST","sin":"ignore locale"}',
    sha256: 'd99d0ebdcb0033cb858cfa830ae46bc0fb3309413b271f1da828c89901a27ed5',
  },
  {
    name: 'values.json',
    json: '{\n  "numbers": [333333333.33333329, 1E30, 4.50, 2e-3, 0.000000000000000000000000001],\n  "string": "\\u20ac$\\u000F\\u000aA\'\\u0042\\u0022\\u005c\\\\\\"\\/",\n  "literals": [null, true, false]\n}',
    canonical:
      '{"literals":[null,true,false],"numbers":[333333333.3333333,1e+30,4.5,0.002,1e-27],"string":"\u20ac$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}',
    sha256: '2d5e01a318d0f0879ab568c4be289c8b1f64ef8921a53c6277d5e069978baacb',
  },
  {
    name: 'weird.json',
    json: '{\n  "\\u20ac": "Euro Sign",\n  "\\r": "Carriage Return",\n  "\\u000a": "Newline",\n  "1": "One",\n  "\\u0080": "Control\\u007f",\n  "\\ud83d\\ude02": "Smiley",\n  "\\u00f6": "Latin Small Letter O With Diaeresis",\n  "\\ufb33": "Hebrew Letter Dalet With Dagesh",\n  "</script>": "Browser Challenge"\n}\n',
    canonical:
      '{"\\n":"Newline","\\r":"Carriage Return","1":"One","</script>":"Browser Challenge","\u0080":"Control\u007f","\u00f6":"Latin Small Letter O With Diaeresis","\u20ac":"Euro Sign","\ud83d\ude02":"Smiley","\ufb33":"Hebrew Letter Dalet With Dagesh"}',
    sha256: '6af595a9aa80110b964b4de3f82a05fa6ae7423005019bacfa2620dddc4e94d1',
  },
];

describe('canonical JSON by RFC 8785', () => {
  it.each(DOCUMENTS)('writes testdata/$name byte for byte', ({ json, canonical, sha256 }) => {
    const text = canonicalize(JSON.parse(json));
    expect(text).toBe(canonical);
    expect(createHash('sha256').update(canonical).digest('hex')).toBe(sha256);
  });

  it.each(DOCUMENTS.filter(({ name }) => ['arrays.json', 'french.json'].includes(name)))(
    'writes testdata/$name the same by the function that the trail uses',
    ({ json, canonical }) => {
      expect(canonicalJson(JSON.parse(json))).toBe(canonical);
    },
  );

  // README.md of the same testdata: the numbers are given by their IEEE 754 bits
  it.each([
    ['4340000000000001', '9007199254740994'],
    ['4340000000000002', '9007199254740996'],
    ['444b1ae4d6e2ef50', '1e+21'],
    ['3eb0c6f7a0b5ed8d', '0.000001'],
    ['3eb0c6f7a0b5ed8c', '9.999999999999997e-7'],
    ['8000000000000000', '0'],
  ])('writes the number of the bits %s as %s', (bits, text) => {
    expect(canonicalize(Buffer.from(bits, 'hex').readDoubleBE())).toBe(text);
  });
});

// The browser hashes with a library, the server with Node; both must give the same.
const HASHES: [string, (bytes: Uint8Array) => string, (key: Uint8Array, message: Uint8Array) => string][] = [
  [
    '@noble/hashes',
    (bytes) => bytesToHex(nobleSha256(bytes)),
    (key, message) => bytesToHex(hmac(nobleSha256, key, message)),
  ],
  [
    'node:crypto',
    (bytes) => createHash('sha256').update(bytes).digest('hex'),
    (key, message) => createHmac('sha256', key).update(message).digest('hex'),
  ],
];

describe.each(HASHES)('SHA-256 and HMAC-SHA-256 by %s', (_, sha256, hmacSha256) => {
  // FIPS 180-4, NIST example values, from memory
  it.each([
    ['', 'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855'],
    ['abc', 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'],
    [
      'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ],
  ])('hashes "%s"', (text, expected) => {
    expect(sha256(bytesOf(text))).toBe(expected);
  });

  // RFC 4231: cases 1 and 2 as published; case 6 from memory
  it.each([
    [1, '0b'.repeat(20), 'Hi There', 'b0344c61d8db38535ca8afceaf0bf12b881dc200c9833da726e9376c2e32cff7'],
    [
      2,
      Buffer.from('Jefe').toString('hex'),
      'what do ya want for nothing?',
      '5bdcc146bf60754e6a042426089575c75a003f089d2739839dec58b964ec3843',
    ],
    [
      6,
      'aa'.repeat(131),
      'Test Using Larger Than Block-Size Key - Hash Key First',
      '60e431591ee0b67f0d8a26aacbf5b77f8e0bc6213728c5140546040f0ee37f54',
    ],
  ])('commits to a value under a salt as in RFC 4231 case %i', (_case, salt, value, expected) => {
    expect(identityCommitment({ salt, value }, hmacSha256)).toBe(expected);
  });
});
