import { forecastLine } from './forecast-line.ts';
import type { LineForecast, LineInput } from './types.ts';

/** Body of a worker thread: one line's fit and forecast. */
export default function forecastOneLine(input: LineInput): LineForecast {
  return forecastLine(input);
}
