import { engineVersion } from './engine-version';
import type { Evaluation, Readings, Worksheet } from './types';

/** Works up the readings. Never throws on readings: what is missing or cannot be read is a problem of the evaluation. */
export function evaluate(_worksheet: Worksheet, _readings: Readings): Evaluation {
	return { engine: engineVersion, problems: [], quantities: {}, tables: {}, fits: {}, comparisons: {}, figures: {}, workings: {} };
}
