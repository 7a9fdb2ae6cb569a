import { FloorFrame } from '@/components/FloorFrame';

/** What stands there for the moment in which a job, or a screen of it, is read. */
export function Opening() {
  const cell = { label: 'Opening…' };
  return (
    <FloorFrame job={cell} phase={{ label: '' }} sync={{ label: '' }} person={{ label: '' }}>
      <p className="floor-then">The job is read from this tablet.</p>
    </FloorFrame>
  );
}
