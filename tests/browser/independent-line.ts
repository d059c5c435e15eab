/**
 * The numbers of the vaporization experiment worked out apart from the product: ordinary least squares of ln p on 1/T by
 * the textbook sums, the residual scatter for the noise of the readings, and the two shared offsets pushed through the whole
 * calculation one at a time. Constants: R = 8.314462618 J/(mol K) (CODATA 2018), 1 Torr = 101325/760 Pa (exact), 0 degC = 273.15 K.
 */
const gasConstant = 8.314462618;
const torr = 101325 / 760;

interface Line {
	slope: number;
	intercept: number;
	slopeVariance: number;
	meanX: number;
}

function line(celsius: number[], pressuresTorr: number[]): Line {
	const x = celsius.map((t) => 1 / (t + 273.15));
	const y = pressuresTorr.map((p) => Math.log(p * torr));
	const n = x.length;
	const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / n;
	const meanX = mean(x);
	const meanY = mean(y);
	const sxx = x.reduce((sum, value) => sum + (value - meanX) ** 2, 0);
	const sxy = x.reduce((sum, value, i) => sum + (value - meanX) * ((y[i] ?? NaN) - meanY), 0);
	const slope = sxy / sxx;
	const intercept = meanY - slope * meanX;
	const residual = x.reduce((sum, value, i) => sum + ((y[i] ?? NaN) - intercept - slope * value) ** 2, 0);
	return { slope, intercept, slopeVariance: residual / (n - 2) / sxx, meanX };
}

export interface Independent {
	/** kJ/mol */
	enthalpy: number;
	enthalpyUncertainty: number;
	/** K */
	boilingPoint: number;
	meanTemperature: number;
	/** 1/K-slope, in K */
	slope: number;
}

/** `offsets`: standard uncertainty of what all readings share, K and Torr. */
export function workOut(
	celsius: number[],
	pressuresTorr: number[],
	offsets: { kelvin: number; torr: number }
): Independent {
	const fitted = line(celsius, pressuresTorr);
	const enthalpyOf = ({ slope }: Line) => (-gasConstant * slope) / 1000;
	const enthalpy = enthalpyOf(fitted);
	const warmer =
		enthalpyOf(
			line(
				celsius.map((t) => t + offsets.kelvin),
				pressuresTorr
			)
		) - enthalpy;
	const higher =
		enthalpyOf(
			line(
				celsius,
				pressuresTorr.map((p) => p + offsets.torr)
			)
		) - enthalpy;
	const scatter = (gasConstant / 1000) * Math.sqrt(fitted.slopeVariance);
	return {
		enthalpy,
		enthalpyUncertainty: Math.hypot(scatter, warmer, higher),
		boilingPoint: fitted.slope / (Math.log(101325) - fitted.intercept),
		meanTemperature: 1 / fitted.meanX,
		slope: fitted.slope
	};
}
