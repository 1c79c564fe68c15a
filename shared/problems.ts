/** The only table from a problem's type to its HTTP status and title (RFC 9457). `detail` is written where the problem is thrown. */
export const problems = {
  'not-signed-in': { status: 401, title: 'Please sign in' },
  'wrong-credentials': { status: 401, title: 'Sign-in failed' },
  'too-many-attempts': { status: 429, title: 'Too many attempts' },
  'not-allowed': { status: 403, title: 'Not allowed' },
  'foreign-origin': { status: 403, title: 'Request from another site' },
  'not-found': { status: 404, title: 'Not found' },
  'invalid-request': { status: 422, title: 'Some of what was sent can’t be used' },
  'unreadable-file': { status: 422, title: 'The file can’t be read' },
  'file-too-large': { status: 413, title: 'The file is too large' },
  'mapping-incomplete': { status: 422, title: 'The columns aren’t understood yet' },
  'nothing-to-accept': { status: 422, title: 'Nothing to accept' },
  'wrong-state': { status: 409, title: 'Not possible in this state' },
  'already-exists': { status: 409, title: 'Already there' },
  'plan-locked': { status: 409, title: 'These weeks are locked' },
  'plan-submitted': { status: 409, title: 'The line is submitted' },
  'stale-cells': { status: 409, title: 'Changed by somebody else' },
  'cannot-spread': { status: 422, title: 'The change can’t be spread' },
  'no-forecast': { status: 409, title: 'No forecast yet' },
  'no-sales': { status: 409, title: 'No sales yet' },
  'link-spent': { status: 410, title: 'This link can’t be used any more' },
  'database-away': { status: 503, title: 'The database can’t be reached' },
  unexpected: { status: 500, title: 'Something went wrong' },
} as const satisfies Record<string, { status: number; title: string }>;

export type ProblemType = keyof typeof problems;
