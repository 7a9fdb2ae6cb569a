import { useEffect, useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { QuietButton } from '@/components/QuietButton';
import { chooseLook, readLook, type LookSettings } from '@/components/look-settings';
import { wordsOf } from '@/domain/entry-words';
import type { RefusedRow } from '@/offline/database';
import type { SyncStatus } from '@/offline/sync-status';
import { useRun } from '../run-context';
import { dayAndTime } from '../time-words';
import { Sheet } from './Sheet';

interface SyncSheetProps {
  status: SyncStatus;
  hasUpdate: boolean;
  onUpdate: () => void;
  onClose: () => void;
}

/** Where the records are, what was refused and why, and how this tablet looks. */
export function SyncSheet({ status, hasUpdate, onUpdate, onClose }: SyncSheetProps) {
  const run = useRun();
  const [isWiping, setWiping] = useState(false);
  if (isWiping) return <WipeScreen onDone={() => setWiping(false)} />;
  return (
    <Sheet title="Where the records are" onClose={onClose}>
      <div className="grid gap-6">
        <section className="grid gap-2 text-lg" role="status">
          <p className="text-2xl font-bold">{status.words}</p>
          <p>
            <span className="figure">{status.sent}</span> made on this tablet are with the server.
            {status.lastSyncAt !== undefined &&
              ` Last sent ${dayAndTime(status.lastSyncAt, run.workshop.zone)}.`}
          </p>
          {status.trouble && <p className="font-bold">{status.trouble.words}</p>}
          <p className="text-soft">
            What is on this tablet is safe through a reload, an empty battery and a shift without a network.
          </p>
          <div className="flex flex-wrap gap-3 pt-2">
            <QuietButton shape="wide" label="Send now" onPress={() => void run.syncNow()} />
            {hasUpdate && <QuietButton shape="wide" label="Use the new version" onPress={onUpdate} />}
            <QuietButton shape="wide" label="Wipe the screen" onPress={() => setWiping(true)} />
          </div>
        </section>
        <Refused refused={run.refused} />
        <Look />
      </div>
    </Sheet>
  );
}

function Refused({ refused }: { refused: RefusedRow[] }) {
  const run = useRun();
  if (refused.length === 0) return null;
  return (
    <section>
      <h3 className="form-label border-b-2 border-text pb-1">Refused by the server, kept here</h3>
      <ul className="grid gap-3 pt-3 text-lg">
        {refused.map(({ id, entry, reason }) => (
          <li key={id} className="border-b border-rule pb-3">
            <p className="font-bold">{wordsOf(entry, run.state.plan)}</p>
            <p>
              {entry.author.name}, {dayAndTime(entry.at, run.workshop.zone)}. {reason}
            </p>
          </li>
        ))}
      </ul>
    </section>
  );
}

const LOOKS: {
  [K in keyof LookSettings]: { label: string; choices: { value: LookSettings[K]; label: string }[] };
} = {
  theme: {
    label: 'Ground',
    choices: [
      { value: 'graphite', label: 'Graphite' },
      { value: 'paper', label: 'Paper' },
      { value: 'system', label: 'As the tablet' },
    ],
  },
  text: {
    label: 'Text',
    choices: [
      { value: 'normal', label: 'Usual' },
      { value: 'large', label: 'Large' },
      { value: 'largest', label: 'Largest' },
    ],
  },
  hand: {
    label: 'Hand',
    choices: [
      { value: 'right', label: 'Right' },
      { value: 'left', label: 'Left' },
    ],
  },
  motion: {
    label: 'Movement',
    choices: [
      { value: 'system', label: 'As the tablet' },
      { value: 'reduced', label: 'None' },
    ],
  },
};

function Look() {
  const [look, setLook] = useState(() => readLook(localStorage));
  function change<K extends keyof LookSettings>(key: K, value: LookSettings[K]) {
    chooseLook(key, value, { storage: localStorage, root: document.documentElement });
    setLook(readLook(localStorage));
  }
  return (
    <section className="grid gap-4">
      <h3 className="form-label border-b-2 border-text pb-1">How this tablet looks</h3>
      <LookRow setting="theme" look={look} onChange={change} />
      <LookRow setting="text" look={look} onChange={change} />
      <LookRow setting="hand" look={look} onChange={change} />
      <LookRow setting="motion" look={look} onChange={change} />
    </section>
  );
}

interface LookRowProps<K extends keyof LookSettings> {
  setting: K;
  look: LookSettings;
  onChange: (key: K, value: LookSettings[K]) => void;
}

function LookRow<K extends keyof LookSettings>({ setting, look, onChange }: LookRowProps<K>) {
  const { label, choices } = LOOKS[setting];
  return (
    <ChoiceRows
      label={label}
      columns={3}
      choices={choices}
      value={look[setting]}
      onChoose={(value) => {
        const choice = choices.find((each) => each.value === value);
        if (choice) onChange(setting, choice.value);
      }}
    />
  );
}

const WIPE_SECONDS = 10;

/** Touch does nothing while the screen is wiped. */
function WipeScreen({ onDone }: { onDone: () => void }) {
  const [left, setLeft] = useState(WIPE_SECONDS);
  useEffect(() => {
    const timer = setInterval(() => setLeft((seconds) => seconds - 1), 1000);
    return () => clearInterval(timer);
  }, []);
  useEffect(() => {
    if (left <= 0) onDone();
  }, [left, onDone]);
  return (
    <div className="fixed inset-0 z-50 grid place-items-center bg-ground text-center" role="alert">
      <p className="text-3xl font-bold">
        Wipe the screen: touch is off for <span className="figure">{left}</span> s
      </p>
    </div>
  );
}
