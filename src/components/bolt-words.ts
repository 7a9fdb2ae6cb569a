import type { BoltState } from './BoltShape';

/** What a bolt drawing says to someone who hears it: "Bolt 4B, cycle 2 of 3, 110° asked". */
export function boltWords(bolt: {
  name: string;
  state: BoltState;
  cycles: number;
  cyclesDone: number;
  targetAngle?: number | undefined;
  turn?: 'tighten' | 'release' | undefined;
  turnedAngle?: number | undefined;
}): string {
  const words = [`Bolt ${bolt.name}`, stateWords(bolt)];
  if (bolt.targetAngle !== undefined && bolt.targetAngle > 0) words.push(`${bolt.targetAngle}° asked`);
  if (bolt.turn === 'release' || (bolt.targetAngle ?? 0) < 0) words.push('release asked');
  if (bolt.turn === 'tighten' && bolt.targetAngle === undefined) words.push('tightening asked');
  if (bolt.turnedAngle !== undefined && bolt.turnedAngle !== 0) words.push(`${bolt.turnedAngle}° turned`);
  return words.join(', ');
}

function stateWords({
  state,
  cycles,
  cyclesDone,
}: {
  state: BoltState;
  cycles: number;
  cyclesDone: number;
}): string {
  const done = cycles > 0 ? `, ${cyclesDone} of ${cycles} cycles done` : '';
  switch (state) {
    case 'waiting':
      return `waiting${done}`;
    case 'running':
      return cycles > 0 ? `cycle ${Math.min(cyclesDone + 1, cycles)} of ${cycles}` : 'in hand';
    case 'marked':
      return `marked${done}`;
    case 'condemned':
      return 'condemned';
  }
}
