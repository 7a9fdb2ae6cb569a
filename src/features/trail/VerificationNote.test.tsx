import { render, screen } from '@testing-library/react';
import { describe, expect, it, vi } from 'vitest';
import { buildTrailBody, fingerprint, seal } from '../../../tests/support/sealed-trail';
import { readTrail } from './read-trail';
import { VerificationNote } from './VerificationNote';

function show(text: string) {
  render(
    <VerificationNote zone="Europe/Lisbon" job="0147" trail={readTrail(new TextEncoder().encode(text))} />,
  );
}

describe('what the reader’s own browser says of a trail', () => {
  it('is that it is unbroken, how often a head was signed, and with which key', async () => {
    show(seal(buildTrailBody(20)));
    expect(
      await screen.findByText('Unbroken from entry 1 to 20 · signed 2 times by the workshop’s key'),
    ).toBeVisible();
    expect(screen.getByText(/^18 authors’ signatures hold\./)).toBeVisible();
    expect(screen.getByText(fingerprint)).toBeInTheDocument();
  });

  it('is where it broke and why, even if one letter was changed', async () => {
    show(seal(buildTrailBody(20)).replace('thread laid', 'thread lost'));
    expect(await screen.findByText(/^Broken at entry 2/)).toBeVisible();
    expect(screen.queryByText(/Unbroken/)).not.toBeInTheDocument();
  });

  it('is that it can’t check here, where the browser lacks the cryptography', async () => {
    vi.spyOn(crypto.subtle, 'importKey').mockRejectedValue(new DOMException('no', 'NotSupportedError'));
    show(seal(buildTrailBody(4)));
    expect(await screen.findByText(/can’t check the workshop’s signatures/)).toBeVisible();
    expect(screen.queryByText(/Unbroken/)).not.toBeInTheDocument();
  });

  it('comes with the newest signed head as a code to scan and a line to keep', () => {
    const body = buildTrailBody(4);
    show(seal(body));
    const { hash, signature } = body.heads.at(-1)!;
    expect(screen.getByRole('img', { name: 'Signed head at entry 4' })).toBeInTheDocument();
    expect(
      screen.getByText(new RegExp(`^witnessmark-head 1 .* 4 ${hash} .* ${signature}$`)),
    ).toBeInTheDocument();
  });

  it('comes with the way to check it without the workshop', () => {
    show(seal(buildTrailBody(4)));
    expect(screen.getByText('Save the trail as a file')).toHaveAttribute('href', '/api/jobs/0147/export');
  });
});
