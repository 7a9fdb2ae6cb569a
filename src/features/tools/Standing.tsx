import { Sign, type SignName } from '@/components/Sign';
import type { ToolStanding } from '@/domain/tool-standing';

const SIGNS: Record<ToolStanding['kind'], SignName> = {
  fit: 'tick',
  'due soon': 'question',
  'not fit': 'cross',
  withdrawn: 'minus',
};

/** How a tool stands, its sign beside its words. */
export function Standing({ standing, isShort = false }: { standing: ToolStanding; isShort?: boolean }) {
  return (
    <span className="tool-standing" data-kind={standing.kind}>
      <Sign name={SIGNS[standing.kind]} />
      <span>{isShort ? standing.short : standing.words}</span>
    </span>
  );
}
