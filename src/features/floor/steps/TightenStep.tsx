import { lazy, useEffect, useState, type ReactNode } from 'react';
import { LoudAction } from '@/components/LoudAction';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import { besideSI } from '@/domain/second-unit';
import { following } from '../current-step';
import { boltName } from '../done-words';
import { NextAction } from '../NextAction';
import { RecordAction } from '../RecordAction';
import { HowLines, StepCautions, StepFrame } from '../StepFrame';
import { useRun, type Run } from '../run-context';
import {
  actionWords,
  afterTouch,
  isMark,
  nextTouch,
  placeWords,
  stageAmount,
  touchAmounts,
  touchBolts,
  touchDrafts,
  wornBolt,
  type TightenTouch,
} from '../tighten-touch';
import { handOf, toolOf, wantedOf } from '../tighten-tool';
import { toolWords, type Hand } from '../tool-choice';
import { TightenDrawings } from './TightenDrawings';
import { ToolToTake } from './ToolToTake';
import { WasItTurned } from './WasItTurned';

// Seldom needed: a touch does without them.
const ReplaceBolt = lazy(() => import('./ReplaceBolt').then((m) => ({ default: m.ReplaceBolt })));
const TypedReading = lazy(() => import('./TypedReading').then((m) => ({ default: m.TypedReading })));

type TightenStepPlan = StepOf<'tighten'>;

/** The programme of one cap or joint, an action a touch. */
export function TightenStep({ step }: { step: TightenStepPlan }) {
  const run = useRun();
  const touch = nextTouch(
    run.state,
    step,
    (next) => handOf(next) === undefined || toolOf(run, step, next) !== undefined,
  );
  const isPass = touch?.actions[0].kind === 'stage' && isTorqueOrAngle(touch);
  const asksAbout = isPass && run.askAbout === touch.key;
  const { showAction } = run;
  const key = touch?.key;
  useEffect(() => {
    if (key !== undefined) showAction(key);
  }, [key, showAction]);
  if (!touch) return <StepFrame step={step} main={<NextAction step={step} />} />;
  if (asksAbout) return <WasItTurned step={step} touch={touch} />;
  const [action] = touch.actions;
  const worn = wornBolt(run.state, step);
  if (action.kind === 'replace' || worn !== undefined) {
    return (
      <ReplaceBolt key={worn} step={step} bolt={worn ?? action.bolt} isWorn={action.kind !== 'replace'} />
    );
  }
  return <TightenAction key={touch.key} step={step} touch={touch} />;
}

function isTorqueOrAngle({ actions: [action] }: TightenTouch): boolean {
  return action.kind === 'stage' && (action.spec.kind === 'torque' || action.spec.kind === 'angle');
}

function TightenAction({ step, touch }: { step: TightenStepPlan; touch: TightenTouch }) {
  const run = useRun();
  const [isTyping, setTyping] = useState(false);
  const [action] = touch.actions;
  const hand = handOf(action);
  const tool = toolOf(run, step, action);
  const needsTool = hand !== undefined && step.class === 'A' && !tool;
  if (isTyping && action.kind === 'stage') {
    return <TypedReading step={step} action={action} tool={tool} onClose={() => setTyping(false)} />;
  }
  return (
    <StepFrame
      step={step}
      isLoud
      // The cautions come with the action itself, once its tool is in hand: before that nothing can be recorded.
      heading={<ActionHeading step={step} touch={touch} run={run} hasWords={!needsTool} />}
      then={thenWords(run, step, touch)}
      foot={needsTool ? undefined : <ToolsWords run={run} step={step} touch={touch} />}
      quiet={<SecondQuiet hand={hand} needsTool={needsTool} onType={() => setTyping(true)} />}
      main={
        needsTool ? (
          <MainAction
            label={hand === 'angle' ? 'Choose the angle gauge' : 'Choose the torque wrench'}
            why="touch the one in your hand"
            isBusy={run.isBusy}
            onPress={() => undefined}
          />
        ) : (
          <RecordAction
            label={mainLabel(run, step, touch)}
            drafts={() => touchDrafts(run.state, step, touch, (one) => toolOf(run, step, one))}
          />
        )
      }
    >
      {needsTool ? (
        <ToolToTake hand={hand} use={wantedOf(step, action, hand)} />
      ) : isAtHead(step, touch) ? null : (
        <TightenDrawings step={step} touch={touch} />
      )}
    </StepFrame>
  );
}

function SecondQuiet({
  hand,
  needsTool,
  onType,
}: {
  hand: Hand | undefined;
  needsTool: boolean;
  onType: () => void;
}): ReactNode {
  const run = useRun();
  if (hand !== undefined && needsTool) {
    const sheet = hand === 'angle' ? 'angle tool' : 'torque tool';
    return <QuietButton label="All tools" onPress={() => run.openSheet(sheet)} />;
  }
  if (hand !== undefined) {
    return <QuietButton label={hand === 'angle' ? 'Enter angle' : 'Enter torque'} onPress={onType} />;
  }
  return <QuietButton label="Steps" onPress={() => run.openSheet('steps')} />;
}

/** Cautions and conditions stand at the head of the programme; from the second touch on the drawings take their room. */
function isAtHead(step: TightenStepPlan, { actions: [action] }: TightenTouch): boolean {
  const hasWords = step.cautions.length > 0 || step.how.length > 0;
  return hasWords && action.kind === 'stage' && action.cycle === 0 && action.stage === 0;
}

/** Which bolt and how much, equally loud; the name of a joint that is no cap is a heading. */
function ActionHeading({
  step,
  touch,
  run,
  hasWords,
}: {
  step: TightenStepPlan;
  touch: TightenTouch;
  run: Run;
  hasWords: boolean;
}) {
  const names = touchBolts(touch);
  const isShort = names.every((name) => name.length <= 3);
  const { words, figure, unit } = loudWords(run, step, touch);
  return (
    <div className="grid gap-3">
      {isShort ? null : <h1 className="floor-step">{names.join(', ')}</h1>}
      <div className={names.length > 1 ? '[&_.loud-name]:text-7xl [&_.loud-figure]:text-7xl' : undefined}>
        <LoudAction
          name={isShort ? names.join(' ') : ''}
          words={words}
          figure={figure}
          unit={unit}
          beside={
            figure === undefined || unit === undefined
              ? undefined
              : besideSI(run.workshop.secondUnits, figure, unit)
          }
          step={headWords(step, touch) ?? placeWords(run.state, step, touch)}
        />
      </div>
      {hasWords && isAtHead(step, touch) && (
        <div className="grid gap-3 pt-3">
          <StepCautions step={step} />
          {step.cautions.length === 0 && <HowLines how={step.how} />}
        </div>
      )}
    </div>
  );
}

/** At the head of a programme of one cycle stands what the whole step is, rather than which pass comes. */
function headWords(step: TightenStepPlan, touch: TightenTouch): string | undefined {
  if (step.sets === undefined || !isAtHead(step, touch)) return undefined;
  const words = step.title.replace(/^Rod \d+: /, '');
  return words.charAt(0).toUpperCase() + words.slice(1);
}

function loudWords(
  run: Run,
  step: TightenStepPlan,
  touch: TightenTouch,
): { words: string; figure?: string; unit?: string } {
  const [action] = touch.actions;
  if (action.kind === 'release') return { words: `release: ${releaseReasons[action.because]}` };
  if (action.kind === 'replace') return { words: 'replace' };
  const amount = stageAmount(run.state, step, action);
  switch (action.spec.kind) {
    case 'torque': {
      const amounts = touchAmounts(run.state, step, touch);
      const [figure = '', unit = ''] = amounts.at(-1)?.split(' ') ?? [];
      const lower = amounts.slice(0, -1);
      const words = lower.length === 0 ? 'tighten to' : `to ${lower.join(', then to ')}, then to`;
      return { words, figure, unit };
    }
    case 'angle':
      return { words: 'turn through', ...(amount === undefined ? {} : { figure: amount }) };
    case 'release':
      return { words: 'release, a quarter turn at a time' };
    case 'mark':
      return { words: `paint the ${action.spec.colour} mark` };
  }
}

const releaseReasons = {
  over: 'its partner was turned too far',
  replaced: 'its partner was replaced',
  released: 'its partner was let off',
} as const;

function mainLabel(run: Run, step: TightenStepPlan, touch: TightenTouch): string {
  const [action] = touch.actions;
  const [, ...others] = touchBolts(touch);
  if (action.kind !== 'stage') return `Released ${touchBolts(touch).join(' and ')}`;
  const andMarked = touch.actions.some(isMark) ? ' and marked' : '';
  const amounts = touchAmounts(run.state, step, touch);
  const amount = amounts
    .map((one, i) => (i < amounts.length - 1 ? one.replace(/ N·m$/, '') : one))
    .join(', then ');
  switch (action.spec.kind) {
    case 'torque':
      return others.length === 0
        ? `Tightened to ${amount}${andMarked}`
        : `${others.length === 1 ? 'Both' : 'All'} at ${amount}`;
    case 'angle':
      return `Turned ${amount}${andMarked}`;
    case 'release':
      return others.length === 0 ? 'Released' : `${others.length === 1 ? 'Both' : 'All'} released`;
    case 'mark':
      return action.bolt.length <= 3 ? `Marked ${action.bolt}` : 'Marked';
  }
}

function thenWords(run: Run, step: TightenStepPlan, touch: TightenTouch): string {
  const next = afterTouch(run.state, step, touch);
  if (next) return `then ${actionWords(run.state, step, next)}`;
  const after = following(run.state, step);
  return after
    ? `then ${after.title.charAt(0).toLowerCase()}${after.title.slice(1)}`
    : `then ${boltName(step.bolts[0] ?? '')} is finished`;
}

/** The tools that a touch is recorded with, each once. */
function ToolsWords({ run, step, touch }: { run: Run; step: TightenStepPlan; touch: TightenTouch }) {
  const tools = touch.actions.flatMap((action) => toolOf(run, step, action) ?? []);
  const words = [...new Set(tools.map(toolWords))];
  return words.length === 0 ? null : <p>{words.join('; ')}</p>;
}
