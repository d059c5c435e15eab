/** The invented course: nobody here exists. */
export const sections = [
	{ name: 'Monday', meets: 'Monday 13:30 to 17:30', graders: ['Amal Haddad', 'Jonas Weber'] },
	{ name: 'Wednesday', meets: 'Wednesday 9:00 to 13:00', graders: ['Mei-Lin Castellanos'] },
	{ name: 'Thursday', meets: 'Thursday 13:30 to 17:30', graders: ['Desmond Achterberg', 'Amal Haddad'] }
] as const;

export const instructors = ['Ruth Osei', 'Halvard Brekke'] as const;
export const administrator = 'Wendell Park';

/**
 * Graders' severities in levels (of 4), known because the marks are simulated with them: positive is harsher.
 * The spread has something true to show.
 */
export const severity: Record<string, number> = {
	'Amal Haddad': 0.1,
	'Jonas Weber': -0.25,
	'Mei-Lin Castellanos': 0.55,
	'Desmond Achterberg': -0.05
};

export interface DemoTeam {
	name: string;
	section: (typeof sections)[number]['name'];
	students: string[];
}

export const teams: DemoTeam[] = [
	{ name: 'Alder', section: 'Monday', students: ['Soraya Benali', 'Kwame Asante-Rhys', 'Freya Nordahl'] },
	{
		name: 'Birch',
		section: 'Monday',
		students: ['Mateo Quispe', 'Hana Okubo', 'Leonie Brandt', 'Idris Farouk']
	},
	{ name: 'Cedar', section: 'Monday', students: ['Anahit Sarkisova', 'Dylan Pryce', 'Nkechi Obi-Lawal'] },
	{ name: 'Dogwood', section: 'Monday', students: ['Rosalind Achebe', 'Vikram Sethuraman', 'Elsa Tammelin'] },
	{
		name: 'Elder',
		section: 'Wednesday',
		students: ['Paolo Ferrantino', 'Siobhan Keaveney', 'Thandiwe Mokoena']
	},
	{
		name: 'Hazel',
		section: 'Wednesday',
		students: ['Yusuf Demirkan', 'Clara Vaszary', 'Min-jun Seo', 'Abigail Stanhope']
	},
	{
		name: 'Juniper',
		section: 'Wednesday',
		students: ['Ravi Chandrasekhar-Bose', 'Luz Marcano', 'Piotr Zielonka']
	},
	{ name: 'Larch', section: 'Wednesday', students: ['Aroha Tamihana', 'Gideon Falk', 'Samira Yazdani'] },
	{ name: 'Linden', section: 'Thursday', students: ['Ines Okafor', 'Tomas Lindqvist', 'Bao Tran-Duval'] },
	{
		name: 'Maple',
		section: 'Thursday',
		students: ['Oluwaseun Adeyinka', 'Katarina Horvatin', 'Jamal Whitcombe']
	},
	{
		name: 'Rowan',
		section: 'Thursday',
		students: ['Nadezhda Orlovskaya', 'Caio Bittencourt', 'Fatou Diallo-Kane']
	},
	{ name: 'Willow', section: 'Thursday', students: ['Emre Solmaz', 'Greta Lundin-Hay', 'Wiremu Parata'] }
];

export const emailOf = (name: string) =>
	`${name
		.toLowerCase()
		.normalize('NFD')
		.replaceAll(/[^a-z ]+/g, '')
		.trim()
		.replaceAll(/ +/g, '.')}@harrow-point.example`;

export const initialsOf = (name: string) =>
	name
		.split(/[ -]/)
		.map((word) => word[0] ?? '')
		.join('')
		.slice(0, 3)
		.toUpperCase();
