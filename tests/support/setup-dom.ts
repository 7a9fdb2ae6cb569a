import '@testing-library/jest-dom/vitest';
import 'fake-indexeddb/auto';
import { cleanup, configure } from '@testing-library/react';
import { afterEach } from 'vitest';
import { fillJsdomGaps } from './jsdom-gaps';

fillJsdomGaps();
// The first time that a test waits for a screen, its modules are still to be read and turned into JavaScript.
configure({ asyncUtilTimeout: 4000 });

afterEach(() => cleanup());
