import { fitness, type Tool } from './tool';

/** How a tool stands on a day, in one word and in words. */
export interface ToolStanding {
  kind: 'fit' | 'due soon' | 'not fit' | 'withdrawn';
  words: string;
  /** The same without why a calibration failed, for a line of a list. */
  short: string;
}

/** The kinds of tool that the program has a use for; others may be kept too. */
export const TOOL_KINDS = [
  'torque wrench',
  'angle gauge',
  'micrometer',
  'bore gauge',
  'feeler gauge',
  'caliper',
  'pressure gauge',
  'thermometer',
] as const;

/** From how many days before its date on a tool is due soon. */
export const DUE_SOON_DAYS = 30;

/** How a tool stands on a day (YYYY-MM-DD in the workshop's zone): whether class A may use it, and until when. */
export function standingOf(tool: Tool, on: string): ToolStanding {
  const { kind, words } = standing(tool, on);
  const { failure = null } = tool;
  return { kind, words, short: failure === null ? words : words.replace(`: ${failure}`, '') };
}

function standing(tool: Tool, on: string): Omit<ToolStanding, 'short'> {
  if (tool.state === 'withdrawn') return { kind: 'withdrawn', words: 'withdrawn' };
  const { reasons } = fitness(tool, { kind: tool.kind, criticalClass: 'A' }, on);
  if (reasons.length > 0) return { kind: 'not fit', words: reasons.join('; ') };
  if (tool.dueOn === null) return { kind: 'fit', words: 'needs no calibration' };
  const days = daysBetween(on, tool.dueOn);
  if (days > DUE_SOON_DAYS) return { kind: 'fit', words: 'in date' };
  const when = days === 0 ? 'today' : days === 1 ? 'tomorrow' : `in ${days} days`;
  return { kind: 'due soon', words: `due ${when}` };
}

/** The day so many days after another. */
export function dayAfter(day: string, days: number): string {
  return new Date(Date.parse(`${day}T00:00:00Z`) + days * DAY_MS).toISOString().slice(0, 'YYYY-MM-DD'.length);
}

const DAY_MS = 24 * 60 * 60 * 1000;

function daysBetween(from: string, to: string): number {
  return (Date.parse(`${to}T00:00:00Z`) - Date.parse(`${from}T00:00:00Z`)) / DAY_MS;
}
