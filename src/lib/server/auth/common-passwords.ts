/** What people type first, from memory; with digits, signs and repetition around them they are still the same few. */
const stems = new Set(
	(
		'password passwort passphrase letmein welcome admin administrator root login changeme change ' +
		'secret default guest master monkey dragon sunshine princess football baseball basketball superman batman ' +
		'starwars pokemon iloveyou love hello hellohello qwerty qwertyuiop qwertz qwertzuiop azerty azertyuiop asdfghjkl ' +
		'asdf zxcvbnm zxcvbn qazwsx qazwsxedc abc abcd abcdef abcdefg abcdefgh abcdefghijkl test testing temp student ' +
		'teacher chemistry physics science laboratory lab school college university course meniscus summer winter spring ' +
		'autumn monday friday january december whatever trustno freedom shadow michael computer internet google facebook'
	).split(' ')
);

const leet: Record<string, string> = {
	'0': 'o',
	'1': 'l',
	'3': 'e',
	'4': 'a',
	'5': 's',
	'7': 't',
	'@': 'a',
	$: 's',
	'!': 'i'
};

/** The shortest piece that makes the text by repetition: "abcabc" is "abc". */
function period(text: string): string {
	return text.slice(0, (text + text).indexOf(text, 1));
}

const runs = [
	'abcdefghijklmnopqrstuvwxyz',
	'01234567890123456789',
	'qwertyuiopasdfghjklzxcvbnm',
	'09876543210987654321'
];

/** True for a lower-case password among the first that are tried: a common word dressed with digits, a run of keys, a repetition. */
export function isCommonPassword(plain: string): boolean {
	if (period(plain).length <= 3) return true;
	if (runs.some((run) => run.includes(plain) || run.includes(period(plain)))) return true;
	const letters = plain.replace(/[^\p{L}]/gu, '');
	if (letters.length === 0) return /^\D*\d{1,4}(\d)\1*\D*$/.test(plain) || new Set(plain).size < 5;
	// "P4ssw0rd!2026": first without what surrounds it, then digits read as the letters they stand for.
	const core = plain.replace(/^[^\p{L}]+|[^\p{L}]+$/gu, '');
	const undressed = [...core]
		.map((sign) => leet[sign] ?? sign)
		.join('')
		.replace(/[^\p{L}]/gu, '');
	return [letters, undressed].some((word) => isMadeOfStems(period(word), 2));
}

/** At most `words` stems in a row. */
function isMadeOfStems(text: string, words: number): boolean {
	if (stems.has(text)) return true;
	if (words === 1) return false;
	for (let cut = 1; cut < text.length; cut++) {
		if (stems.has(text.slice(0, cut)) && isMadeOfStems(text.slice(cut), words - 1)) return true;
	}
	return false;
}
