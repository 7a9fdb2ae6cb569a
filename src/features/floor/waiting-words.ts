const NEXT: Record<string, string> = {
  'photograph-missing': 'It goes in by itself once the photograph is there.',
  'evidence-missing':
    'Bring the other tablet to the network. If it is lost, a supervisor declares it lost at a desk.',
  'earlier-missing':
    'It goes in by itself after that one. If that never comes, the office can declare this tablet lost and bring in its file.',
  'key-lost': 'It goes in by itself once its author has signed in on that tablet again.',
  'person-lost': 'Tell the owner. This tablet’s file, saved under the records on it, keeps what is here.',
  'job-lost': 'Tell the owner. This tablet’s file, saved under the records on it, keeps what is here.',
  'workshop-lost': 'Tell the owner. It goes in by itself once that is put right.',
  'pin-locked': 'It goes in by itself when the PIN is free again.',
  'server-older': 'It goes in by itself once the server is updated. Tell the owner.',
  'job-unknown': 'It is sent again by itself. Tell the owner if it stays so.',
};

/** What to do about a record that waits at the server, in words. */
export function afterWaiting({ code }: { code?: string | undefined }): string {
  return NEXT[code ?? ''] ?? 'It is sent again by itself. Tell the owner if it stays so.';
}
