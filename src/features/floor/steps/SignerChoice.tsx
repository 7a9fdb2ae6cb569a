import { useEffect, useState } from 'react';
import { ChoiceRows, type Choice } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { whyNotAuthorised } from '@/domain/authorisation';
import type { Certificate } from '@/domain/certificate';
import { dayIn } from '@/domain/time-words';
import { authorsUnder } from '@/domain/job-signing-rules';
import type { StepOf } from '@/domain/plan';
import type { WorkshopRow } from '@/offline/database';
import { StepFrame } from '../StepFrame';
import { useRun } from '../run-context';

export interface Signer {
  id: string;
  name: string;
  roles: string[];
  /** They had a hand in the work: a second look, marked as such. */
  isAuthor: boolean;
  /** By which certificate they sign, where the workshop has one of theirs. */
  certificate?: Certificate | undefined;
}

interface SignerChoiceProps {
  step: StepOf<'hold'>;
  onSigner: (signer: Signer) => void;
  onBack: () => void;
}

/** Who signs: those who may, a touch on the name says it; and why the others may not. */
export function SignerChoice({ step, onSigner, onBack }: SignerChoiceProps) {
  const run = useRun();
  const keyTroubles = useKeyTroubles(run.workshop.people, run.canSign);
  const authors = step.class === 'A' ? authorsUnder(run.state, step) : [];
  const people = run.workshop.people.filter(
    ({ active, roles }) => active && roles.some((role) => role !== 'auditor'),
  );
  const today = dayIn(run.workshop.zone, new Date(run.now()).toISOString());
  const choices = people
    .map((person): Choice =>
      choiceFor(person, step, authors, whyNotNow(person, today) ?? keyTroubles[person.id]),
    )
    .sort((a, b) => Number(a.why !== undefined) - Number(b.why !== undefined));
  function choose(id: string) {
    const signer = people.find((person) => person.id === id);
    if (!signer) return;
    const { name, roles, certificate } = signer;
    onSigner({ id, name, roles, isAuthor: authors.includes(id), certificate: certificate ?? undefined });
  }
  return (
    <StepFrame
      step={step}
      heading={<h1 className="floor-step pb-2">Hand the tablet over. Who signs?</h1>}
      quiet={<QuietButton label="Back" onPress={onBack} />}
      main={<MainAction label="Who signs?" why="touch your name" onPress={() => undefined} />}
    >
      <p className="pb-4 text-lg text-soft">
        {step.class === 'A' ? 'Class A: someone who had no hand in this work.' : ''} Signed by:{' '}
        {step.roles.join(' or ')}.
      </p>
      <ChoiceRows label="Signer" isLabelUnseen columns={2} choices={choices} onChoose={choose} />
    </StepFrame>
  );
}

type Person = WorkshopRow['people'][number];

/** That somebody's authorisation is over, and what unlocks it. */
function whyNotNow(person: Person, today: string): string | undefined {
  const verdict = whyNotAuthorised(person, today);
  return verdict.ok ? undefined : `${verdict.why} ${verdict.unlock ?? ''}`.trim();
}

function choiceFor(
  person: Person,
  step: StepOf<'hold'>,
  authors: string[],
  keyTrouble: string | undefined,
): Choice {
  const choice = { value: person.id, label: person.name };
  if (!person.roles.some((role) => step.roles.includes(role)))
    return { ...choice, why: `${person.roles.join(', ')}: may not sign this` };
  if (authors.includes(person.id) && !step.secondLook) return { ...choice, why: 'had a hand in this work' };
  if (!person.hasPin) return { ...choice, why: 'has no PIN yet; it is set at a desk' };
  if (keyTrouble !== undefined) return { ...choice, why: keyTrouble };
  if (authors.includes(person.id))
    return {
      ...choice,
      note: 'had a hand in this work: a second look after 30 minutes, marked not independent',
    };
  return { ...choice, note: person.roles.join(', ') };
}

/** Why a person's signature can't be made on this tablet, by person. */
function useKeyTroubles(
  people: Person[],
  canSign: (person: string) => Promise<{ ok: boolean; why?: string; unlock?: string | undefined }>,
) {
  const [troubles, setTroubles] = useState<Record<string, string>>({});
  useEffect(() => {
    let isGone = false;
    const asked = people.map(async ({ id }) => {
      const verdict = await canSign(id);
      return verdict.ok ? [] : [[id, `${verdict.why ?? ''} ${verdict.unlock ?? ''}`.trim()] as const];
    });
    void Promise.all(asked).then((answers) => {
      if (!isGone) setTroubles(Object.fromEntries(answers.flat()));
    });
    return () => {
      isGone = true;
    };
  }, [people, canSign]);
  return troubles;
}
