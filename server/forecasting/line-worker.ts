import { forecastLine } from './forecast-line.ts';
import type { LineForecast, LineInput } from './types.ts';

/** Body of a worker thread: one line's fit, its diagnosis and its forecast. */
export default function forecastOneLine(input: LineInput): LineForecast {
  return forecastLine(input, { isDiagnosed: true });
}
