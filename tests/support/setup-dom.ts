import '@testing-library/jest-dom/vitest';
import 'fake-indexeddb/auto';
import { cleanup } from '@testing-library/react';
import { afterEach } from 'vitest';
import { teachDialogs } from './dialog';

teachDialogs(HTMLDialogElement.prototype);

afterEach(() => cleanup());
