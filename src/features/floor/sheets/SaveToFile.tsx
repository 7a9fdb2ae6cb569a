import { useEffect, useState } from 'react';
import { QuietButton } from '@/components/QuietButton';
import { makeTabletFile, type TabletFile, watchCountForFile } from '@/offline/tablet-file';
import type { Surroundings } from '@/offline/surroundings';

/** Saves what is only on this tablet to a file, for the office to bring in. */
export function SaveToFile({ offline }: { offline: Surroundings }) {
  const [count, setCount] = useState<{ records: number; photographs: number }>();
  const [saved, setSaved] = useState<TabletFile>();
  const [trouble, setTrouble] = useState<string>();
  const [isBusy, setBusy] = useState(false);
  useEffect(() => watchCountForFile(offline, setCount), [offline]);
  const isNothing = count !== undefined && count.records + count.photographs === 0;
  async function save() {
    setBusy(true);
    setTrouble(undefined);
    try {
      const made = await makeTabletFile(offline);
      offerFile(made);
      setSaved(made);
    } catch (error) {
      setTrouble(error instanceof Error ? error.message : 'The browser gave no reason.');
    } finally {
      setBusy(false);
    }
  }
  return (
    <section className="grid gap-1 text-lg">
      <h3 className="form-label border-b-2 border-text pb-1">If this tablet can’t send</h3>
      <p>
        {isNothing
          ? 'Nothing is on this tablet alone.'
          : `${count === undefined ? 'What' : contents(count)} on this tablet alone. A file of it can be brought in at the office, also when the tablet is gone.`}
      </p>
      <div className="pt-1">
        <QuietButton
          shape="wide"
          label={isBusy ? 'Saving…' : 'Save what is on this tablet to a file'}
          why={isNothing ? 'nothing is left to save' : undefined}
          onPress={() => void save()}
        />
      </div>
      <div role="status">
        {saved && (
          <p>
            <b>Saved: {counted(saved)}</b>, as “{saved.name}” where this browser keeps what it saves. All of
            it stays here too. Take the file to the office: Workshop, Tablets, “Bring in a tablet’s file”.
          </p>
        )}
        {trouble !== undefined && (
          <p className="font-bold">The file was not made: {trouble} Nothing is lost. Try it again.</p>
        )}
      </div>
    </section>
  );
}

interface Counted {
  records: number;
  photographs: number;
}

function contents(count: Counted): string {
  return `${counted(count)} ${count.records + count.photographs === 1 ? 'is' : 'are'}`;
}

/** "3 records and 1 photograph". */
function counted({ records, photographs }: Counted): string {
  const parts = [
    ...(records > 0 ? [`${records} record${records === 1 ? '' : 's'}`] : []),
    ...(photographs > 0 ? [`${photographs} photograph${photographs === 1 ? '' : 's'}`] : []),
  ];
  return parts.length === 0 ? 'nothing' : parts.join(' and ');
}

/** Hands the file to the browser as a download. */
function offerFile({ name, file }: TabletFile): void {
  const url = URL.createObjectURL(file);
  const link = document.createElement('a');
  link.href = url;
  link.download = name;
  link.click();
  // The browser reads the address after this turn.
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
}
