/** The browser's room for records; absent where the page did not come over HTTPS. */
export function browserStorage(): StorageManager | undefined {
  return 'storage' in navigator ? navigator.storage : undefined;
}

/** Asks the browser not to clear the records when it is short of space; tells whether it agreed. */
export async function askToPersist(
  storage: Pick<StorageManager, 'persist' | 'persisted'> | undefined = browserStorage(),
): Promise<boolean> {
  if (!storage) return false;
  return (await storage.persisted()) || (await storage.persist());
}
