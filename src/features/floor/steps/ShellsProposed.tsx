import { Verdict } from '@/components/Verdict';
import { VerdictScale } from '@/components/VerdictScale';
import { judgeLimit } from '@/domain/job-limit';
import type { ShellProposal } from '@/domain/job-shells';
import type { PlanLimit } from '@/domain/plan';
import { limitOnScale } from '../gauge-reading';

interface ShellsProposedProps {
  proposal: ShellProposal;
  limit: PlanLimit;
  /** What is chosen, as "upper thick, lower middle", and what it is expected to give. */
  chosen: string;
  expected: string;
  uncertainty: number;
  isAsProposed: boolean;
}

/** What the chosen shells are expected to give, between the limits, and the reasons for what was proposed. */
export function ShellsProposed(props: ShellsProposedProps) {
  const { proposal, limit, chosen, expected, uncertainty, isAsProposed } = props;
  const { low, high, target, unit } = limit;
  const { verdict } = judgeLimit(limit, expected, String(uncertainty));
  const kind = verdict === 'no limit known' ? 'none' : verdict;
  return (
    <section className="grid content-start gap-3" aria-label="What is proposed">
      <div className="flex flex-wrap items-center gap-x-8 gap-y-3">
        <div>
          <p className="form-label">
            {proposal.shells === undefined ? 'chosen' : isAsProposed ? 'proposed' : 'not as proposed'}
          </p>
          <p className="text-2xl font-bold">{chosen}</p>
        </div>
        <p className="figure text-5xl font-semibold whitespace-nowrap">
          {expected} <span className="text-2xl">{unit}</span>
        </p>
        <Verdict kind={kind} word={PREDICTED[kind]} size="band">
          predicted, not measured
        </Verdict>
        <VerdictScale
          label={`Predicted ${expected} ${unit}, between ${low ?? 'no lower limit'} and ${high ?? 'no upper limit'}`}
          low={limitOnScale(low)}
          high={limitOnScale(high)}
          target={target === undefined ? undefined : Number(target)}
          ends={['tight', 'wide']}
          marks={[{ value: Number(expected), uncertainty }]}
        />
      </div>
      <ul className="grid gap-1 text-lg">
        {proposal.why.map((line) => (
          <li key={line}>{line}</li>
        ))}
      </ul>
    </section>
  );
}

const PREDICTED = {
  inside: 'Would be inside',
  unsure: 'Would be unsure',
  outside: 'Would be outside',
  none: 'No limit known',
};
