export type UnreadableFileCode =
  | 'bad-name'
  | 'unsupported-format'
  | 'wrong-content'
  | 'empty'
  | 'header-only'
  | 'no-header'
  | 'encrypted'
  | 'old-format'
  | 'damaged'
  | 'too-large'
  | 'suspicious-content';

/** A file that can't be read as a table. The message is one sentence or two, for the person: what is wrong and what to do. */
export class UnreadableFileError extends Error {
  readonly code: UnreadableFileCode;

  constructor(code: UnreadableFileCode, sentence: string, options?: ErrorOptions) {
    super(sentence, options);
    this.name = 'UnreadableFileError';
    this.code = code;
  }
}
