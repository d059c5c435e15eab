import type { Rotating } from './sessions';

/** One draft for each experiment in rotation, by section: what a team has written before it is due. */
export const drafts: Record<Rotating, Record<string, string>> = {
	'heat-capacity-ratio': {
		abstract:
			'The heat capacity ratios of argon and nitrogen were found by adiabatic expansion from a little above the pressure of the room: :value[gamma.argon] for argon and :value[gamma.nitrogen] for nitrogen, so that the molar heat capacities at constant volume are :value[C_V.argon] and :value[C_V.nitrogen]. Both ratios lie below those of ideal gases, as a leak of heat into the vessel while it stood open would have it.',
		method:
			'A 20 L vessel in its cage was flushed with the gas for five minutes and filled to about 600 mm of the manometer fluid above the room. When the level had stood for a minute the stopper was lifted for less than a second. The height after rewarming was read when it had stopped rising, four minutes later.\n\n::table[trials]',
		results:
			'One trial is worked out in full.\n\n::workings[gamma_trial]\n\nThe mean of the trials is :value[gamma.argon] for argon and :value[gamma.nitrogen] for nitrogen.\n\n::figure[trials]\n\n::comparison[gamma.argon]\n\n::comparison[gamma.nitrogen]',
		discussion:
			'Counting three translations gives argon 5/3; the trials stay below it by more than their scatter. :figure[trials] shows no trend with the height before opening, so that an error of the zero is not the reason.'
	},
	combustion: {
		abstract:
			'The molar enthalpy of combustion of naphthalene at 298.15 K was found as :value[H_c.naphthalene] with an isoperibol bomb calorimeter whose heat capacity, :value[C_cal], was measured with benzoic acid.',
		method:
			'Pellets of about 1 g of benzoic acid and 0.6 g of naphthalene were burned under 30 atm of oxygen with 1.0 mL of water in the bomb. The temperature was read every 15 s for 6 min before firing and for 20 min after it.\n\n::table[runs]',
		results:
			'The course of temperature is shown in :figure[temperatures].\n\n::figure[temperatures]\n\nThe corrected rise follows from the lines before firing and after the main period.\n\n::workings[dT]\n\n::workings[H_c.naphthalene]\n\n::comparison[H_c.naphthalene]',
		discussion:
			'The heat capacity is shared by all runs of naphthalene and leads the budget. Burning more benzoic acid would narrow it, more naphthalene would not.'
	},
	mutarotation: {
		abstract:
			'The mutarotation of α-D-glucose was followed at 25 °C at five concentrations of acid. Without acid the rate constant is :value[k_0]; hydrogen ions add :value[k_H]. At equilibrium β stands over α by :value[K_eq].',
		method:
			'Acid and glucose solution were mixed in equal volumes and the angle was read 24 times over about three half-lives, then once more after fourteen.\n\n::table[runs]',
		results:
			'Every run follows one exponential, as :figure[decay] shows.\n\n::figure[decay]\n\nThe rate constants lie on a line against the concentration of hydrogen ions.\n\n::figure[catalysis]\n\n::workings[K_eq]\n\n::comparison[k_0]\n\n::comparison[k_H]',
		discussion:
			'The methods of Guggenheim and of Kezdy and Swinbourne need no final angle and agree with the first-order line within their uncertainty.'
	}
};
