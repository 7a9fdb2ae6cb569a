import type { Entry } from '@/domain/entry';

const SUPERVISOR = 'It stays here, whole. Tell the supervisor, and don’t clear this browser.';

const NEXT: Record<string, string> = {
  'pin-wrong': 'Go to the hold point and sign again.',
  'pin-missing': 'Go to the hold point and sign again.',
  'pin-unreadable': 'Go to the hold point and sign again.',
  'pin-none-set': 'Set a PIN at a desk, then go to the hold point and sign again.',
  'evidence-changed': 'Look at the evidence as it is now, then sign again.',
  overtaken: 'Look at it as it stands now, and decide again.',
  'plan-unknown': SUPERVISOR,
  'id-taken': SUPERVISOR,
  malformed: SUPERVISOR,
  'office-kind': SUPERVISOR,
  'key-unknown': SUPERVISOR,
  'key-foreign': SUPERVISOR,
  'key-revoked': SUPERVISOR,
  'signature-wrong': SUPERVISOR,
};

/** What the author of a refused record does next, in words. */
export function afterRefusal({ code, entry }: { code: string; entry: Pick<Entry, 'kind'> }): string {
  if (entry.kind === 'took-over' && code.startsWith('pin-'))
    return 'Take the job over again, with the right PIN.';
  return NEXT[code] ?? 'If it was really done, raise a deviation and say so; if unsure, ask the supervisor.';
}
