import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { EntryData } from '@/domain/entry';
import { clearanceLimit } from '@/domain/engine-view';
import { lastOf } from '@/domain/job-kept';
import {
  clearanceOfRod,
  expectedClearance,
  fullShelf,
  proposeShells,
  shellsOnShelf,
  type RodClearance,
  type ShellProposal,
} from '@/domain/job-shells';
import type { JobState, RodState, ShellFitted } from '@/domain/job-state';
import type { StepOf } from '@/domain/plan';
import type { ShellsInStock } from '@/domain/shell-choice';
import { shellLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { RecordAction } from '../RecordAction';
import { StepFrame, StepHeading } from '../StepFrame';
import { useRun } from '../run-context';
import { ShelfCount } from './ShelfCount';
import { ShellReason } from './ShellReason';
import { ShellsProposed } from './ShellsProposed';

type Half = 'upper' | 'lower';
type Shells = Record<Half, ShellFitted>;
/** The shelf as counted on this screen; `full` where nobody counts. */
type Shelf = ShellsInStock[] | 'full';

const HALVES = ['upper', 'lower'] as const;
/** What is proposed stands beside the choice where there is room, else over it. */
const BESIDE = 'grid gap-6 @4xl/floor-main:grid-cols-[minmax(0,5fr)_minmax(0,6fr)]';

/** Which grade and lot of shell goes into each half of the rod: proposed once the rod was read, and free to choose. */
export function ChooseShellsStep({ step }: { step: StepOf<'choose-shells'> }) {
  const { state } = useRun();
  const known = step.rod === undefined ? undefined : clearanceOfRod(state, step.rod);
  const [shelf, setShelf] = useState<Shelf | undefined>(() => shellsOnShelf(state));
  const [isCounting, setCounting] = useState(false);
  const [isCounted, setCounted] = useState(false);
  const isProposing = known !== undefined && isToPropose(state, step);
  if (isProposing && (shelf === undefined || isCounting)) {
    return (
      <ShelfCount
        step={step}
        known={shelf === 'full' ? undefined : shelf}
        onCounted={(stock) => {
          setShelf(stock);
          setCounting(false);
          setCounted(true);
        }}
        onSkip={() => {
          setShelf(shelf ?? 'full');
          setCounting(false);
        }}
      />
    );
  }
  const stock = shelf === 'full' || shelf === undefined ? fullShelf(state) : shelf;
  const proposal = isProposing ? proposeShells(state, known.rod, stock) : undefined;
  return (
    <ChooseShells
      key={JSON.stringify(proposal?.shells)}
      step={step}
      known={known}
      proposal={proposal}
      counted={isCounted && shelf !== 'full' ? shelf : undefined}
      isUncounted={shelf === 'full'}
      onCount={() => setCounting(true)}
    />
  );
}

/** Whether other shells are wanted: the rod is back at its shells, or what was read is not inside known limits. */
function isToPropose(state: JobState, step: StepOf<'choose-shells'>): boolean {
  const limit = clearanceLimit(state);
  if (limit?.low === undefined || limit.high === undefined || step.rod === undefined) return false;
  const rod = state.rods[step.rod];
  const isOff = [rod?.front, rod?.rear].some(
    (reading) => reading !== undefined && reading.verdict !== 'inside',
  );
  return isOff || state.steps[step.id]?.status !== 'done';
}

interface ChooseShellsProps {
  step: StepOf<'choose-shells'>;
  known: RodClearance | undefined;
  proposal: ShellProposal | undefined;
  /** The shelf, where it was counted for this choice. */
  counted: ShellsInStock[] | undefined;
  isUncounted: boolean;
  onCount: () => void;
}

function ChooseShells({ step, known, proposal, counted, isUncounted, onCount }: ChooseShellsProps) {
  const { state } = useRun();
  const rod = step.rod === undefined ? undefined : state.rods[step.rod];
  const [shells, setShells] = useState<Shells>(() => firstChoice(state, rod, proposal));
  const [asks, setAsks] = useState<Half | 'reason'>();
  const [reason, setReason] = useState<string>();
  const proposed = proposal?.shells;
  const isAsProposed =
    proposed === undefined || HALVES.every((half) => proposed[half] === shells[half].grade);
  const limit = clearanceLimit(state);
  const expected = known && expectedClearance(state, known, gradesOf(shells));
  function choose(half: Half, shell: ShellFitted): void {
    if (shell.grade !== shells[half].grade) setReason(undefined);
    setShells({ ...shells, [half]: shell });
  }
  if (asks === 'reason' && proposed) {
    return (
      <ShellReason
        step={step}
        chosen={pairWords(gradesOf(shells))}
        proposed={pairWords(proposed)}
        onReason={(words) => {
          setReason(words);
          setAsks(undefined);
        }}
        onClose={() => setAsks(undefined)}
      />
    );
  }
  if (asks === 'upper' || asks === 'lower') {
    return (
      <AskLot
        step={step}
        half={asks}
        grade={shells[asks].grade}
        value={shells[asks].lot}
        onLot={(lot) => choose(asks, { ...shells[asks], lot })}
        onClose={() => setAsks(undefined)}
      />
    );
  }
  const missing = HALVES.find((half) => shells[half].lot === '');
  return (
    <StepFrame
      step={step}
      {...(proposal ? { side: null } : {})}
      heading={proposal ? <h1 className="floor-step pb-3">{step.title}</h1> : <StepHeading step={step} />}
      quiet={proposal ? <QuietButton label="Count again" onPress={onCount} /> : undefined}
      foot={
        isUncounted
          ? 'Nobody has counted the shelf: proposed as if enough of each grade lay there.'
          : undefined
      }
      main={
        isAsProposed || reason !== undefined ? (
          <RecordAction
            label="Shells chosen"
            why={missing === undefined ? undefined : `the lot of the ${missing} shell is needed`}
            drafts={() => [
              {
                kind: 'chose-shells',
                step: step.id,
                data: chosenData({
                  shells,
                  expected,
                  proposed,
                  counted,
                  reason,
                  isAfterReading: known !== undefined,
                }),
              },
            ]}
          />
        ) : (
          <MainAction label="Say why not as proposed" onPress={() => setAsks('reason')} />
        )
      }
    >
      <div className={proposal ? BESIDE : undefined}>
        {proposal && limit && known && expected !== undefined && (
          <ShellsProposed
            proposal={proposal}
            limit={limit}
            chosen={pairWords(gradesOf(shells))}
            expected={expected}
            uncertainty={known.uncertainty}
            isAsProposed={isAsProposed}
          />
        )}
        <div className="grid content-start gap-8 @lg/floor-main:grid-cols-2">
          {HALVES.map((half) => (
            <div key={half} className="grid content-start gap-3">
              <ChoiceRows
                label={`${half === 'upper' ? 'Upper' : 'Lower'} shell, ${step.rod ?? ''}${half === 'upper' ? 'U' : 'L'}`}
                choices={state.plan.engine.shells.grades.map(({ grade, wall }) => ({
                  value: grade,
                  label: grade,
                  note: known
                    ? `${expectedClearance(state, known, { ...gradesOf(shells), [half]: grade })} mm`
                    : wallWords(wall),
                }))}
                value={shells[half].grade}
                onChoose={(grade) => choose(half, { grade, lot: lotFor(state, grade) })}
              />
              <QuietButton
                shape="wide"
                label={
                  shells[half].lot === '' ? `Lot of the ${half} shell` : `Lot ${shells[half].lot}, change`
                }
                onPress={() => setAsks(half)}
              />
            </div>
          ))}
        </div>
      </div>
    </StepFrame>
  );
}

interface Chosen {
  shells: Shells;
  expected: string | undefined;
  proposed: Record<Half, string> | undefined;
  counted: ShellsInStock[] | undefined;
  reason: string | undefined;
  isAfterReading: boolean;
}

/** What is recorded: the shells, what they should give, and what was proposed from which shelf. */
function chosenData({
  shells,
  expected,
  proposed,
  counted,
  reason,
  isAfterReading,
}: Chosen): EntryData<'chose-shells'> {
  const why = reason ?? (isAfterReading ? 'the clearance read with other shells' : undefined);
  return {
    ...shells,
    ...(expected !== undefined && Number(expected) > 0 ? { predicted: expected } : {}),
    ...(proposed === undefined ? {} : { proposed: { upper: proposed.upper, lower: proposed.lower } }),
    ...(counted === undefined ? {} : { stock: counted }),
    ...(why === undefined ? {} : { reason: why }),
  };
}

function gradesOf({ upper, lower }: Shells): Record<Half, string> {
  return { upper: upper.grade, lower: lower.grade };
}

function pairWords({ upper, lower }: Record<Half, string>): string {
  return `upper ${upper}, lower ${lower}`;
}

interface AskLotProps {
  step: StepOf<'choose-shells'>;
  half: Half;
  grade: string;
  value: string;
  onLot: (lot: string) => void;
  onClose: () => void;
}

function AskLot({ step, half, grade, value, onLot, onClose }: AskLotProps) {
  const { state } = useRun();
  return (
    <StepFrame
      step={step}
      side={null}
      heading={<h1 className="floor-step pb-3">Lot of the {half} shell</h1>}
      quiet={<QuietButton label="Back" onPress={onClose} />}
      main={
        <MainAction
          label={value === '' ? 'Use this lot' : `Use lot ${value}`}
          why={value === '' ? 'the lot is needed' : undefined}
          onPress={onClose}
        />
      }
    >
      <LotEntry part={`${half} shell`} known={shellLots(state, grade)} value={value} onChange={onLot} />
    </StepFrame>
  );
}

/** What is proposed, else what is in the rod now, else the standard grade. */
function firstChoice(
  state: JobState,
  rod: RodState | undefined,
  proposal: ShellProposal | undefined,
): Shells {
  const { standard } = state.plan.engine.shells;
  const shell = (half: Half): ShellFitted => {
    const grade = proposal?.shells?.[half];
    const present = rod?.[half];
    if (present && (grade === undefined || grade === present.grade)) return present;
    return { grade: grade ?? standard, lot: lotFor(state, grade ?? standard) };
  };
  return { upper: shell('upper'), lower: shell('lower') };
}

/** The lot last used for a grade on this job, else the only one of the kit check. */
function lotFor(state: JobState, grade: string): string {
  const used = state.plan.steps
    .flatMap((step) =>
      step.kind === 'choose-shells' ? (lastOf(state.steps[step.id], 'chose-shells') ?? []) : [],
    )
    .flatMap(({ data }) => [data.upper, data.lower])
    .findLast((shell) => shell.grade === grade);
  const known = shellLots(state, grade);
  return used?.lot ?? (known.length === 1 ? (known[0] ?? '') : '');
}

function wallWords(wall: string): string {
  if (Number(wall) === 0) return 'standard wall';
  return Number(wall) > 0 ? `wall +${wall} mm, less clearance` : `wall ${wall} mm, more clearance`;
}
