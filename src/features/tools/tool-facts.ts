import type { ToolAnswer } from './tool-answer';

/** "20 to 100 N·m", "up to 50 N·m"; nothing where no range is known. */
export function rangeWords({ rangeLow, rangeHigh, unit }: ToolAnswer): string {
  if (rangeHigh === null) return '';
  const range = rangeLow === null ? `up to ${rangeHigh}` : `${rangeLow} to ${rangeHigh}`;
  return `${range} ${unit ?? ''}`.trim();
}

/** "type II, class A"; nothing where they are not known. */
export function classWords({ torqueType, torqueClass }: ToolAnswer): string {
  return torqueType && torqueClass ? `type ${torqueType}, class ${torqueClass}` : '';
}
