import type { Gate } from '@/domain/plan';

const GATES: Record<Gate, string> = {
  close: 'closing up',
  start: 'the first start',
  move: 'lowering or moving the vehicle',
  handover: 'the handover',
};

/** What an open item bars, in words that follow its sentence; nothing where it bars nothing. */
export function barsWords(bars: readonly Gate[]): string {
  return bars.length === 0 ? '' : `; until then it bars ${gatesWords(bars)}`;
}

/** Gates in words, as "the first start and the handover". */
export function gatesWords(bars: readonly Gate[]): string {
  const names = bars.map((gate) => GATES[gate]);
  const last = names.at(-1) ?? '';
  return names.length < 2 ? last : `${names.slice(0, -1).join(', ')} and ${last}`;
}
