import { createHash } from 'node:crypto';
import postgres from 'postgres';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, connection, database } from '../../src/lib/server/db';
import { Refusal } from '../../src/lib/server/errors';
import * as reports from '../../src/lib/server/reports';
import { renderSection } from '../../src/lib/reports';
import { act, makeCourse, type MadeCourse } from '../factories';
import { freshDatabase, type FreshDatabase } from '../harness';
import { writeReport, writtenSections } from './written-report';

let fresh: FreshDatabase;
let owner: postgres.Sql;
let course: MadeCourse;
let snapshotId: string;
let sha256: string;

beforeAll(async () => {
	fresh = await freshDatabase();
	owner = postgres(fresh.ownerUrl, { max: 1, onnotice: () => undefined });
	course = await makeCourse();
	const { report, results, engine } = await writeReport(course.student, course.workId);
	const { attempt } = await reports.handIn(act(course.student), { report: report.id, results, engine });
	snapshotId = attempt.id;
	sha256 = attempt.sha256;
});
afterAll(async () => {
	await owner.end();
	await closeDatabase();
	await fresh.drop();
});

const kindOf = async (promise: Promise<unknown>): Promise<string> => {
	const thrown: unknown = await promise.then(
		() => null,
		(problem: unknown) => problem
	);
	if (thrown instanceof Refusal) return thrown.kind;
	throw thrown ?? new Error('nothing was refused');
};

/** Hands in anew, so that a test may do as it likes with what it gets. */
async function another(texts: Record<string, string> = writtenSections): Promise<string> {
	const own = await makeCourse();
	const { report, results, engine } = await writeReport(own.student, own.workId, texts);
	return (await reports.handIn(act(own.student), { report: report.id, results, engine })).attempt.id;
}

describe('what was handed in', () => {
	it('is named by the hash over its manifest, and the manifest by the hashes of its parts', async () => {
		const rows = await owner<{ sha: string; bytes: Uint8Array }[]>`
			select encode(p.sha256, 'hex') as sha, p.bytes from snapshots s join parts p on p.sha256 = s.manifest where s.id = ${snapshotId}`;
		const manifest = rows[0];
		if (!manifest) throw new Error('no manifest');
		expect(manifest.sha).toBe(sha256);
		expect(createHash('sha256').update(manifest.bytes).digest('hex')).toBe(sha256);
		const read = JSON.parse(Buffer.from(manifest.bytes).toString('utf8')) as reports.Manifest;
		for (const part of [
			read.worksheet,
			read.readings,
			read.evaluation,
			...read.sections.map(({ part }) => part)
		]) {
			const [row] = await owner<{ bytes: Uint8Array }[]>`
				select bytes from parts where sha256 = decode(${part}, 'hex')`;
			expect(
				createHash('sha256')
					.update(row?.bytes ?? Buffer.alloc(0))
					.digest('hex')
			).toBe(part);
		}
		expect(read.sections.map(({ position, key }) => `${position} ${key}`)).toEqual([
			'1 abstract',
			'2 introduction',
			'3 method',
			'4 results',
			'5 discussion'
		]);
	});

	it('recomputes to the same numbers, to the last bit, and says so when it does not', async () => {
		const snapshot = await reports.readSnapshot(database(), snapshotId);
		const again = reports.recompute(snapshot);
		expect(again).toMatchObject({ sameEngine: true, identical: true, differences: [] });
		const enthalpy = snapshot.evaluation.quantities['H_vap'];
		if (!enthalpy) throw new Error('no enthalpy');
		const changed = structuredClone(snapshot.evaluation);
		changed.quantities['H_vap'] = { ...enthalpy, value: enthalpy.value * (1 + 2 ** -52) };
		const compared = reports.recompute({ ...snapshot, evaluation: changed });
		expect(compared.identical).toBe(false);
		expect(compared.differences.map(({ name }) => name)).toEqual(['H_vap']);
		expect(reports.recompute({ ...snapshot, engine: '0.0.0' }).sameEngine).toBe(false);
	});

	it('cannot be changed by the application, nor by the owner without taking the guards away', async () => {
		const { sql } = connection();
		const byApplication = [
			() => sql`update snapshots set engine = 'x' where id = ${snapshotId}`,
			() => sql`delete from snapshots where id = ${snapshotId}`,
			() => sql`update snapshot_sections set title = 'x' where snapshot_id = ${snapshotId}`,
			() => sql`delete from snapshot_sections where snapshot_id = ${snapshotId}`,
			() => sql`update parts set bytes = null`,
			() => sql`delete from parts`
		];
		for (const statement of byApplication) await expect(statement()).rejects.toThrow(/permission denied/);
		await expect(owner`update snapshots set engine = 'x' where id = ${snapshotId}`).rejects.toThrow(
			/append-only/
		);
		await expect(owner`delete from snapshot_sections where snapshot_id = ${snapshotId}`).rejects.toThrow(
			/append-only/
		);
		await expect(
			owner`update parts set bytes = 'x'::bytea where sha256 = decode(${sha256}, 'hex')`
		).rejects.toThrow(/parts_content/);
		expect((await reports.readSnapshot(database(), snapshotId)).sha256).toBe(sha256);
	});

	it('is found damaged when a part differs from its hash, is erased or is missing', async () => {
		const id = await another({ abstract: `Only here: ${Math.random()}` });
		const [section] = await owner<{ part: Uint8Array }[]>`
			select part from snapshot_sections where snapshot_id = ${id} and position = 1`;
		const part = section?.part ?? Buffer.alloc(0);
		// What retention does: bytes go, the hash stays.
		await owner`update parts set bytes = null where sha256 = ${part}`;
		await expect(reports.readSnapshot(database(), id)).rejects.toThrow(/section 1 was erased/);
		await owner`alter table parts drop constraint parts_content`;
		await owner`update parts set bytes = '"Another text."'::bytea where sha256 = ${part}`;
		const damaged = reports.readSnapshot(database(), id);
		await expect(damaged).rejects.toBeInstanceOf(reports.DamagedSnapshotError);
		await expect(reports.readSnapshot(database(), id)).rejects.toThrow(/section 1 differs from its hash/);
		await owner`update parts set bytes = null where sha256 = ${part}`;
		await owner`alter table parts add constraint parts_content check (bytes is null or sha256 = sha256(bytes))`;
	});

	it('is found damaged when its row tells of another hand-in than its manifest', async () => {
		const id = await another();
		await owner`alter table snapshots disable trigger snapshots_append_only`;
		await owner`update snapshots set received_at = received_at - interval '1 day' where id = ${id}`;
		await owner`alter table snapshots enable trigger snapshots_append_only`;
		await expect(reports.readSnapshot(database(), id)).rejects.toThrow(
			/manifest does not tell of this hand-in/
		);
	});
});

describe('who may see it', () => {
	it('is its author, the graders of the lab section and the instructors', async () => {
		for (const viewer of [course.student, course.grader, course.instructor]) {
			expect((await reports.showSnapshot(viewer, snapshotId)).sha256).toBe(sha256);
		}
		for (const viewer of [course.mate, course.otherStudent, course.otherGrader, course.stranger]) {
			expect(await kindOf(reports.showSnapshot(viewer, snapshotId))).toBe('not-found');
		}
		expect(await kindOf(reports.showSnapshot(course.instructor, crypto.randomUUID()))).toBe('not-found');
	});

	it('keeps the time from a grader from whom the author is hidden', async () => {
		const shown = await reports.showSnapshot(course.grader, snapshotId);
		expect(shown).toMatchObject({ receivedAt: null, dueAt: null });
		const texts = JSON.stringify(shown);
		for (const secret of [course.student.name, course.student.email, course.student.id]) {
			expect(texts).not.toContain(secret);
		}
		expect((await reports.showSnapshot(course.instructor, snapshotId)).receivedAt).not.toBeNull();
		expect((await reports.showSnapshot(course.student, snapshotId)).receivedAt).not.toBeNull();
		const open = await makeCourse({ hideNames: false });
		const written = await writeReport(open.student, open.workId);
		const { attempt } = await reports.handIn(act(open.student), {
			report: written.report.id,
			results: written.results,
			engine: written.engine
		});
		expect((await reports.showSnapshot(open.grader, attempt.id)).receivedAt).toBe(attempt.receivedAt);
	});
});

describe('hostile text', () => {
	it('comes back as it was typed, and is drawn without anything that runs', async () => {
		const hostile = [
			'<script>alert(1)</script><img src=x onerror=alert(1)>',
			'[press](javascript:alert(1)) <javascript:alert(1)> ![p](javascript:alert(1))',
			'<svg onload=alert(1)><style>*{display:none}</style></svg>',
			'$\\href{javascript:alert(1)}{x} \\htmlData{onclick=alert(1)}{y}$',
			':value[<img src=x onerror=alert(1)>] :value[H_vap]{onclick=alert(1) .x #y}',
			'::figure[<script>alert(1)</script>]',
			'half \ud83d of a pair, \u0000 a null and \u202e a turn'
		].join('\n\n');
		const id = await another({ abstract: hostile });
		const snapshot = await reports.readSnapshot(database(), id);
		const text = snapshot.sections[0]?.text ?? '';
		expect(text.replaceAll('\ufffd', '')).toBe(hostile.replaceAll(/\ud83d/g, ''));
		const { blocks } = renderSection(text, { evaluation: snapshot.evaluation, sectionNumber: 1 });
		const html = blocks.map((block) => (block.kind === 'prose' ? block.html : '')).join('');
		const tags = [...html.matchAll(/<([a-z][a-z0-9-]*)((?:"[^"]*"|[^">])*)>/gi)];
		expect(tags.length).toBeGreaterThan(10);
		for (const [tag, name = '', attributes = ''] of tags) {
			expect(['script', 'style', 'iframe', 'object', 'embed', 'form', 'input']).not.toContain(
				name.toLowerCase()
			);
			expect(attributes.replaceAll(/"[^"]*"/g, '""'), tag).not.toMatch(/\son[a-z]+\s*=/i);
			expect(/(?:href|src)="([^"]*)"/.exec(attributes)?.[1] ?? '', tag).not.toMatch(
				/^\s*(?:javascript|data):/i
			);
		}
	});
});
