import type { z } from 'zod';
import { Problem, type ProblemDetail } from '../../shared/contracts/problem.ts';
import { problems, type ProblemType } from '../../shared/problems.ts';

export type ClientProblemType = ProblemType | 'unreachable' | 'unreadable-answer';

/** A refused or failed request, as the server's problem document states it. Switch on `type`, show `detail`. */
export class ProblemError extends Error {
  readonly type: ClientProblemType;
  readonly title: string;
  readonly status: number;
  readonly detail: string;
  readonly instance: string | null;
  readonly errors: ProblemDetail[];
  readonly conflicts: unknown[];

  constructor(
    problem: { type: ClientProblemType; title: string; status: number; detail: string } & Partial<
      Pick<Problem, 'instance' | 'errors' | 'conflicts'>
    >,
    options?: ErrorOptions,
  ) {
    super(problem.detail, options);
    this.name = 'ProblemError';
    this.type = problem.type;
    this.title = problem.title;
    this.status = problem.status;
    this.detail = problem.detail;
    this.instance = problem.instance ?? null;
    this.errors = problem.errors ?? [];
    this.conflicts = problem.conflicts ?? [];
  }
}

export interface RequestOptions {
  method?: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';
  /** Sent as JSON; a FormData goes as it is. */
  body?: unknown;
  query?: Record<string, string | number | null | undefined>;
  signal?: AbortSignal;
}

type SignedOutListener = () => void;
const signedOutListeners = new Set<SignedOutListener>();

/** Calls `listener` whenever the server says that nobody is signed in. Returns the way to stop. */
export function onSignedOut(listener: SignedOutListener): () => void {
  signedOutListeners.add(listener);
  return () => signedOutListeners.delete(listener);
}

export function apiPath(path: string, query: RequestOptions['query'] = {}): string {
  const search = new URLSearchParams();
  for (const [name, value] of Object.entries(query)) {
    if (value !== null && value !== undefined) search.set(name, String(value));
  }
  const text = search.toString();
  return `/api${path}${text === '' ? '' : `?${text}`}`;
}

/** The problem a response states; one that isn't a problem document (a proxy's page, an empty body) becomes `unexpected`. */
export async function readProblem(response: Response): Promise<ProblemError> {
  const body: unknown = await response.json().catch(() => null);
  const parsed = Problem.safeParse(body);
  if (!parsed.success) {
    return new ProblemError({
      type: 'unexpected',
      title: problems.unexpected.title,
      status: response.status,
      detail: `The server answered with status ${response.status} and no explanation. Try again in a moment.`,
    });
  }
  const key = parsed.data.type.replace(/^.*\/problems\//, '');
  return new ProblemError({ ...parsed.data, type: key in problems ? (key as ProblemType) : 'unexpected' });
}

async function send(path: string, options: RequestOptions): Promise<Response> {
  const { method = 'GET', body, query, signal } = options;
  const isForm = body instanceof FormData;
  let response: Response;
  try {
    response = await fetch(apiPath(path, query), {
      method,
      signal,
      credentials: 'same-origin',
      headers: {
        accept: 'application/json',
        ...(body === undefined || isForm ? {} : { 'content-type': 'application/json' }),
      },
      body: body === undefined ? undefined : isForm ? body : JSON.stringify(body),
    });
  } catch (cause) {
    if (cause instanceof DOMException && cause.name === 'AbortError') throw cause;
    throw new ProblemError(
      {
        type: 'unreachable',
        title: 'Fairweek can’t be reached',
        status: 0,
        detail: 'The server didn’t answer. Check the connection, then try again; nothing was changed by this attempt.',
      },
      { cause },
    );
  }
  if (response.ok) return response;
  const problem = await readProblem(response);
  if (problem.type === 'not-signed-in') for (const listener of signedOutListeners) listener();
  throw problem;
}

/** Sends one request and parses the answer by its contract. Throws ProblemError, also where the answer breaks the contract. */
export async function request<Schema extends z.ZodType>(
  schema: Schema,
  path: string,
  options: RequestOptions = {},
): Promise<z.output<Schema>> {
  const response = await send(path, options);
  const parsed = schema.safeParse(await response.json().catch(() => undefined));
  if (parsed.success) return parsed.data;
  throw new ProblemError(
    {
      type: 'unreadable-answer',
      title: 'The answer can’t be read',
      status: response.status,
      detail: 'Page and server don’t fit together any more. Load the page again.',
    },
    { cause: parsed.error },
  );
}

/** Sends one request whose answer has no content. */
export async function requestNothing(path: string, options: RequestOptions = {}): Promise<void> {
  await send(path, options);
}

/** What to tell the person about anything thrown. */
export function describeError(error: unknown): { title: string; detail: string } {
  if (error instanceof ProblemError) return { title: error.title, detail: error.detail };
  return { title: problems.unexpected.title, detail: 'The page met something nobody foresaw. Load it again.' };
}
