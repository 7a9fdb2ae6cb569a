import { readFileSync } from 'node:fs';
import { beforeEach, describe, expect, it } from 'vitest';
import { chooseLook, readLook } from './look-settings';

const themeScript = readFileSync('public/theme.js', 'utf8');
const place = () => ({ storage: localStorage, root: document.documentElement });

beforeEach(() => {
  localStorage.clear();
  for (const key of ['theme', 'text', 'hand', 'motion', 'default-theme'])
    document.documentElement.removeAttribute(`data-${key}`);
});

describe('the look of this device', () => {
  it('begins with what the system wishes', () => {
    expect(readLook(localStorage)).toEqual({
      theme: 'system',
      text: 'normal',
      hand: 'right',
      motion: 'system',
    });
  });

  it('shows a choice at once and keeps it', () => {
    chooseLook('theme', 'graphite', place());
    expect(document.documentElement).toHaveAttribute('data-theme', 'graphite');
    expect(readLook(localStorage).theme).toBe('graphite');
  });

  it('leaves no mark when the usual is chosen again', () => {
    chooseLook('hand', 'left', place());
    chooseLook('hand', 'right', place());
    expect(document.documentElement).not.toHaveAttribute('data-hand');
    expect(localStorage).toHaveLength(0);
  });

  it('goes back to the theme that the page has for those who never chose', () => {
    document.documentElement.setAttribute('data-default-theme', 'graphite');
    chooseLook('theme', 'paper', place());
    chooseLook('theme', 'system', place());
    expect(document.documentElement).toHaveAttribute('data-theme', 'graphite');
  });

  it('pays no heed to a value that it does not know', () => {
    localStorage.setItem('witnessmark.text', 'gigantic');
    expect(readLook(localStorage).text).toBe('normal');
  });

  it('is what the script before the first paint sets', () => {
    chooseLook('theme', 'paper', place());
    chooseLook('text', 'largest', place());
    chooseLook('hand', 'left', place());
    chooseLook('motion', 'reduced', place());
    const chosen = Object.assign({}, document.documentElement.dataset);
    for (const key of Object.keys(chosen)) document.documentElement.removeAttribute(`data-${key}`);
    window.eval(themeScript);
    expect(Object.assign({}, document.documentElement.dataset)).toEqual(chosen);
  });
});
