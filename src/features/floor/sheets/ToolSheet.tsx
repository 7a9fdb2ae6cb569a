import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { PlanStep } from '@/domain/plan';
import { torqueWanted } from '../cap-in-hand';
import { useRun } from '../run-context';
import { dayWords } from '@/domain/time-words';
import { offerTools, wantedFor, type Hand, type ToolOffer } from '../tool-choice';
import { Sheet } from './Sheet';

interface ToolSheetProps {
  hand: Hand;
  step: PlanStep | undefined;
  onClose: () => void;
  /** Works out what to set for an adapter, from the torque that is wanted next. */
  onAdapter: (wanted: number | undefined) => void;
}

const TITLES: Record<Hand, string> = {
  torque: 'Torque wrench in hand',
  angle: 'Angle gauge in hand',
  measuring: 'Measuring tool in hand',
};

/** Which tool is in hand: fit ones can be picked, the others say what speaks against them. */
export function ToolSheet({ hand, step, onClose, onAdapter }: ToolSheetProps) {
  const run = useRun();
  const wanted = torqueWanted(run.state, step, hand);
  const offers = offerTools(run.workshop, hand, wantedFor(hand, step?.class ?? 'A', wanted), run.now());
  const [chosen, choose] = useState<string | undefined>(() => onlyFit(offers));
  async function take() {
    const offer = offers.find(({ tool }) => tool.id === chosen);
    if (!offer) return;
    const { id, name, serial, dueOn } = offer.tool;
    if (await run.record([{ kind: 'tool-taken', data: { use: hand, tool: { id, name, serial, dueOn } } }]))
      onClose();
  }
  return (
    <Sheet
      title={TITLES[hand]}
      onClose={onClose}
      foot={
        <MainAction
          label="It is in my hand"
          why={chosen === undefined ? 'touch the tool' : undefined}
          isBusy={run.isBusy}
          onPress={() => void take()}
        />
      }
    >
      <div className="grid gap-5">
        {offers.length === 0 && (
          <p className="text-lg">
            This tablet knows no such tool. Enter it at a desk under Tools & parts, then bring the tablet to
            the network.
          </p>
        )}
        <ChoiceRows
          label="Tool"
          isLabelUnseen
          columns={2}
          choices={offers.map(({ tool, isFit, reasons }) => ({
            value: tool.id,
            label: tool.name,
            note: `${tool.serial}${tool.dueOn === null ? '' : `, due ${dayWords(tool.dueOn)}`}${isFit && reasons.length > 0 ? `; ${reasons.join('; ')}` : ''}`,
            why: isFit ? undefined : `can’t be used: ${reasons.join('; ')}`,
          }))}
          value={chosen}
          onChoose={choose}
        />
        {hand === 'torque' && (
          <QuietButton
            shape="wide"
            label="An adapter is on it: work out the setting"
            onPress={() => onAdapter(wanted)}
          />
        )}
      </div>
    </Sheet>
  );
}

function onlyFit(offers: ToolOffer[]): string | undefined {
  const fit = offers.filter(({ isFit }) => isFit);
  return fit.length === 1 ? fit[0]?.tool.id : undefined;
}
