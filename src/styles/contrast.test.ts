import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

const tokens = readFileSync(new URL('./tokens.css', import.meta.url), 'utf8');

/** The colours that a rule of the tokens file sets, read from the text between its braces. */
function coloursOf(selector: string): Record<string, string> {
  const start = tokens.indexOf(`${selector} {`);
  expect(start, `${selector} is in tokens.css`).toBeGreaterThanOrEqual(0);
  const block = tokens.slice(start, tokens.indexOf('}', start));
  return Object.fromEntries(
    [...block.matchAll(/--wm-([\w-]+): (#[0-9a-f]{6});/g)].map(([, name, hex]) => [name!, hex!]),
  );
}

/** Contrast ratio of two colours as WCAG 2.2 defines it, from their relative luminances (sRGB). */
function contrast(a: string, b: string): number {
  const [darker, lighter] = [luminance(a), luminance(b)].sort((x, y) => x - y);
  return (lighter! + 0.05) / (darker! + 0.05);
}

function luminance(hex: string): number {
  const [red, green, blue] = [1, 3, 5].map((at) => {
    const share = parseInt(hex.slice(at, at + 2), 16) / 255;
    return share <= 0.04045 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * red! + 0.7152 * green! + 0.0722 * blue!;
}

const themes = { paper: coloursOf("[data-theme='paper']"), graphite: coloursOf("[data-theme='graphite']") };
const grounds = ['ground', 'sheet', 'shade'];

describe.each(Object.entries(themes))('the %s theme', (_, colours) => {
  it.each(
    ['text', 'soft', 'ink', 'inside', 'unsure', 'outside'].flatMap((name) =>
      grounds.map((ground) => [name, ground]),
    ),
  )('has %s on %s at 7:1 or more', (name, ground) => {
    expect(contrast(colours[name]!, colours[ground]!)).toBeGreaterThanOrEqual(7);
  });

  it.each(grounds)('has the rule of a target on %s at 3:1 or more', (ground) => {
    expect(contrast(colours.strong!, colours[ground]!)).toBeGreaterThanOrEqual(3);
  });

  it.each(grounds)('shows the paint mark on %s by its fill or its edge at 3:1 or more', (ground) => {
    const best = Math.max(
      ...['marker', 'marker-edge'].map((name) => contrast(colours[name]!, colours[ground]!)),
    );
    expect(best).toBeGreaterThanOrEqual(3);
  });
});

describe('the tokens', () => {
  it('know black on white as 21:1', () => {
    expect(contrast('#000000', '#ffffff')).toBeCloseTo(21);
  });

  it("follow the system's dark wish with the very colours of graphite", () => {
    expect(coloursOf(':root:not([data-theme])')).toEqual(themes.graphite);
  });

  it('have the same names in both themes', () => {
    expect(Object.keys(themes.paper)).toEqual(Object.keys(themes.graphite));
  });

  it.each(['danger', 'warning', 'caution', 'notice'])(
    'have the signal word %s on its panel at 7:1 or more',
    (level) => {
      const panels = Object.fromEntries(
        [...tokens.matchAll(/--wm-([\w-]+): (#[0-9a-f]{6});/g)].map(([, name, hex]) => [name!, hex!]),
      );
      expect(contrast(panels[level]!, panels[`${level}-on`]!)).toBeGreaterThanOrEqual(7);
    },
  );
});
