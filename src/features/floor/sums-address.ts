/** Where the sums are, with what they begin from and the job that is gone back to. */
export function sumsAddress(from: {
  job?: string | null | undefined;
  sum?: 'adapter' | undefined;
  target?: string | undefined;
}): string {
  const given = Object.entries(from).filter((pair): pair is [string, string] => typeof pair[1] === 'string');
  const asked = new URLSearchParams(given).toString();
  return asked === '' ? '/floor/sums' : `/floor/sums#${asked}`;
}
