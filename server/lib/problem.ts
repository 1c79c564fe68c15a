import type { ErrorRequestHandler } from 'express';
import { DatabaseError, ConnectionError } from 'sequelize';
import type { z } from 'zod';
import type { Problem, ProblemDetail } from '../../shared/contracts/problem.ts';
import { problems, type ProblemType } from '../../shared/problems.ts';

interface ProblemMembers {
  errors?: readonly ProblemDetail[];
  conflicts?: readonly unknown[];
}

/** Something a person can be told: answered as problem+json with the status of the table. `detail` says what to do now. */
export class ProblemError extends Error {
  readonly type: ProblemType;
  readonly detail: string;
  readonly members: ProblemMembers;

  constructor(type: ProblemType, detail: string, members: ProblemMembers = {}) {
    super(`${type}: ${detail}`);
    this.name = 'ProblemError';
    this.type = type;
    this.detail = detail;
    this.members = members;
  }
}

/** Parses what came in at an edge; throws `invalid-request` with a pointer for each thing that doesn't fit. */
export function parseRequest<Schema extends z.ZodType>(schema: Schema, value: unknown): z.infer<Schema> {
  const parsed = schema.safeParse(value);
  if (parsed.success) return parsed.data;
  throw new ProblemError('invalid-request', 'Correct the fields named below and send again.', {
    errors: parsed.error.issues.map((issue) => ({
      pointer: `/${issue.path.map((part) => String(part).replaceAll('~', '~0').replaceAll('/', '~1')).join('/')}`,
      detail: issue.message,
    })),
  });
}

/** RFC 9457 document of a problem. */
export function describeProblem(error: ProblemError, instance: string): Problem {
  const { status, title } = problems[error.type];
  const { errors, conflicts } = error.members;
  return {
    type: `/problems/${error.type}`,
    title,
    status,
    detail: error.detail,
    instance,
    ...(errors ? { errors: errors.slice(0, 100), errorCount: errors.length } : {}),
    ...(conflicts ? { conflicts: [...conflicts] } : {}),
  };
}

/** Last handler: known problems as they are, what nobody foresaw as a bare 500 with its cause in the log. */
export const problemHandler: ErrorRequestHandler = (error: unknown, request, response, next) => {
  if (response.headersSent) {
    next(error);
    return;
  }
  const problem = toProblem(error);
  if (problem.type === 'unexpected' || problem.type === 'database-away') request.log.error({ err: error });
  response
    .status(problems[problem.type].status)
    .type('application/problem+json')
    .send(JSON.stringify(describeProblem(problem, typeof request.id === 'string' ? request.id : '')));
};

function toProblem(error: unknown): ProblemError {
  if (error instanceof ProblemError) return error;
  if (error instanceof ConnectionError) {
    return new ProblemError(
      'database-away',
      'Nothing was changed. Try again in a moment; if it stays, tell your administrator.',
    );
  }
  if (error instanceof DatabaseError && /check constraint|out of range|invalid input/.test(error.message)) {
    return new ProblemError('unexpected', 'Nothing was changed. Tell your administrator the number of this request.');
  }
  if (isBodyParserError(error)) {
    return error.status === 413
      ? new ProblemError('file-too-large', 'Send less in one request.')
      : new ProblemError('invalid-request', 'The body of the request isn’t valid JSON.');
  }
  return new ProblemError('unexpected', 'Nothing was changed. Tell your administrator the number of this request.');
}

function isBodyParserError(error: unknown): error is Error & { status: number } {
  return (
    error instanceof Error &&
    'status' in error &&
    'type' in error &&
    typeof error.status === 'number' &&
    error.status < 500
  );
}
