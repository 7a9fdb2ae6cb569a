import sharp from 'sharp';

/*
 * The demo's photographs are drawn: an engine from below in the light of a lamp, never twice the same. No
 * picture of anybody's car, plate or workshop is shipped.
 */

const WIDTH = 960;
const HEIGHT = 640;

/** Draws one photograph; the same seed gives the same bytes. */
export function drawPicture(seed: string): Promise<Buffer> {
  const chance = chanceFrom(seed);
  const caps = Array.from({ length: 6 }, (_cap, index) => capAt(index, chance)).join('');
  const [lampX, lampY] = [200 + chance() * 560, 120 + chance() * 300];
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="${WIDTH}" height="${HEIGHT}">
    <defs><radialGradient id="lamp" cx="${lampX}" cy="${lampY}" r="620" gradientUnits="userSpaceOnUse">
      <stop offset="0" stop-color="#fff4d6" stop-opacity=".55"/><stop offset="1" stop-color="#000" stop-opacity=".35"/>
    </radialGradient></defs>
    <rect width="${WIDTH}" height="${HEIGHT}" fill="#3a3b3d"/>
    <rect x="40" y="60" width="${WIDTH - 80}" height="${HEIGHT - 120}" rx="26" fill="#55575a" stroke="#232426" stroke-width="6"/>
    <rect x="60" y="292" width="${WIDTH - 120}" height="56" rx="20" fill="#83868a"/>
    ${caps}<rect width="${WIDTH}" height="${HEIGHT}" fill="url(#lamp)"/></svg>`;
  return sharp(Buffer.from(svg)).jpeg({ quality: 76 }).toBuffer();
}

function capAt(index: number, chance: () => number): string {
  const x = 90 + index * 136 + chance() * 6;
  const y = 210 + (index % 2) * 14 + chance() * 8;
  const shade = 120 + Math.round(chance() * 40);
  const bolts = [38, 178].map((offset) => boltAt(x + 52, y + offset, chance)).join('');
  return `<rect x="${x}" y="${y}" width="104" height="216" rx="18" fill="rgb(${shade},${shade + 2},${shade + 6})"
    stroke="#2c2d30" stroke-width="4"/>${bolts}`;
}

function boltAt(x: number, y: number, chance: () => number): string {
  const turn = Math.round(chance() * 60);
  const corners = Array.from({ length: 6 }, (_corner, side) => {
    const angle = ((side * 60 + turn) * Math.PI) / 180;
    return `${(x + 22 * Math.cos(angle)).toFixed(1)},${(y + 22 * Math.sin(angle)).toFixed(1)}`;
  }).join(' ');
  return `<circle cx="${x}" cy="${y}" r="30" fill="#6d7074"/><polygon points="${corners}" fill="#c9ccd0" stroke="#222" stroke-width="3"/>`;
}

/** Numbers from 0 to 1 that follow from a text. */
function chanceFrom(seed: string): () => number {
  let state = 2166136261;
  for (const letter of seed) state = Math.imul(state ^ (letter.codePointAt(0) ?? 0), 16777619) >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 4294967296;
  };
}
