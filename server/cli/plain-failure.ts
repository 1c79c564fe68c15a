/** Something that a command can't do, told in a sentence that says what the person can do; it is printed without a stack. */
export class PlainFailure extends Error {
  override name = 'PlainFailure';
}

/** Runs a command's main function, which answers the exit code: a PlainFailure is printed as its sentence, anything else with its stack; both end with code 1. */
export async function runCommand(main: () => Promise<number>): Promise<void> {
  try {
    process.exitCode = await main();
  } catch (error) {
    console.error(error instanceof PlainFailure ? `\n${error.message}` : error);
    process.exitCode = 1;
  }
}
