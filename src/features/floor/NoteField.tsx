import { useId, useRef, useState } from 'react';
import { QuietButton } from '@/components/QuietButton';

export interface NoteFieldProps {
  label: string;
  value: string;
  onChange: (value: string) => void;
  /** Words to pick instead of typing. */
  phrases?: string[] | undefined;
}

/** Words of one's own: picked, spoken where the browser can listen, or typed. */
export function NoteField({ label, value, onChange, phrases = [] }: NoteFieldProps) {
  const id = useId();
  const dictation = useDictation((heard) => onChange(joined(value, heard)));
  return (
    <div className="grid gap-3">
      <label htmlFor={id} className="text-xl font-bold">
        {label}
      </label>
      {phrases.length > 0 && (
        <div className="flex flex-wrap gap-3" role="group" aria-label={`${label}: words to pick`}>
          {phrases.map((phrase) => (
            <QuietButton
              key={phrase}
              shape="wide"
              label={phrase}
              onPress={() => onChange(joined(value, phrase, ', '))}
            />
          ))}
        </div>
      )}
      <div className="flex items-stretch gap-3">
        <textarea
          id={id}
          className="min-h-24 min-w-0 flex-1 resize-none rounded-md border-2 border-strong bg-sheet px-4 py-3 text-xl"
          rows={2}
          maxLength={2000}
          value={value}
          onChange={(event) => onChange(event.target.value)}
        />
        {dictation && (
          <QuietButton
            shape="wide"
            label={dictation.isListening ? 'Listening…' : 'Speak'}
            isPressed={dictation.isListening}
            onPress={dictation.toggle}
          />
        )}
      </div>
      <p className="text-sm text-soft">
        Leave out names, registrations and telephone numbers: notes stay readable for years.
      </p>
    </div>
  );
}

function joined(value: string, more: string, between = ' '): string {
  return value.trim() === '' ? more : `${value.trim()}${between}${more}`;
}

interface Recogniser {
  lang: string;
  start(): void;
  stop(): void;
  onresult: ((event: { results: ArrayLike<ArrayLike<{ transcript: string }>> }) => void) | null;
  onend: (() => void) | null;
  onerror: (() => void) | null;
}

/** Speech to text where the browser has it; its absence is no error. */
function useDictation(onHeard: (words: string) => void) {
  const [isListening, setListening] = useState(false);
  const running = useRef<Recogniser | null>(null);
  const Recognition = speechRecognition();
  if (!Recognition) return undefined;
  const make = Recognition;
  function toggle() {
    if (running.current) {
      running.current.stop();
      return;
    }
    const recogniser = new make();
    recogniser.lang = 'en-GB';
    recogniser.onresult = ({ results }) =>
      onHeard(Array.from(results, (result) => result[0]?.transcript ?? '').join(' '));
    recogniser.onerror = () => recogniser.stop();
    recogniser.onend = () => {
      running.current = null;
      setListening(false);
    };
    running.current = recogniser;
    setListening(true);
    recogniser.start();
  }
  return { isListening, toggle };
}

function speechRecognition(): (new () => Recogniser) | undefined {
  const known = globalThis as {
    SpeechRecognition?: new () => Recogniser;
    webkitSpeechRecognition?: new () => Recogniser;
  };
  return known.SpeechRecognition ?? known.webkitSpeechRecognition;
}
