import { fileURLToPath } from 'node:url';

/** The folder that holds package.json, whatever folder a command was called from. */
export const ROOT = fileURLToPath(new URL('../../', import.meta.url));
