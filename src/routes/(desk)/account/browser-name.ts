const browsers: [RegExp, string][] = [
	[/Edg(?:e|A|iOS)?\//, 'Edge'],
	[/OPR\//, 'Opera'],
	[/Firefox\/|FxiOS\//, 'Firefox'],
	[/Chrom(?:e|ium)\/|CriOS\//, 'Chrome'],
	[/Safari\//, 'Safari']
];
const systems: [RegExp, string][] = [
	[/iPad/, 'an iPad'],
	[/iPhone/, 'an iPhone'],
	[/Android/, 'Android'],
	[/Windows/, 'Windows'],
	[/Mac OS X|Macintosh/, 'a Mac'],
	[/CrOS/, 'a Chromebook'],
	[/Linux/, 'Linux']
];

/** What a browser says of itself, in three words: "Firefox on Linux". The order matters: most claim to be several. */
export function browserName(client: string): string {
	const find = (list: [RegExp, string][]) => list.find(([pattern]) => pattern.test(client))?.[1];
	const browser = find(browsers);
	const system = find(systems);
	if (browser && system) return `${browser} on ${system}`;
	return browser ?? (client.split(/[ /]/)[0] || 'Not said');
}
