import { useState } from 'react';
import { Keypad } from '@/components/Keypad';
import { QuietButton } from '@/components/QuietButton';
import type { StepOf } from '@/domain/plan';
import { besideSI } from '@/domain/second-unit';
import { knownLots } from '../known-lots';
import { LotEntry } from '../LotEntry';
import { RecordAction } from '../RecordAction';
import { StepFrame } from '../StepFrame';
import { isNumber } from '../numbers';
import { useRun } from '../run-context';

/** A fluid goes in: how much was poured, and of which lot. */
export function FillStep({ step }: { step: StepOf<'fill'> }) {
  const { state, workshop } = useRun();
  const fluid = state.plan.fluids[step.fluid];
  const title = fluid?.title ?? step.fluid;
  const unit = fluid?.unit ?? 'L';
  const known = knownLots(state, title);
  const beside = fluid && besideSI(workshop.secondUnits, fluid.quantity, fluid.unit);
  const [quantity, setQuantity] = useState('');
  const [lot, setLot] = useState(known.length === 1 ? (known[0] ?? '') : '');
  const [isAskingLot, setAskingLot] = useState(false);
  return (
    <StepFrame
      step={step}
      side={
        isAskingLot ? null : (
          <Keypad label={`${title}, poured in`} unit={unit} value={quantity} onChange={setQuantity} />
        )
      }
      quiet={
        <QuietButton
          label={isAskingLot ? 'Quantity' : lot === '' ? 'Lot' : `Lot ${lot}`}
          onPress={() => setAskingLot(!isAskingLot)}
        />
      }
      main={
        <RecordAction
          label={isNumber(quantity) ? `Filled ${quantity} ${unit}` : 'Filled'}
          why={isNumber(quantity) ? undefined : 'key in what was poured'}
          drafts={() => [
            {
              kind: 'filled',
              step: step.id,
              data: { quantity, unit, ...(lot === '' ? {} : { lot }) },
            },
          ]}
        />
      }
    >
      {isAskingLot ? (
        <LotEntry part={title} known={known} value={lot} onChange={setLot} />
      ) : (
        fluid && (
          <div className="grid content-start gap-4">
            <div>
              <p className="form-label">by the engine sheet</p>
              <p className="figure text-4xl font-semibold">
                {fluid.quantity} {fluid.unit}
                {beside !== undefined && <span className="text-2xl text-soft">, {beside}</span>}
              </p>
              <p className="text-lg text-soft">{fluid.specification}</p>
            </div>
            <QuietButton
              shape="wide"
              label={`${fluid.quantity} ${fluid.unit}, as the sheet says`}
              onPress={() => setQuantity(fluid.quantity)}
            />
          </div>
        )
      )}
    </StepFrame>
  );
}
