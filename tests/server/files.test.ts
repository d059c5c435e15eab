import { createHash } from 'node:crypto';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, database } from '../../src/lib/server/db';
import * as files from '../../src/lib/server/files';
import * as readings from '../../src/lib/server/readings';
import { act, makeCourse, refusalOf, type MadeCourse } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';

let fresh: FreshDatabase;
let course: MadeCourse;

beforeAll(async () => {
	fresh = await freshDatabase();
	course = await makeCourse();
});
afterAll(async () => {
	await closeDatabase();
	await fresh.drop();
});

const bodyOf = (bytes: Uint8Array) => new Blob([bytes as Uint8Array<ArrayBuffer>]).stream();
const textBytes = (text: string) => new TextEncoder().encode(text);
const take = (
	bytes: Uint8Array,
	over: { name?: string; viewer?: MadeCourse['student']; table?: string } = {}
) =>
	readings.takeFile(act(over.viewer ?? course.student), {
		work: course.workId,
		table: over.table ?? 'readings',
		name: over.name ?? 'run.csv',
		body: bodyOf(bytes)
	});
const cellsOf = (taken: readings.TakenFile) => taken.table.rows.map(({ cells }) => [cells['t'], cells['p']]);
const bytesOf = async (fileId: string, viewer = course.student) => {
	const chunks: Buffer[] = [];
	for await (const chunk of (await files.open(viewer, fileId)).bytes)
		chunks.push(Buffer.from(chunk as Uint8Array));
	return Buffer.concat(chunks);
};
const counts = async () => {
	const [row] = await database().execute<{ files: number; uploads: number }>(
		sql`select (select count(*)::int from files) as files, (select count(*)::int from uploads) as uploads`
	);
	return row;
};

describe('a file of readings', () => {
	it('is kept byte by byte and read without a digit lost', async () => {
		const bytes = textBytes('t,p\n82.93,400.0\n85.350,440\n');
		const taken = await take(bytes);
		expect(cellsOf(taken)).toEqual([
			['82.93', '400.0'],
			['85.350', '440']
		]);
		expect(taken.file).toMatchObject({ name: 'run.csv', size: bytes.byteLength });
		expect(await bytesOf(taken.file?.id ?? '')).toEqual(Buffer.from(bytes));
		const [row] = await database().execute<{ sha256: Uint8Array }>(
			sql`select sha256 from files where id = ${taken.file?.id ?? ''}`
		);
		expect(Buffer.from(row?.sha256 ?? []).toString('hex')).toBe(
			createHash('sha256').update(bytes).digest('hex')
		);
		expect((await counts())?.uploads).toBe(0);
	});

	it('given twice is one file', async () => {
		const bytes = textBytes('t,p\n1,2\n');
		const [first, second] = [
			await take(bytes, { name: 'twice.csv' }),
			await take(bytes, { name: 'twice.csv' })
		];
		expect(second.file?.id).toBe(first.file?.id);
	});

	it.each([
		['semicolons, decimal commas', 't;p\n82,93;400,0\n', [['82,93', '400,0']]],
		['tabs', 't\tp\n82.93\t400.0\n', [['82.93', '400.0']]],
		['a byte-order mark', '\uFEFFt,p\n82.93,400.0\n', [['82.93', '400.0']]],
		['quotes', '"t","p"\n"82.93","400.0"\n', [['82.93', '400.0']]],
		['lines ended by CR LF', 't,p\r\n82.93,400.0\r\n', [['82.93', '400.0']]]
	])('may have %s', async (_what, text, cells) => {
		expect(cellsOf(await take(textBytes(text)))).toEqual(cells);
	});

	it('in UTF-16 is text like any other', async () => {
		const text = 't\tp\n82.93\t400.0\n';
		const utf16 = Buffer.concat([Buffer.from([0xff, 0xfe]), Buffer.from(text, 'utf16le')]);
		expect(cellsOf(await take(utf16))).toEqual([['82.93', '400.0']]);
	});

	it('in an older encoding is read, and that is said', async () => {
		const taken = await take(Buffer.from('t,p,note\n82.93,400.0,22 \xb0C outside\n', 'latin1'));
		expect(taken.table.problems.map((problem) => problem.code)).toContain('encoding-guessed');
		expect(taken.table.rows[0]?.cells['note']).toBe('22 °C outside');
	});

	it('with a bad cell loses no good row, and the cell is named', async () => {
		const taken = await take(textBytes('t,p\n82.93,400.0\n85.35,44o.0\n87.59,480.0\n'));
		expect(cellsOf(taken)).toEqual([
			['82.93', '400.0'],
			['85.35', '44o.0'],
			['87.59', '480.0']
		]);
		const said = taken.table.problems.filter((problem) => problem.severity === 'error');
		expect(said).toHaveLength(1);
		expect(said[0]?.message).toMatch(/^Row 2, p: .*44o\.0.*Kept as typed\.$/);
	});

	it('keeps hostile cells as text', async () => {
		const hostile = [
			'=HYPERLINK("http://x","y")',
			'<img src=x onerror=alert(1)>',
			'__proto__',
			'../../etc/passwd'
		];
		const text = `t,p,note\n${hostile.map((cell, n) => `8${n}.1,40${n}.0,"${cell.replaceAll('"', '""')}"`).join('\n')}\n`;
		const taken = await take(textBytes(text), { name: '../../../etc/cron.d/x\u0000.csv' });
		expect(taken.table.rows.map(({ cells }) => cells['note'])).toEqual(hostile);
		expect(taken.file?.name).toBe('x.csv');
	});

	it('with headers that are names of the language breaks nothing', async () => {
		const taken = await take(textBytes('t,p,__proto__,constructor\n82.93,400.0,1,2\n'));
		expect(cellsOf(taken)).toEqual([['82.93', '400.0']]);
		expect(({} as Record<string, unknown>)['polluted']).toBeUndefined();
		expect(Object.keys(taken.table.rows[0]?.cells ?? {})).not.toContain('__proto__');
	});

	it('with a quote that never closes is kept, and said', async () => {
		const taken = await take(textBytes('t,p\n82.93,"400.0\n85.35,440.0\n'));
		expect(taken.table.problems.map((problem) => problem.code)).toContain('unclosed-quote');
		expect(taken.file).not.toBeNull();
	});
});

describe('a file that is no table of readings', () => {
	it.each([
		['a picture', Buffer.from('89504e470d0a1a0a0000000d49484452', 'hex'), /kind png/],
		['a spreadsheet file', Buffer.from('504b0304140006000800000021', 'hex'), /./],
		['bytes', Buffer.from([1, 2, 0, 4, 5]), /not text/],
		['nothing', Buffer.alloc(0), /empty/]
	])('%s is refused with what to do, and not kept', async (_what, bytes, words) => {
		const before = await counts();
		const refusal = await refusalOf(take(bytes));
		expect(refusal.kind).toBe('unprocessable');
		expect(refusal.message).toMatch(words);
		expect(await counts()).toEqual(before);
	});
});

describe('limits', () => {
	it('10 MB and not a byte more, whatever length is announced', async () => {
		const refusal = await refusalOf(take(Buffer.alloc(readings.largestFile + 1, 0x20)));
		expect(refusal.kind).toBe('too-large');
		expect(refusal.message).toContain('10 MB');
	});

	it('50,000 rows', async () => {
		const text = `t,p\n${'82.93,400.0\n'.repeat(50_002)}`;
		const refusal = await refusalOf(take(textBytes(text)));
		expect(refusal.kind).toBe('too-large');
		expect(refusal.message).toContain('50,000');
	});

	it('2,000 rows live: a longer one is kept and told plainly, a full one is taken', async () => {
		const rows = (n: number) => textBytes(`t,p\n${'82.93,400.0\n'.repeat(n)}`);
		expect((await take(rows(2_000))).table.rows).toHaveLength(2_000);
		const longer = await take(rows(2_001), { name: 'long.csv' });
		expect(longer.table.rows).toEqual([]);
		expect(longer.table.problems.map((problem) => problem.code)).toEqual(['too-long-for-live']);
		expect(longer.file?.name).toBe('long.csv');
	});

	it('a cell of 1,000 characters', async () => {
		const taken = await take(textBytes(`t,p,note\n82.93,400.0,${'x'.repeat(1_001)}\n`));
		expect(taken.table.rows).toEqual([]);
		expect(taken.table.problems[0]?.code).toBe('cell-too-long');
	});
});

describe('permissions', () => {
	it('the team uploads; nobody else does', async () => {
		for (const viewer of [course.grader, course.instructor]) {
			expect((await refusalOf(take(textBytes('t,p\n1,2\n'), { viewer }))).kind).toBe('forbidden');
		}
		for (const viewer of [course.stranger, course.otherStudent]) {
			expect((await refusalOf(take(textBytes('t,p\n1,2\n'), { viewer }))).kind).toBe('not-found');
		}
	});

	it('team and staff of the section read it; others do not know of it', async () => {
		const taken = await take(textBytes('t,p\n3,4\n'), { name: 'seen.csv' });
		const id = taken.file?.id ?? '';
		for (const viewer of [course.mate, course.grader, course.instructor]) {
			expect((await bytesOf(id, viewer)).toString()).toBe('t,p\n3,4\n');
		}
		for (const viewer of [course.stranger, course.otherStudent, course.otherGrader]) {
			expect((await refusalOf(files.open(viewer, id))).kind).toBe('not-found');
		}
		const listed = await readings.filesOf(course.grader, course.workId);
		expect(listed.map((file) => file.name)).toContain('seen.csv');
	});

	it('a table that is not there is not there', async () => {
		expect((await refusalOf(take(textBytes('t,p\n1,2\n'), { table: 'nothing' }))).kind).toBe('not-found');
	});
});

describe('without the file store', () => {
	it('the text is read all the same, and it is said that the file is not stored', async () => {
		const before = await counts();
		// A store nobody listens at: settings are read once, so the client is pointed there by its own variable.
		const { env } = await import('../../src/lib/server/env');
		const settings = env() as { S3_ENDPOINT: string };
		const endpoint = settings.S3_ENDPOINT;
		settings.S3_ENDPOINT = 'http://127.0.0.1:1';
		files.forgetStore();
		try {
			const taken = await take(textBytes('t,p\n82.93,400.0\n'), { name: 'down.csv' });
			expect(taken.file).toBeNull();
			expect(taken.note).toBe('Text read; file not stored. Try it again later.');
			expect(cellsOf(taken)).toEqual([['82.93', '400.0']]);
			expect((await counts())?.files).toBe(before?.files);
		} finally {
			settings.S3_ENDPOINT = endpoint;
			files.forgetStore();
		}
		// What the interrupted upload left is swept when its time is over.
		await database().execute(sql`update uploads set expires_at = now() - interval '1 minute'`);
		await files.tidy();
		expect((await counts())?.uploads).toBe(0);
	});
});

describe('counting records', () => {
	it.each([
		['', 0],
		['a,b', 1],
		['a,b\n', 1],
		['a,b\n\n \t\nc,d', 2],
		['"a\nb",c\nd,e\n', 2],
		['a\r\nb\r\n', 2]
	])('%j has %i', (text, records) => expect(readings.countRecords(text)).toBe(records));
});
