import { divide, subtract, type Quantity } from '$lib/quantities';
import type { LineFit } from './line';

/**
 * The x at which the line reaches y: (y - intercept) / slope, with slope and intercept correlated as the fit left
 * them. A y that is exactly known (a standard pressure) adds nothing, and no scatter of a new reading is added either:
 * the question is where the line passes, not where the next reading would fall.
 */
export function inversePrediction(fit: LineFit, y: Quantity): Quantity {
	return divide(subtract(y, fit.intercept), fit.slope);
}
