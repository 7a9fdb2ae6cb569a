import { describe, expect, it } from 'vitest';
import { arcPath, dotPoints, hexagonPoints, pointAt } from './bolt-geometry';

const centre = { x: 0, y: 0 };

describe('bolt geometry', () => {
  it('counts angles clockwise from the top', () => {
    expect(pointAt(centre, 10, 0)).toEqual({ x: 0, y: -10 });
    expect(pointAt(centre, 10, 90)).toEqual({ x: 10, y: -0 });
    expect(pointAt(centre, 10, 180)).toEqual({ x: 0, y: 10 });
  });

  it('draws six corners', () => {
    expect(hexagonPoints(centre, 10).split(' ')).toHaveLength(6);
  });

  it('turns a release the other way', () => {
    expect(arcPath(centre, 10, 90)).toBe('M 0 -10 A 10 10 0 0 1 10 0');
    expect(arcPath(centre, 10, -90)).toBe('M 0 -10 A 10 10 0 0 0 -10 0');
  });

  it('takes the long way round beyond half a turn, and never closes into nothing', () => {
    expect(arcPath(centre, 10, 270)).toContain('0 1 1');
    expect(arcPath(centre, 10, 360)).not.toMatch(/ 0 -10$/);
  });

  it.each([1, 2, 3, 4, 6])('keeps %i dots apart and inside the head', (count) => {
    const points = dotPoints(centre, 20, count);
    for (const point of points) expect(Math.hypot(point.x, point.y)).toBeLessThan(20 * 0.6);
    const gaps = points.flatMap((a, i) => points.slice(i + 1).map((b) => Math.hypot(a.x - b.x, a.y - b.y)));
    expect(Math.min(...gaps, Infinity)).toBeGreaterThan(20 * 0.25);
  });
});
