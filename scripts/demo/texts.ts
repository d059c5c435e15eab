import type { SeededRandom } from './random';

/** How good a section is, 0 to 4, drives which of these sentences a demo author writes. */
type Tier = 'thin' | 'fair' | 'full';
const tierOf = (quality: number): Tier => (quality < 1.8 ? 'thin' : quality < 3.1 ? 'fair' : 'full');

const abstracts: Record<Tier, string[]> = {
	thin: [
		'We boiled water at different pressures and made a graph. The enthalpy came out near the value in the book, so the experiment worked.',
		'In this experiment the boiling point of water was found at several pressures. The slope of the line gives the enthalpy, which was about 41 kJ/mol.'
	],
	fair: [
		'The boiling temperature of water was measured at ten pressures between 400 and 760 torr. A straight line through $\\ln p$ against $1/T$ gives an enthalpy of vaporization of :value[H_vap]. The literature value is a little lower.',
		'The vapour pressure of water was followed by the boiling-point method. From the slope we find :value[H_vap] and from the line a normal boiling point of :value[T_b].'
	],
	full: [
		'The vapour pressure of water was measured at ten temperatures between 83 and 100 °C by boiling under reduced pressure. A straight line through $\\ln p$ against $1/T$ gives a molar enthalpy of vaporization of :value[H_vap] at the mean temperature :value[T_h], and a normal boiling point of :value[T_b]. Treating the vapour as ideal overstates the enthalpy by about 1.4 %, which is as large as our standard uncertainty.',
		'We report the molar enthalpy of vaporization of water, :value[H_vap], valid at :value[T_h], from ten boiling points at pressures between 400 and 760 torr. The line also gives the normal boiling point, :value[T_b]. The difference from the calorimetric value has the sign and the size that an ideal-gas treatment explains.'
	]
};

const introductions: Record<Tier, string[]> = {
	thin: [
		'Water boils when its vapour pressure is the pressure above it. The Clausius-Clapeyron equation connects the two.'
	],
	fair: [
		'A liquid boils where its vapour pressure equals the pressure above it. If the vapour is ideal and the volume of the liquid is neglected, the Clausius-Clapeyron equation reads\n\n$$\\frac{\\mathrm{d}\\ln p}{\\mathrm{d}(1/T)} = -\\frac{\\Delta_\\mathrm{vap}H}{R}.$$\n\nThe slope of a plot of $\\ln p$ against $1/T$ gives the enthalpy.'
	],
	full: [
		'A pure liquid in equilibrium with its vapour has one degree of freedom: to each temperature belongs one pressure. The Clapeyron equation gives the slope of that line exactly,\n\n$$\\frac{\\mathrm{d}p}{\\mathrm{d}T} = \\frac{\\Delta_\\mathrm{vap}H}{T\\,\\Delta_\\mathrm{vap}V}.$$\n\nNeglecting the volume of the liquid and taking the vapour as ideal turns it into\n\n$$\\ln\\frac{p}{\\mathrm{Pa}} = a - \\frac{\\Delta_\\mathrm{vap}H}{R\\,T}.$$\n\nBoth assumptions bias the enthalpy upwards, since $\\Delta_\\mathrm{vap}V$ is in truth smaller; near 365 K the compression factor of the vapour is about 0.987. The line holds for a mean temperature, because the enthalpy itself falls as the temperature rises.'
	]
};

const methods: Record<Tier, string[]> = {
	thin: ['We followed the guide. The pressure was lowered and the temperature read when it was steady.'],
	fair: [
		'Water with a boiling aid was heated in a guarded flask under a reflux condenser. The pressure was set with the needle valve, and the temperature was read when it had been steady for two minutes.\n\n::table[readings]'
	],
	full: [
		'About 150 mL of distilled water with a boiling aid was heated in a guarded flask under a reflux condenser, behind the screen and with face protection. Air was admitted through the needle valve until the manometer was steady for two minutes; only then were temperature and pressure read, by two people independently.\n\nThe pressures were taken in rising order, and the apparatus was tested for leaks before the first reading with the heater off.\n\n::table[readings]'
	]
};

const results: Record<Tier, string[]> = {
	thin: ['The graph is a straight line.\n\n::figure[line]\n\nThe enthalpy is 41.2 kJ/mol.'],
	fair: [
		'The fitted slope is :value[slope], with an intercept of :value[intercept].\n\n::figure[line]\n\nThe enthalpy of vaporization is :value[H_vap].\n\n::comparison[H_vap]'
	],
	full: [
		'The line has the slope :value[slope] and the intercept :value[intercept]; both standard uncertainties come from the scatter about the line and from the shared offsets of thermometer and gauge.\n\n::figure[line]\n\nThe residuals show no trend with temperature. One enthalpy follows from the slope:\n\n::workings[H_vap]\n\nThe normal boiling point, by inverse prediction at 101 325 Pa, is :value[T_b].\n\n::comparison[H_vap]'
	]
};

const discussions: Record<Tier, string[]> = {
	thin: ['The result is good. Errors came from reading the thermometer and human error.'],
	fair: [
		'Our value is somewhat above the literature. The thermometer was read to 0.1 K and the pressure to 0.5 torr. Superheating would make the temperatures too high. A better thermometer would help most.'
	],
	full: [
		'The measured enthalpy lies above the calorimetric value at the same temperature. Taking the vapour as ideal explains a difference of about 0.57 kJ/mol, 1.4 %: multiplying by the change of the compression factor at the mean temperature removes most of it.\n\nAn offset of the thermometer hardly touches the slope but moves the boiling point one to one; an offset of the gauge does both. The budget shows the scatter of the temperatures as the largest source, so that more readings, not a better gauge, would narrow the result.\n\nA leak would have shown as a pressure that rises with the heater off. We saw none within five minutes.'
	]
};

/** The five sections of one author's report. */
export function writeReport(random: SeededRandom, quality: number): Record<string, string> {
	const around = () => tierOf(quality + 0.5 * random.normal());
	return {
		abstract: random.pick(abstracts[around()]),
		introduction: random.pick(introductions[around()]),
		discussion: random.pick(discussions[around()])
	};
}

/** The two sections a team shares. */
export function writeTeamSections(random: SeededRandom, quality: number): Record<string, string> {
	return { method: random.pick(methods[tierOf(quality)]), results: random.pick(results[tierOf(quality)]) };
}

/** Remarks a demo grader leaves: words to look for in the text, kind and body. */
export const remarks: {
	quote: string;
	kind: 'to correct' | 'question' | 'note' | 'well done';
	body: string;
}[] = [
	{
		quote: 'human error',
		kind: 'to correct',
		body: 'Name the source and its size. "Human error" can be neither checked nor mended.'
	},
	{
		quote: 'The literature value is a little lower',
		kind: 'to correct',
		body: 'How much lower, against which uncertainty, and from which source? The comparison has all three.'
	},
	{
		quote: 'about 41 kJ/mol',
		kind: 'to correct',
		body: 'Link the value, so that it carries its uncertainty.'
	},
	{
		quote: 'We followed the guide',
		kind: 'question',
		body: 'What did you do that the guide leaves open? A reader has to be able to repeat it.'
	},
	{
		quote: 'steady for two minutes',
		kind: 'well done',
		body: 'This is the sentence a method section is for.'
	},
	{
		quote: 'A better thermometer would help most',
		kind: 'question',
		body: 'Does the budget agree? Compare the shares of offset and scatter.'
	},
	{
		quote: 'The residuals show no trend',
		kind: 'note',
		body: 'With ten points a trend has to be strong to show. Say so.'
	},
	{
		quote: 'which is as large as our standard uncertainty',
		kind: 'well done',
		body: 'You weigh the bias against the uncertainty. That is what makes the number usable.'
	},
	{
		quote: 'the experiment worked',
		kind: 'to correct',
		body: 'State what was found and how well, in place of a verdict.'
	},
	{
		quote: 'only then were temperature and pressure read',
		kind: 'well done',
		body: 'Clear, and in the right order.'
	},
	{ quote: 'The graph is a straight line', kind: 'question', body: 'How do you know? Mention the residuals.' }
];
