import { ChoiceRows } from '@/components/ChoiceRows';
import type { ToolUse } from '@/domain/tool';
import { dayWords } from '@/domain/time-words';
import { useRun } from '../run-context';
import { offerTools, type Hand } from '../tool-choice';

interface ToolToTakeProps {
  hand: Hand;
  use: ToolUse;
}

/** The tools that may be used for what comes next: a touch on the one in hand takes it. */
export function ToolToTake({ hand, use }: ToolToTakeProps) {
  const run = useRun();
  const offers = offerTools(run.workshop, hand, use, run.now()).filter(({ isFit }) => isFit);
  function take(chosen: string) {
    const tool = offers.find((offer) => offer.tool.id === chosen)?.tool;
    if (!tool) return;
    const { id, name, serial, dueOn } = tool;
    void run.record([{ kind: 'tool-taken', data: { use: hand, tool: { id, name, serial, dueOn } } }]);
  }
  if (offers.length === 0) {
    return (
      <p className="max-w-[62ch] pt-4 text-xl font-bold">
        No tool on this tablet may be used for this. “All tools” says what speaks against each.
      </p>
    );
  }
  return (
    <div className="pt-4">
      <ChoiceRows
        label="Tools that fit"
        columns={2}
        choices={offers.map(({ tool: { id, name, serial, dueOn } }) => ({
          value: id,
          label: name,
          note: `${serial}${dueOn === null ? '' : `, due ${dayWords(dueOn)}`}`,
        }))}
        onChoose={take}
      />
    </div>
  );
}
