/** "Hold point: caps marked" is "caps marked" where the words before it speak of a signature. */
export function holdPointName(title: string): string {
  return title.replace(/^Hold point: /, '');
}
