/** Initials as written beside a reading: "Ruth Okafor" gives "R.O."; first and last name only. */
export function initialsOf(name: string): string {
	const words = name.trim().split(/\s+/);
	const ends = words.length > 1 ? [words[0], words.at(-1)] : words;
	return ends
		.map((word) => `${[...(word ?? '')].find((sign) => /\p{L}|\p{N}/u.test(sign))?.toUpperCase() ?? ''}.`)
		.join('');
}
