import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import type { StepOf } from '@/domain/plan';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

const WITNESS_ROLES = ['supervisor', 'quality lead', 'auditor', 'owner'];

/** An invitation to look; work goes on whether anybody comes or not. */
export function WitnessStep({ step }: { step: StepOf<'witness'> }) {
  const run = useRun();
  const people = run.workshop.people.filter(
    ({ active, roles }) => active && roles.some((role) => WITNESS_ROLES.includes(role)),
  );
  const [by, setBy] = useState(people.some(({ id }) => id === run.person.id) ? run.person.id : undefined);
  async function witness(person: string) {
    const draft = {
      kind: 'witnessed' as const,
      step: step.id,
      data: { holdPoint: step.holdPoint, meaning: step.meaning },
    };
    if (await run.record([draft], { by: person })) run.goOn(step);
  }
  return (
    <StepFrame
      step={step}
      main={
        <MainAction
          label="I have looked"
          next="work goes on either way"
          why={by === undefined ? 'who looked?' : undefined}
          isBusy={run.isBusy}
          onPress={() => by !== undefined && void witness(by)}
        />
      }
    >
      <p className="pb-4 text-xl">“{step.meaning}”</p>
      <ChoiceRows
        label="Who looked"
        columns={2}
        choices={people.map(({ id, name, roles }) => ({ value: id, label: name, note: roles.join(', ') }))}
        value={by}
        onChoose={setBy}
      />
    </StepFrame>
  );
}
