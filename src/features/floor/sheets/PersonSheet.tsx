import { useState } from 'react';
import { CheckRow } from '@/components/CheckRow';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { PinPad } from '@/components/PinPad';
import { QuietButton } from '@/components/QuietButton';
import { unsignedWork } from '@/domain/job-work';
import type { PlanStep } from '@/domain/plan';
import type { SignedInPerson } from '../floor-store';
import { NoteField } from '../NoteField';
import { SignWork } from '../SignWork';
import { needsPin } from '../shift';
import { useRun, type Worker } from '../run-context';
import { isMidCycle } from '../tighten-touch';
import { Sheet } from './Sheet';

interface PersonSheetProps {
  step: PlanStep | undefined;
  signedIn: SignedInPerson[];
  onClose: () => void;
  /** Someone else works here from now on. */
  onChanged: (person: Worker) => Promise<void>;
  onHelpers: (helpers: string[]) => void;
  /** Whoever works here wants to leave the tablet. */
  onSignOut: () => void;
}

/** Who works here and who with them; a change is a touch and, at the first of a shift, a PIN. */
export function PersonSheet(props: PersonSheetProps) {
  const { step, signedIn, onClose, onChanged, onHelpers, onSignOut } = props;
  const run = useRun();
  const [chosen, choose] = useState<string>();
  const next = signedIn.find(({ person }) => person === chosen);
  const isMid = step?.kind === 'tighten' && isMidCycle(run.state, step);
  if (next)
    return (
      <TakeOver
        next={next}
        step={step}
        isMid={isMid}
        onBack={() => choose(undefined)}
        onClose={onClose}
        onChanged={onChanged}
      />
    );
  const others = signedIn.filter(({ person }) => person !== run.person.id);
  return (
    <Sheet
      title="Who is working"
      onClose={onClose}
      foot={<QuietButton shape="wide" label={`Sign ${run.person.name} out`} onPress={onSignOut} />}
    >
      <div className="grid gap-6">
        <p className="text-xl">
          <b>{run.person.name}</b> works here now.
        </p>
        <SignWork />
        {isMid && (
          <p className="text-lg font-bold">
            {step.bolts.join(' and ')} are in the middle of a cycle. Finish the cycle first; whoever takes
            over now starts them again.
          </p>
        )}
        <div className="grid gap-3 sm:grid-cols-2 [&_.quiet-button]:text-xl">
          {others.map(({ person, name, hasKey }) => (
            <QuietButton
              key={person}
              shape="wide"
              label={`${name} takes over`}
              why={hasKey ? undefined : 'has no key on this tablet yet: sign in with a network'}
              onPress={() => choose(person)}
            />
          ))}
        </div>
        {others.length === 0 && (
          <p className="text-lg text-soft">
            Nobody else is signed in on this tablet. Add someone on the first screen, with a network.
          </p>
        )}
        <Helpers onHelpers={onHelpers} />
      </div>
    </Sheet>
  );
}

function Helpers({ onHelpers }: { onHelpers: (helpers: string[]) => void }) {
  const run = useRun();
  const people = run.workshop.people.filter(
    ({ id, active, roles }) =>
      active && id !== run.person.id && roles.some((role) => role === 'technician' || role === 'supervisor'),
  );
  if (people.length === 0) return null;
  return (
    <fieldset>
      <legend className="choices-label">With {run.person.name}: they count as authors too</legend>
      <div className="grid gap-3 sm:grid-cols-2">
        {people.map(({ id, name }) => (
          <CheckRow
            key={id}
            label={name}
            isChecked={run.helpers.includes(id)}
            onChange={(isChecked) =>
              onHelpers(isChecked ? [...run.helpers, id] : run.helpers.filter((helper) => helper !== id))
            }
          />
        ))}
      </div>
    </fieldset>
  );
}

interface TakeOverProps extends Pick<PersonSheetProps, 'step' | 'onClose' | 'onChanged'> {
  next: SignedInPerson;
  isMid: boolean;
  onBack: () => void;
}

const SHORTEST_PIN = 4;

function TakeOver({ next, step, isMid, onBack, onClose, onChanged }: TakeOverProps) {
  const run = useRun();
  const [pin, setPin] = useState('');
  const [note, setNote] = useState('');
  const [hasNote, setHasNote] = useState(false);
  const [startsAgain, setStartsAgain] = useState<'wait' | 'again'>();
  const asksPin = needsPin(run.state, next.person, run.now());
  const unsigned = unsignedWork(run.state, run.person.id).length;
  const why =
    isMid && startsAgain !== 'again'
      ? 'not in the middle of a cycle'
      : asksPin && pin.length < SHORTEST_PIN
        ? 'enter the PIN'
        : undefined;
  async function takeOver() {
    const words = note.trim();
    const isRecorded = await run.record(
      [
        {
          kind: 'took-over',
          with: [],
          ...(asksPin ? { pin } : {}),
          data: { from: run.person.id, firstOfShift: asksPin, ...(words === '' ? {} : { note: words }) },
        },
        ...(isMid && step?.kind === 'tighten'
          ? [
              {
                kind: 'started-again' as const,
                step: step.id,
                with: [],
                data: { bolts: step.bolts, reason: 'taken over in the middle of a cycle' },
              },
            ]
          : []),
      ],
      { by: next.person },
    );
    setPin('');
    if (!isRecorded) return;
    await onChanged({ id: next.person, name: next.name, roles: next.roles });
    onClose();
  }
  return (
    <Sheet
      title={`${next.name} takes over`}
      onClose={onBack}
      foot={
        <MainAction
          label="Take over"
          next={`from ${run.person.name}`}
          why={why}
          isBusy={run.isBusy}
          onPress={() => void takeOver()}
        />
      }
    >
      <div className={asksPin ? 'grid items-start gap-6 @4xl/sheet:grid-cols-[1fr_25rem]' : 'grid gap-6'}>
        <div className="grid gap-5">
          {/* In the middle of a cycle there is something else to decide first. */}
          {unsigned > 0 && !isMid && (
            <div className="grid gap-2">
              <SignWork />
              <p className="text-lg text-soft">
                Before the tablet changes hands. If {run.person.name} has gone already, they sign later, on
                any tablet.
              </p>
            </div>
          )}
          {isMid && (
            <ChoiceRows
              label={`${step?.kind === 'tighten' ? step.bolts.join(' and ') : 'The bolts'}: in the middle of a cycle`}
              choices={[
                { value: 'wait', label: `${run.person.name} finishes the cycle first` },
                {
                  value: 'again',
                  label: 'They are let off and start again',
                  note: 'one more tightening is counted',
                },
              ]}
              value={startsAgain}
              onChoose={(value) => (value === 'wait' ? onBack() : setStartsAgain('again'))}
            />
          )}
          {hasNote ? (
            <NoteField label="Note for the handover" value={note} onChange={setNote} />
          ) : (
            <div>
              <QuietButton shape="wide" label="Add a note" onPress={() => setHasNote(true)} />
            </div>
          )}
        </div>
        {asksPin && (
          <PinPad
            label={`PIN of ${next.name}`}
            value={pin}
            onChange={setPin}
            hint="first change of this shift"
          />
        )}
      </div>
    </Sheet>
  );
}
