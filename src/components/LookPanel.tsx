import { useState, useSyncExternalStore } from 'react';
import { ChoiceRows } from './ChoiceRows';
import { chooseLook, readLook, watchLook, type LookSettings } from './look-settings';

/** Lets a person set how this device shows the program: theme, size of text, hand, movement. */
export function LookPanel() {
  const [, redraw] = useState(0);
  // The storage belongs to the browser: the page as the server made it leaves the panel out.
  const chosen = useSyncExternalStore(
    watchLook,
    () => JSON.stringify(readLook(localStorage)),
    () => null,
  );
  if (chosen === null) return null;
  const look = readLook(localStorage);

  function choose<K extends keyof LookSettings>(key: K, value: LookSettings[K]) {
    chooseLook(key, value, { storage: localStorage, root: document.documentElement });
    redraw((count) => count + 1);
  }

  return (
    <div className="look-panel">
      <ChoiceRows
        label="Theme"
        columns={3}
        value={look.theme}
        onChoose={(theme) => choose('theme', theme)}
        choices={[
          { value: 'system', label: 'Usual' },
          { value: 'paper', label: 'Paper', note: 'light' },
          { value: 'graphite', label: 'Graphite', note: 'dark' },
        ]}
      />
      <ChoiceRows
        label="Size of text"
        columns={3}
        value={look.text}
        onChoose={(text) => choose('text', text)}
        choices={[
          { value: 'normal', label: 'Normal' },
          { value: 'large', label: 'Large' },
          { value: 'largest', label: 'Largest' },
        ]}
      />
      <ChoiceRows
        label="Main action under"
        columns={2}
        value={look.hand}
        onChoose={(hand) => choose('hand', hand)}
        choices={[
          { value: 'left', label: 'Left hand' },
          { value: 'right', label: 'Right hand' },
        ]}
      />
      <ChoiceRows
        label="Movement on the screen"
        columns={2}
        value={look.motion}
        onChoose={(motion) => choose('motion', motion)}
        choices={[
          { value: 'system', label: 'Usual' },
          { value: 'reduced', label: 'Little' },
        ]}
      />
    </div>
  );
}
