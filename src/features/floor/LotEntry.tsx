import { useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { QuietButton } from '@/components/QuietButton';
import { CodePad } from './CodePad';

export interface LotEntryProps {
  /** The part whose lot is asked. */
  part: string;
  known: string[];
  value: string;
  onChange: (lot: string) => void;
}

/** A lot: picked from those of the kit check, typed only where it is a new one. */
export function LotEntry({ part, known, value, onChange }: LotEntryProps) {
  const [isTyping, setTyping] = useState(known.length === 0);
  if (isTyping) {
    return (
      <div className="grid gap-3">
        <CodePad label={`Lot of the ${part}`} value={value} onChange={onChange} />
        {known.length > 0 && (
          <div>
            <QuietButton shape="wide" label="Pick a known lot" onPress={() => setTyping(false)} />
          </div>
        )}
      </div>
    );
  }
  return (
    <div className="grid gap-3">
      <ChoiceRows
        label={`Lot of the ${part}`}
        columns={2}
        choices={known.map((lot) => ({ value: lot, label: lot }))}
        value={value}
        onChoose={onChange}
      />
      <div>
        <QuietButton shape="wide" label="Another lot" onPress={() => setTyping(true)} />
      </div>
    </div>
  );
}
