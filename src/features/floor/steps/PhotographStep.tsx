import { useRef } from 'react';
import { MainAction } from '@/components/MainAction';
import { QuietButton } from '@/components/QuietButton';
import { Sign } from '@/components/Sign';
import { lastOf } from '@/domain/job-kept';
import type { StepOf } from '@/domain/plan';
import { PhotoInput } from '../PhotoInput';
import { StepFrame } from '../StepFrame';
import { usePhoto, type TakenPhoto } from '../use-photo';
import { useRun } from '../run-context';

/** A photograph: taken, looked at, kept; or taken again before it is kept. */
export function PhotographStep({ step }: { step: StepOf<'photograph'> }) {
  const run = useRun();
  const camera = useRef<HTMLInputElement>(null);
  const files = useRef<HTMLInputElement>(null);
  const photo = usePhoto();
  const already = lastOf(run.state.steps[step.id], 'photographed');
  async function keep(taken: TakenPhoto) {
    const { prepared, from } = taken;
    const draft = {
      kind: 'photographed' as const,
      step: step.id,
      data: {
        photo: prepared.hash,
        bytes: prepared.bytes.byteLength,
        type: prepared.type,
        from,
        subject: step.subject,
        ...(step.identity === true ? { identity: true } : {}),
      },
    };
    if (await run.record([draft], { photos: [prepared] })) photo.clear();
  }
  const { taken } = photo;
  return (
    <StepFrame
      step={step}
      quiet={
        taken ? (
          <QuietButton label="Take again" onPress={() => camera.current?.click()} />
        ) : (
          <QuietButton label="From a file" onPress={() => files.current?.click()} />
        )
      }
      main={
        taken ? (
          <MainAction
            label="Keep the photograph"
            next="touch, pedal or space"
            isBusy={run.isBusy}
            onPress={() => void keep(taken)}
          />
        ) : (
          <MainAction
            label="Take the photograph"
            next={already ? 'one more' : undefined}
            isBusy={photo.isPreparing || run.isBusy}
            onPress={() => camera.current?.click()}
          />
        )
      }
    >
      <PhotoInput
        label="Photograph from the camera"
        inputRef={camera}
        isCamera
        onPick={(file) => void photo.prepare(file, 'camera here')}
      />
      <PhotoInput
        label="Photograph from a file"
        inputRef={files}
        onPick={(file) => void photo.prepare(file, 'from file')}
      />
      {photo.warning !== undefined && <p className="pb-3 text-lg font-bold text-unsure">{photo.warning}</p>}
      {photo.trouble !== undefined && (
        <p role="alert" className="flex items-center gap-2 pb-3 text-lg font-bold text-outside">
          <Sign name="cross" />
          {photo.trouble}
        </p>
      )}
      {taken ? (
        <figure>
          <img
            src={taken.url}
            alt={step.subject}
            className="max-h-[46vh] max-w-full rounded-md border-2 border-strong object-contain"
          />
          <figcaption className="pt-2 text-lg text-soft">
            {step.subject}, {taken.from}
          </figcaption>
        </figure>
      ) : (
        <p className="text-xl">
          {photo.isPreparing ? (
            'The picture is being made ready…'
          ) : (
            <>
              On it: <b>{step.subject}</b>.{' '}
              {step.identity === true && 'It shows identity, and can be erased later.'}
            </>
          )}
        </p>
      )}
    </StepFrame>
  );
}
