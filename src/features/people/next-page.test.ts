import { expect, it } from 'vitest';
import { nextPage } from './next-page';

it('goes back to the page that asked for a sign-in', () => {
  expect(nextPage('/jobs/7?phase=2#step')).toBe('/jobs/7?phase=2#step');
});

it('never leaves this site', () => {
  const elsewhere = [
    'https://evil.example',
    '//evil.example',
    '/\\evil.example',
    '\\/evil.example',
    'javascript:alert(1)',
    '',
    '/\t/evil.example',
  ];
  for (const asked of elsewhere) expect(nextPage(asked), asked).toBe('/');
  expect(nextPage(null)).toBe('/');
});
