import { useEffect } from 'react';

/** Keys of a keyboard, a Bluetooth pedal or a pocket clicker that press the main action. */
const MAIN_KEYS = new Set([' ', 'Enter', 'PageDown', 'ArrowRight', 'AudioVolumeUp']);
const REPEAT_KEYS = new Set(['PageUp', 'ArrowLeft', 'r', 'R']);

/** Lets keys and pedals press the main action, and a second key repeat the prompt aloud. */
export function useMainKeys(isListening: boolean): void {
  useEffect(() => {
    if (!isListening) return;
    function press(event: KeyboardEvent): void {
      if (event.repeat || event.defaultPrevented || event.ctrlKey || event.altKey || event.metaKey) return;
      if (belongsToField(event.target) || document.querySelector('dialog[open]')) return;
      const main = document.querySelector<HTMLElement>('.main-action');
      if (MAIN_KEYS.has(event.key)) {
        // A focused button answers Space and Enter itself.
        if ((event.key === ' ' || event.key === 'Enter') && isButton(event.target)) return;
        event.preventDefault();
        main?.click();
      } else if (REPEAT_KEYS.has(event.key)) {
        speakPrompt();
      }
    }
    addEventListener('keydown', press);
    return () => removeEventListener('keydown', press);
  }, [isListening]);
}

function belongsToField(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest('input, textarea, select') !== null;
}

function isButton(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest('button, a, [role="button"]') !== null;
}

/** Says the present action aloud where the browser can; its absence is no error. */
function speakPrompt(): void {
  const words = document.querySelector('[data-prompt]')?.textContent;
  if (!words || !('speechSynthesis' in globalThis)) return;
  speechSynthesis.cancel();
  const utterance = new SpeechSynthesisUtterance(
    words.replaceAll('°', ' degrees').replaceAll('N·m', ' newton metres'),
  );
  utterance.lang = 'en-GB';
  speechSynthesis.speak(utterance);
}
