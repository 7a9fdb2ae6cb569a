import type { JobState, ToolInHand, Workshop } from '@/domain/job-state';
import { dayIn, dayWords } from '@/domain/time-words';
import type { CriticalClass } from '@/domain/plan';
import { fitness, type ToolUse } from '@/domain/tool';

export type Hand = 'torque' | 'angle' | 'measuring';

/** A tool of the workshop and whether it may be used for what comes next. */
export interface ToolOffer {
  tool: Workshop['tools'][number];
  isFit: boolean;
  reasons: string[];
}

/** What kind of tool each hand takes. */
export const HAND_KINDS: Record<Hand, string[]> = {
  torque: ['torque wrench'],
  angle: ['angle gauge'],
  measuring: ['micrometer', 'bore gauge', 'feeler gauge', 'pressure gauge', 'caliper', 'thermometer'],
};

/** What a pass asks of a tool. */
export function wantedFor(hand: Hand, criticalClass: CriticalClass, torqueNm?: number): ToolUse {
  const [kind = hand] = HAND_KINDS[hand];
  return { kind, criticalClass, ...(torqueNm === undefined ? {} : { value: torqueNm, unit: 'N·m' }) };
}

/** The tools of one kind: fit ones first, the others with what speaks against them. */
export function offerTools(workshop: Workshop, hand: Hand, use: ToolUse, now: number): ToolOffer[] {
  const on = dayIn(workshop.zone, new Date(now).toISOString());
  return workshop.tools
    .filter(({ kind, state }) => HAND_KINDS[hand].includes(kind) && state === 'in use')
    .map((tool) => {
      const { fit, reasons } = fitness(tool, hand === 'measuring' ? { ...use, kind: tool.kind } : use, on);
      return { tool, isFit: fit, reasons };
    })
    .sort((a, b) => Number(b.isFit) - Number(a.isFit));
}

/**
 * The tool in hand if it may be used for this, else the newest of those taken for this job that may: low and
 * high passes have a wrench each, and which one is asked once.
 */
export function fitToolInHand(
  state: JobState,
  workshop: Workshop,
  hand: Hand,
  use: ToolUse,
  now: number,
): ToolInHand | undefined {
  const held = state.tools[hand];
  const taken = state.toolsTaken.filter((tool) => tool.use === hand && tool.id !== held?.id);
  const fit = new Set(
    offerTools(workshop, hand, use, now).flatMap(({ tool, isFit }) => (isFit ? [tool.id] : [])),
  );
  return [...(held ? [held] : []), ...taken].find(({ id }) => fit.has(id));
}

/** "Angle gauge T-07, due 14 Mar 2027". */
export function toolWords({ name, dueOn }: Pick<ToolInHand, 'name' | 'dueOn'>): string {
  return dueOn === null ? name : `${name}, due ${dayWords(dueOn)}`;
}
