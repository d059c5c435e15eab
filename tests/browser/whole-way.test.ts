import { eq } from 'drizzle-orm';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { closeDatabase, database, schema } from '../../src/lib/server/db';
import { makeCourse, type MadeCourse } from '../factories';
import { caughtMail, freshDatabase, startServer, type FreshDatabase, type RunningServer } from '../harness';
import { contextFor, launch } from './chromium';
import { workOut } from './independent-line';

/** One report goes the whole way, each person in a browser of their own. */

let fresh: FreshDatabase;
let server: RunningServer;
let browser: Browser;
let course: MadeCourse;

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await makeCourse();
	server = await startServer({ databaseUrl: fresh.url });
	browser = await launch();
});
afterAll(async () => {
	await browser?.close();
	await server?.stop();
	await closeDatabase();
	await fresh?.drop();
});

const celsius = [82.91, 85.42, 87.55, 89.71, 91.58, 93.52, 95.2, 96.93, 98.44, 99.99];
const torr = [400.3, 440.1, 479.6, 520.4, 559.8, 600.2, 639.7, 680.3, 719.9, 760.1];
const decimals = (values: number[], places: number) => values.map((value) => value.toFixed(places));

/** '41.34(26) kJ mol−1' -> value and standard uncertainty as shown */
function readShown(text: string): { value: number; uncertainty: number; places: number } {
	const match = /(\d+)\.(\d+)\((\d+)\)/.exec(text);
	if (!match) throw new Error(`no value with uncertainty in ${JSON.stringify(text)}`);
	const [, whole = '', fraction = '', last = ''] = match;
	return {
		value: Number(`${whole}.${fraction}`),
		uncertainty: Number(last) * 10 ** -fraction.length,
		places: fraction.length
	};
}

async function letter(
	to: string,
	about: RegExp
): Promise<{ subject: string; text: string; links: string[] }> {
	for (let tries = 0; tries < 300; tries++) {
		const found = (await caughtMail(to)).find(({ subject }) => about.test(subject));
		if (found) return found;
		await new Promise((resolve) => setTimeout(resolve, 100));
	}
	throw new Error(
		`no letter about ${about} to ${to}: ${JSON.stringify((await caughtMail(to)).map(({ subject }) => subject))}`
	);
}

const stored = (page: Page) => page.getByText(/Stored \d\d:\d\d\./).waitFor();

async function write(page: Page, section: string, text: string) {
	await page.getByRole('button', { name: `Write ${section}` }).click();
	const editor = page.getByRole('textbox', { name: `${section}, as typed` });
	await editor.click();
	await page.keyboard.insertText(text);
	await page.keyboard.press('Control+Enter');
	await stored(page);
}

it('goes from the invitation to the returned report', { timeout: 300_000 }, async () => {
	const expected = workOut(celsius, torr, { kelvin: 0.2, torr: 0.3 });
	const email = 'noor.vandermeer@harrow-point.example';

	// The instructor invites, and later places the student on a team.
	const instructor = await (await contextFor(browser, server.origin, course.instructor)).newPage();
	await instructor.goto(`/c/${course.slug}/settings/people`, { waitUntil: 'networkidle' });
	await instructor.getByLabel('E-mail').fill(email);
	await instructor.getByLabel('Lab section').selectOption({ label: 'Tuesday (Tuesday 13:00)' });
	await instructor.getByRole('button', { name: 'Mail the invitation' }).click();
	await instructor.getByText(`Invitation mailed to ${email}.`).waitFor();

	// The student follows the letter.
	const invitation = await letter(email, /PC 310/);
	const link = invitation.links.find((one) => one.includes('/invitation/'));
	if (!link) throw new Error(`no link in ${invitation.text}`);
	const student = await (await contextFor(browser, server.origin, null)).newPage();
	await student.goto(link.replace(/^https?:\/\/[^/]+/, server.origin), { waitUntil: 'networkidle' });
	await student.getByLabel('Name', { exact: true }).fill('Noor van der Meer');
	await student.getByLabel('Password').fill('copper kettle lantern rain');
	await student.getByRole('button', { name: 'Begin' }).click();
	await student.waitForURL(/\/(now|c\/)/);

	await instructor.goto(`/c/${course.slug}/settings/teams`, { waitUntil: 'networkidle' });
	await instructor.getByLabel('Team of Noor van der Meer').selectOption({ label: 'Linden (Tuesday)' });
	await instructor.getByText('Noor van der Meer is on Team Linden from now on.').waitFor();

	// Readings: typed, then pasted; the team mate sees them arrive.
	await student.goto('/now');
	await student.getByRole('link', { name: 'Continue' }).click();
	await student.waitForURL(/\/w\//);
	const base = student.url().replace(/\/[a-z-]+$/, '');
	await student.goto(`${base}/bench`, { waitUntil: 'networkidle' });
	const mate = await (await contextFor(browser, server.origin, course.mate)).newPage();
	await mate.goto(`${base}/bench`, { waitUntil: 'networkidle' });
	await student.getByLabel('Row 1, t').fill(decimals(celsius, 2)[0] ?? '');
	await student.getByLabel('Row 1, p').fill('75,6o');
	await student
		.getByText(/75,6o.* is not a number\. Kept as typed\./)
		.first()
		.waitFor();
	await student.getByLabel('Row 1, p').fill(decimals(torr, 1)[0] ?? '');
	const block = celsius
		.slice(1)
		.map((t, i) => `${t.toFixed(2)}\t${(torr[i + 1] ?? NaN).toFixed(1)}`)
		.join('\n');
	await student.getByLabel('Row 2, t').focus();
	await student.evaluate((text) => {
		const data = new DataTransfer();
		data.setData('text/plain', text);
		document.activeElement?.dispatchEvent(
			new ClipboardEvent('paste', { clipboardData: data, bubbles: true, cancelable: true })
		);
	}, block);
	await expect.poll(() => student.getByLabel('Row 10, p').inputValue()).toBe('760.1');
	await stored(student);
	await expect.poll(() => mate.getByLabel('Row 10, p').inputValue()).toBe('760.1');
	// The mate reads the barometer; the student sees it.
	await mate.getByLabel(/Barometric pressure/).fill('758.4');
	await stored(mate);
	await expect.poll(() => student.getByLabel(/Barometric pressure/).inputValue()).toBe('758.4');

	// Workings, in the browser, against the independent computation.
	await student.goto(`${base}/workings`, { waitUntil: 'networkidle' });
	const workings = await student.getByRole('main').innerText();
	const shown = readShown(
		/Enthalpy of vaporization\n[\s\S]*?(\d+\.\d+\(\d+\))/.exec(workings)?.[1] ?? workings
	);
	expect(Math.abs(shown.value - expected.enthalpy)).toBeLessThanOrEqual(0.5 * 10 ** -shown.places * 1.0001);
	expect(Math.abs(shown.uncertainty - expected.enthalpyUncertainty)).toBeLessThanOrEqual(
		0.5 * 10 ** -shown.places * 1.0001
	);
	// And on the server, unrounded.
	const work = base.split('/').at(-1) ?? '';
	const evaluation = (await (await student.request.get(`/api/v1/works/${work}/evaluation`)).json()) as {
		quantities: Record<string, { value: number; standardUncertainty: number; degreesOfFreedom: number }>;
	};
	const { H_vap, T_b, T_h, slope } = evaluation.quantities;
	expect(H_vap?.value).toBeCloseTo(expected.enthalpy, 9);
	expect((H_vap?.standardUncertainty ?? NaN) / expected.enthalpyUncertainty).toBeCloseTo(1, 3);
	expect(T_b?.value).toBeCloseTo(expected.boilingPoint, 8);
	expect(T_h?.value).toBeCloseTo(expected.meanTemperature, 8);
	expect((slope?.value ?? NaN) / expected.slope).toBeCloseTo(1, 10);

	// The report: the author's abstract, the team's results written by the mate, links drawn in place.
	await student.goto(`${base}/report`, { waitUntil: 'networkidle' });
	await write(
		student,
		'Abstract',
		'Water was boiled at ten pressures. The line gives :value[H_vap] at :value[T_h].'
	);
	await mate.goto(`${base}/report`, { waitUntil: 'networkidle' });
	await write(
		mate,
		'Results',
		'The residuals show no trend.\n\n::figure[line]\n\nThe slope leads to\n\n::workings[H_vap]\n\n::comparison[H_vap]\n\nand to :value[H_vapp].'
	);
	await expect.poll(() => student.getByText('The residuals show no trend.').count()).toBeGreaterThan(0);
	const abstract = student.locator('[data-section="1"]').first();
	expect(readShown((await abstract.innerText()).replaceAll(/\s/g, ' '))).toEqual(shown);
	// A name that does not exist shows what exists.
	const unknown = await student.locator('.unknown-link').first().innerText();
	expect(unknown).toContain('H_vapp');
	expect(unknown).toContain('H_vap');
	await expect.poll(() => student.locator('figure svg, svg[role="img"]').count()).toBeGreaterThan(0);
	// The mate's own abstract stays the mate's: what the student wrote is not there.
	expect(await mate.getByText('Water was boiled at ten pressures.').count()).toBe(0);

	// Hand in: receipt with the hash.
	await student.goto(`${base}/hand-in`, { waitUntil: 'networkidle' });
	await student.getByRole('button', { name: 'Hand in', exact: true }).click();
	await student
		.getByText(/Handed in \d\d:\d\d\. Receipt mailed/)
		.first()
		.waitFor();
	const receipt = await letter(email, /[Rr]eceipt|[Hh]anded in/);
	const [snapshot] = await database()
		.select({ manifest: schema.snapshots.manifest, alias: schema.reports.alias, id: schema.reports.id })
		.from(schema.snapshots)
		.innerJoin(schema.reports, eq(schema.reports.id, schema.snapshots.reportId));
	if (!snapshot) throw new Error('nothing was handed in');
	expect(receipt.text.replaceAll(/\s/g, '')).toContain(Buffer.from(snapshot.manifest).toString('hex'));

	// The grader marks without knowing whose it is.
	const grader = await (await contextFor(browser, server.origin, course.grader)).newPage();
	await grader.goto(`/c/${course.slug}/sitting`, { waitUntil: 'networkidle' });
	await grader.getByRole('link', { name: /Mark next/ }).click();
	await grader.waitForURL(/\/sitting\/[^/]+\/report$/);
	await grader.waitForLoadState('networkidle');
	expect(await grader.content()).not.toMatch(/Noor|van der Meer|vandermeer/);
	const rubric = grader.getByRole('region', { name: 'Rubric' });
	const criteria = await rubric.getByRole('group').all();
	expect(criteria.length).toBeGreaterThanOrEqual(4);
	for (const criterion of criteria) await criterion.locator('label').nth(3).click();
	// Words of the abstract, selected as by hand.
	await grader.getByText('Water was boiled at ten pressures.').evaluate((element) => {
		const walker = document.createTreeWalker(element, NodeFilter.SHOW_TEXT);
		const node = walker.nextNode();
		const at = node?.textContent?.indexOf('ten pressures') ?? -1;
		if (!node || at < 0) throw new Error('the words are not in the first text');
		document.getSelection()?.setBaseAndExtent(node, at, node, at + 'ten pressures'.length);
	});
	await grader
		.getByRole('group', { name: /Remark on/ })
		.getByRole('button', { name: 'Question' })
		.click();
	await grader.getByLabel('Remark', { exact: true }).fill('Which ten, and in which order?');
	await grader.getByRole('button', { name: 'Store', exact: true }).click();
	await stored(grader);
	const recomputed = await grader.locator('body').innerText();
	expect(recomputed).toContain('Which ten, and in which order?');

	// Nothing of it reaches the student before the return.
	await student.goto(`${base}/returned`, { waitUntil: 'networkidle' });
	const before = await student.content();
	expect(before).not.toContain('Which ten');
	expect(await student.getByRole('main').innerText()).toContain('With a marker');

	await grader.getByRole('button', { name: /^Finish/ }).click();
	await grader.getByText('1 of 1 marked.').waitFor();

	// The instructor returns; the letter goes out.
	await instructor.goto(`/c/${course.slug}/returning`, { waitUntil: 'networkidle' });
	await instructor.getByRole('checkbox', { name: 'Noor van der Meer' }).check();
	await instructor.getByRole('button', { name: /^Return 1 report/ }).click();
	await instructor.getByText('Returned to 1 student.').waitFor();
	await letter(email, /^Back with you/);

	// The student reads marks, level texts and the remark in place.
	await student.goto(`${base}/returned`, { waitUntil: 'networkidle' });
	await student.getByText('Which ten, and in which order?').first().waitFor();
	const returned = await student.getByRole('main').innerText();
	const rubricRows = await database().select().from(schema.levels).where(eq(schema.levels.level, 3));
	const total = rubricRows.reduce((sum, row) => sum + row.pointsHundredths, 0) / 100;
	const everything = await student.locator('body').innerText();
	expect(everything).toContain(String(total));
	const levelTexts = rubricRows.filter(({ text }) => everything.includes(text.trim()));
	expect(levelTexts.length, returned).toBe(rubricRows.length);

	// The spread holds the same total.
	await instructor.goto(`/c/${course.slug}/spread`, { waitUntil: 'networkidle' });
	expect(await instructor.getByRole('main').innerText()).toContain(String(total));
	const csv = await (await instructor.request.get(`/api/v1/courses/${course.slug}/spread.csv`)).text();
	expect(csv).toContain(String(total));
	expect(csv).toContain('Amal Haddad');
	await expect(
		student.request.get(`/api/v1/courses/${course.slug}/spread.csv`).then((answer) => answer.status())
	).resolves.toBe(403);
});
