import { QueryClient, useInfiniteQuery, useQuery } from '@tanstack/react-query';
import type * as z from 'zod/mini';
import { offlineOfThisPage } from './offline';
import { callServer } from './server-call';

/** Why the server's answer is not there, in the server's own words where it gave some. */
export class NoAnswerError extends Error {
  override name = 'NoAnswerError';

  constructor(
    readonly code: string,
    message: string,
  ) {
    super(message);
  }
}

/** Asks the server and gives its answer, or throws why there is none. */
export async function askServer<S extends z.ZodMiniType>(path: string, answer: S): Promise<z.output<S>> {
  const asked = await callServer(offlineOfThisPage(), { path, answer });
  if (asked.ok) return asked.body;
  throw new NoAnswerError(asked.code, asked.why);
}

const SECOND = 1000;

/** One client a page; what is on the screen is asked for again while the page is looked at. */
export function newQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: { queries: { retry: 1, staleTime: 5 * SECOND, refetchInterval: 15 * SECOND } },
  });
}

/** What the server answers to a GET, kept fresh. */
export function useServer<S extends z.ZodMiniType>(path: string, answer: S) {
  return useQuery<z.output<S>, NoAnswerError>({ queryKey: [path], queryFn: () => askServer(path, answer) });
}

/** A list that the server gives a page at a time, by its cursor. */
export function useServerList<S extends z.ZodMiniType<{ cursor?: string | undefined }>>(
  path: string,
  answer: S,
) {
  return useInfiniteQuery<z.output<S>, NoAnswerError, { pages: z.output<S>[] }, string[], string | undefined>(
    {
      queryKey: [path, 'list'],
      initialPageParam: undefined,
      queryFn: ({ pageParam }) => {
        const separator = path.includes('?') ? '&' : '?';
        const cursor = pageParam === undefined ? '' : `${separator}cursor=${encodeURIComponent(pageParam)}`;
        return askServer(`${path}${cursor}`, answer);
      },
      getNextPageParam: (page) => (page as { cursor?: string }).cursor,
    },
  );
}
