export interface LoudActionProps {
  /** Which bolt, as "4B". */
  name: string;
  /** What to do with it, as "turn through". */
  words: string;
  /** How much, as "110°" or "25"; an act without a figure leaves it out. */
  figure?: string | undefined;
  unit?: string | undefined;
  /** The same in the shop's other unit, as "29.5 lbf·ft". */
  beside?: string | undefined;
  /** Where in the programme, as "Cycle 2 of 3, the angle pass". */
  step?: string | undefined;
}

/** Which and how much, side by side and equally loud: the wrong bolt is the worse error. */
export function LoudAction({ name, words, figure, unit, beside, step }: LoudActionProps) {
  return (
    <div className="loud">
      <h1 className="loud-row">
        <span className="loud-name">{name} </span>
        <span className="loud-what">
          <span className="loud-words">{words} </span>
          {figure !== undefined && (
            <span className="loud-figure">
              {figure}
              {unit !== undefined && <span className="loud-unit"> {unit}</span>}
            </span>
          )}
          {beside !== undefined && <span className="loud-beside"> {beside}</span>}
        </span>
      </h1>
      {step !== undefined && <p className="loud-step">{step}</p>}
    </div>
  );
}
