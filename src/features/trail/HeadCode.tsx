import { ScanCode } from '@/components/ScanCode';
import { headCode } from '@/domain/head-code';
import { dayAndTime } from '@/domain/time-words';
import type { ReadTrail } from './read-trail';

/** The newest signed head, to be kept by somebody outside: as a code to scan and as a line to read. */
export function HeadCode({ trail, zone }: { trail: ReadTrail; zone: string }) {
  const head = trail.heads.at(-1);
  if (head === undefined) return null;
  const code = headCode(head);
  return (
    <section className="trail-code">
      <ScanCode text={code} label={`Signed head at entry ${head.seq}`} />
      <div>
        <h2 className="part-title">{`Signed head at entry ${head.seq}`}</h2>
        <p>
          Signed {dayAndTime(head.at, zone)}. Print it or keep the line below: with it anybody can find out
          later whether this trail was cut short or written anew.
        </p>
        <code>{code}</code>
      </div>
    </section>
  );
}
