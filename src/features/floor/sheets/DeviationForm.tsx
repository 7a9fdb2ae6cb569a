import { useRef, useState } from 'react';
import { ChoiceRows } from '@/components/ChoiceRows';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import type { CriticalClass, PlanStep } from '@/domain/plan';
import type { Draft } from '@/offline/record';
import { NoteField } from '../NoteField';
import { PhotoInput } from '../PhotoInput';
import { useRun } from '../run-context';
import { usePhoto } from '../use-photo';
import { Sheet } from './Sheet';

const CLASSES = [
  { value: 'A', label: 'A', note: 'can endanger life or destroy the engine' },
  { value: 'B', label: 'B', note: 'can stop the vehicle' },
  { value: 'C', label: 'C', note: 'an annoyance' },
];

const PHRASES = [
  'crankpin scratched',
  'shell damaged',
  'thread damaged',
  'part missing',
  'dirt inside',
  'does not fit',
];

/** Raises a deviation on the step, or a remark that blocks nothing. */
export function DeviationForm({ step, onClose }: { step: PlanStep | undefined; onClose: () => void }) {
  const run = useRun();
  const camera = useRef<HTMLInputElement>(null);
  const photo = usePhoto();
  const [criticalClass, setClass] = useState<CriticalClass>(step?.class ?? 'C');
  const [blocks, setBlocks] = useState(true);
  const [words, setWords] = useState('');
  const { taken } = photo;
  async function raise() {
    const drafts: Draft[] = [
      {
        kind: 'deviation-raised',
        step: step?.id,
        data: {
          class: criticalClass,
          words: words.trim(),
          blocks,
          ...(step?.rod === undefined ? {} : { rod: step.rod }),
        },
      },
    ];
    if (taken) {
      const { prepared, from } = taken;
      drafts.push({
        kind: 'photographed',
        step: step?.id,
        data: {
          photo: prepared.hash,
          bytes: prepared.bytes.byteLength,
          type: prepared.type,
          from,
          subject: `Deviation: ${words.trim()}`.slice(0, 200),
        },
      });
    }
    if (await run.record(drafts, taken ? { photos: [taken.prepared] } : {})) onClose();
  }
  return (
    <Sheet
      title="Raise a deviation"
      onClose={onClose}
      foot={
        <MainAction
          label="Raise the deviation"
          next={step && `on: ${step.title}`}
          why={words.trim() === '' ? 'say what is wrong' : undefined}
          isBusy={run.isBusy || photo.isPreparing}
          onPress={() => void raise()}
        />
      }
    >
      <div className="grid items-start gap-6 @4xl/sheet:grid-cols-2">
        <div className="grid gap-6">
          <NoteField label="What is wrong" phrases={PHRASES} value={words} onChange={setWords} />
        </div>
        <div className="grid gap-6">
          <ChoiceRows
            label="Class"
            choices={CLASSES}
            value={criticalClass}
            onChoose={(value) => setClass(value as CriticalClass)}
          />
          <ChoiceRows
            label="And the work"
            columns={2}
            choices={[
              { value: 'blocks', label: 'waits', note: 'for its disposition' },
              { value: 'remark', label: 'goes on', note: 'a remark' },
            ]}
            value={blocks ? 'blocks' : 'remark'}
            onChoose={(value) => setBlocks(value === 'blocks')}
          />
          <PhotoInput
            label="Photograph of the deviation"
            inputRef={camera}
            isCamera
            onPick={(file) => void photo.prepare(file, 'camera here')}
          />
          <div className="flex flex-wrap items-center gap-4">
            <QuietButton
              shape="wide"
              label={taken ? 'Photograph again' : 'Photograph it'}
              onPress={() => camera.current?.click()}
            />
            {taken && (
              <img src={taken.url} alt="The deviation" className="h-28 rounded-md border-2 border-strong" />
            )}
            {photo.trouble !== undefined && <p role="alert">{photo.trouble}</p>}
          </div>
        </div>
      </div>
    </Sheet>
  );
}
