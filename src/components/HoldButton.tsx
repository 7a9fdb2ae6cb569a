import {
  useEffect,
  useId,
  useRef,
  useState,
  type KeyboardEvent,
  type MouseEvent,
  type PointerEvent,
  type RefObject,
} from 'react';

export interface HoldButtonProps {
  label: string;
  /** Small words under the label; they change to "keep holding" while it is held. */
  hint?: string | undefined;
  onHeld: () => void;
  holdMs?: number | undefined;
  /** `stop` for an act that condemns or deletes. */
  tone?: 'plain' | 'stop' | undefined;
  /** `main` takes the place of the main action. */
  size?: 'wide' | 'main' | undefined;
  why?: string | undefined;
}

/** How long a screen reader's first press waits for the second. */
const ARMED_MS = 5000;

/** A button for acts that can't be undone: it acts only after being held, by finger, pointer or key. */
export function HoldButton({
  label,
  hint = 'press and hold',
  onHeld,
  holdMs = 1200,
  tone = 'plain',
  size = 'wide',
  why,
}: HoldButtonProps) {
  const id = useId();
  const progressRef = useRef<HTMLSpanElement>(null);
  const { isHeld, listeners } = useHold({ holdMs, onHeld, isBarred: why !== undefined, progressRef });
  const [isArmed, arm, disarm] = useArmed();
  const words = why ?? (isHeld ? 'keep holding' : isArmed ? 'press again to confirm' : hint);

  function pressWithoutHolding(event: MouseEvent) {
    // A screen reader presses without a pointer and can't hold: it presses twice instead.
    if (event.detail !== 0 || isHeld || why !== undefined) return;
    if (isArmed) {
      disarm();
      onHeld();
    } else arm();
  }

  return (
    <button
      type="button"
      className="hold-button"
      aria-labelledby={`${id}-label`}
      aria-describedby={`${id}-words`}
      data-tone={tone}
      data-size={size}
      data-held={isHeld || undefined}
      aria-disabled={why === undefined ? undefined : true}
      onClick={pressWithoutHolding}
      onContextMenu={(event) => event.preventDefault()}
      {...listeners}
    >
      <span className="hold-label" id={`${id}-label`}>
        {label}
      </span>
      <span className="hold-hint" id={`${id}-words`} aria-live="polite">
        {words}
      </span>
      <span className="hold-progress" aria-hidden="true" ref={progressRef} />
    </button>
  );
}

interface Hold {
  holdMs: number;
  onHeld: () => void;
  isBarred: boolean;
  progressRef: RefObject<HTMLSpanElement | null>;
}

/** Follows one hold from press to release and tells once when it lasted long enough. */
function useHold({ holdMs, onHeld, isBarred, progressRef }: Hold) {
  const [isHeld, setHeld] = useState(false);
  const timer = useRef<ReturnType<typeof setTimeout> | undefined>(undefined);
  useEffect(() => () => clearTimeout(timer.current), []);

  function start() {
    if (isBarred || timer.current !== undefined) return;
    setHeld(true);
    progressRef.current?.style.setProperty('transition-duration', `${holdMs}ms`);
    timer.current = setTimeout(() => {
      stop();
      onHeld();
    }, holdMs);
  }

  function stop() {
    clearTimeout(timer.current);
    timer.current = undefined;
    progressRef.current?.style.setProperty('transition-duration', '120ms');
    setHeld(false);
  }

  function startByKey(event: KeyboardEvent) {
    if (!isPressKey(event)) return;
    event.preventDefault();
    if (!event.repeat) start();
  }

  function stopByKey(event: KeyboardEvent) {
    // Else the browser makes a click of it, which would look like a screen reader's press.
    if (isPressKey(event)) event.preventDefault();
    stop();
  }

  function startByPointer(event: PointerEvent) {
    if (event.isPrimary && event.button === 0) start();
  }

  const listeners = {
    onPointerDown: startByPointer,
    onPointerUp: stop,
    onPointerLeave: stop,
    onPointerCancel: stop,
    onKeyDown: startByKey,
    onKeyUp: stopByKey,
    onBlur: stop,
  };
  return { isHeld, listeners };
}

function isPressKey(event: KeyboardEvent): boolean {
  return event.key === 'Enter' || event.key === ' ';
}

/** Remembers for a few seconds that a first press came without a finger. */
function useArmed(): [boolean, () => void, () => void] {
  const [isArmed, setArmed] = useState(false);
  useEffect(() => {
    if (!isArmed) return;
    const timer = setTimeout(() => setArmed(false), ARMED_MS);
    return () => clearTimeout(timer);
  }, [isArmed]);
  return [isArmed, () => setArmed(true), () => setArmed(false)];
}
