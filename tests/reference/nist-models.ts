import { dual, type Dual, type Model } from '$lib/regression';

const { add, subtract, multiply, divide, power, exp, cos, sin, atan, negate, constant } = dual;
const c = constant;
const nothing = c(NaN);
const square = (a: Dual) => multiply(a, a);

/** A model in numbered parameters b(1), b(2), ... and x(1), x(2), ... as NIST writes them. */
function model(write: (b: (i: number) => Dual, x: Dual, x2: Dual) => Dual): Model {
	return (parameters, [x = nothing, x2 = nothing]) => write((i) => parameters[i - 1] ?? nothing, x, x2);
}

/** a + b x + c x^2 + ... */
function series(x: Dual, ...terms: Dual[]): Dual {
	return terms.reduceRight((sum, term) => add(multiply(sum, x), term));
}

/** top exp(-rate x) */
const decay = (top: Dual, rate: Dual, x: Dual) => multiply(top, exp(negate(multiply(rate, x))));
/** top exp(-(x - at)^2 / width^2) */
const peak = (top: Dual, at: Dual, width: Dual, x: Dual) =>
	multiply(top, exp(negate(divide(square(subtract(x, at)), square(width)))));

const chwirut = model((b, x) => divide(exp(negate(multiply(b(1), x))), add(b(2), multiply(b(3), x))));
const gauss = model((b, x) =>
	add(decay(b(1), b(2), x), add(peak(b(3), b(4), b(5), x), peak(b(6), b(7), b(8), x)))
);
const lanczos = model((b, x) => add(decay(b(1), b(2), x), add(decay(b(3), b(4), x), decay(b(5), b(6), x))));
const saturation = model((b, x) => multiply(b(1), subtract(c(1), exp(negate(multiply(b(2), x))))));
const cubics = model((b, x) => divide(series(x, b(1), b(2), b(3), b(4)), series(x, c(1), b(5), b(6), b(7))));
const waves = (x: Dual, period: Dual, a: Dual, b: Dual) => {
	const angle = divide(multiply(c(2 * Math.PI), x), period);
	return add(multiply(a, cos(angle)), multiply(b, sin(angle)));
};
const logistic = (b: (i: number) => Dual, x: Dual) => add(c(1), exp(subtract(b(2), multiply(b(3), x))));

/** The models of the nonlinear collection. */
export const nistModels: Record<string, Model> = {
	Bennett5: model((b, x) => multiply(b(1), power(add(b(2), x), divide(c(-1), b(3))))),
	BoxBOD: saturation,
	Chwirut1: chwirut,
	Chwirut2: chwirut,
	DanWood: model((b, x) => multiply(b(1), power(x, b(2)))),
	ENSO: model((b, x) =>
		[b(1), waves(x, c(12), b(2), b(3)), waves(x, b(4), b(5), b(6)), waves(x, b(7), b(8), b(9))].reduce(add)
	),
	Eckerle4: model((b, x) =>
		multiply(divide(b(1), b(2)), exp(multiply(c(-0.5), square(divide(subtract(x, b(3)), b(2))))))
	),
	Gauss1: gauss,
	Gauss2: gauss,
	Gauss3: gauss,
	Hahn1: cubics,
	Kirby2: model((b, x) => divide(series(x, b(1), b(2), b(3)), series(x, c(1), b(4), b(5)))),
	Lanczos1: lanczos,
	Lanczos2: lanczos,
	Lanczos3: lanczos,
	MGH09: model((b, x) =>
		divide(multiply(b(1), add(square(x), multiply(x, b(2)))), add(square(x), add(multiply(x, b(3)), b(4))))
	),
	MGH10: model((b, x) => multiply(b(1), exp(divide(b(2), add(x, b(3)))))),
	MGH17: model((b, x) => add(b(1), add(decay(b(2), b(4), x), decay(b(3), b(5), x)))),
	Misra1a: saturation,
	Misra1b: model((b, x) =>
		multiply(b(1), subtract(c(1), power(add(c(1), divide(multiply(b(2), x), c(2))), c(-2))))
	),
	Misra1c: model((b, x) =>
		multiply(b(1), subtract(c(1), power(add(c(1), multiply(c(2), multiply(b(2), x))), c(-0.5))))
	),
	Misra1d: model((b, x) => divide(multiply(b(1), multiply(b(2), x)), add(c(1), multiply(b(2), x)))),
	Nelson: model((b, x, x2) => subtract(b(1), multiply(b(2), multiply(x, exp(negate(multiply(b(3), x2))))))),
	Rat42: model((b, x) => divide(b(1), logistic(b, x))),
	Rat43: model((b, x) => divide(b(1), power(logistic(b, x), divide(c(1), b(4))))),
	Roszman1: model((b, x) =>
		subtract(subtract(b(1), multiply(b(2), x)), divide(atan(divide(b(3), subtract(x, b(4)))), c(Math.PI)))
	),
	Thurber: cubics
};
