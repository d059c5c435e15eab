/** The people a newcomer may sign in as. Everyone of the invented course has the same demo password. */
export const demoPassword = 'meniscus at the bench';

export const demoAccounts = [
	{
		name: 'Ines Okafor',
		email: 'ines.okafor@harrow-point.example',
		role: 'student',
		why: 'writing a report, due in three days'
	},
	{
		name: 'Tomas Lindqvist',
		email: 'tomas.lindqvist@harrow-point.example',
		role: 'student',
		why: 'same team, same readings'
	},
	{
		name: 'Soraya Benali',
		email: 'soraya.benali@harrow-point.example',
		role: 'student',
		why: 'report returned with remarks'
	},
	{
		name: 'Amal Haddad',
		email: 'amal.haddad@harrow-point.example',
		role: 'grader',
		why: 'reports to mark tonight'
	},
	{
		name: 'Ruth Osei',
		email: 'ruth.osei@harrow-point.example',
		role: 'instructor',
		why: 'spread, and reports ready to return'
	},
	{ name: 'Wendell Park', email: 'wendell.park@harrow-point.example', role: 'administrator', why: 'the site' }
].map((account) => ({ ...account, password: demoPassword }));
