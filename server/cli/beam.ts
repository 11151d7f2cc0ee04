/** One beam case from the command line: `npm run -s beam -- JSON`, answer as JSON on stdout, for checks of the transport. */
import { AppError } from '../errors.ts';
import { type BeamCase, runBeam } from '../transport/beam.ts';

try {
  const text = process.argv[2];
  if (text === undefined) throw new AppError('BEAM_INVALID', 'Give the case as one argument of JSON.');
  console.log(JSON.stringify(runBeam(JSON.parse(text) as BeamCase, () => performance.now())));
} catch (error) {
  if (!(error instanceof AppError) && !(error instanceof SyntaxError)) throw error;
  console.error(error.message);
  process.exitCode = 1;
}
