import { sql } from 'drizzle-orm';
import { readReadings } from '$lib/collab';
import { evaluate, type Evaluation, type Readings, type Worksheet } from '$lib/worksheets';
import * as audit from '../audit';
import { authorise, type Viewer } from '../auth';
import { database, type Database } from '../db';
import * as experiments from '../experiments';
import * as files from '../files';
import { documentAccess } from './document-log';
import { storedDocument } from './document-state';
import { ensureDocuments } from './ensure-documents';
import { workRow } from './work-row';

export interface Bench {
	workId: string;
	document: { id: string; epoch: number; canWrite: boolean; closed: 'frozen' | 'sealed' | null };
	worksheet: Worksheet;
	/** as stored at this moment, for the first sight of the page */
	readings: Readings;
	files: files.ListedFile[];
	/** who may be at this bench, for the initials beside what they write */
	people: { id: string; name: string; initials: string }[];
}

/** The readings document of a work; made here, for whoever looks first, when nobody has opened the bench before. */
async function readingsDocument(db: Database, viewer: Viewer, workId: string): Promise<string> {
	const find = () =>
		db.execute<{ id: string }>(
			sql`select id from documents where work_id = ${workId} and kind = 'readings' and key = 'readings'`
		);
	const [there] = await find();
	if (there) return there.id;
	return db.transaction(async (tx) => {
		const [document] = await ensureDocuments(tx, workId, [], null);
		if (!document) throw new Error(`work ${workId} has no readings document`);
		if (document.made) {
			const [team] = await tx.execute<{ course_id: string }>(
				sql`select t.course_id from work w join teams t on t.id = w.team_id where w.id = ${workId}`
			);
			await audit.record(tx, {
				actorId: viewer.id,
				courseId: team?.course_id ?? null,
				action: 'bench.open',
				subjectKind: 'document',
				subjectId: document.id
			});
		}
		return document.id;
	});
}

/** What the readings page shows to those who may see the work. Errors: Refusal 'not-found'. */
export async function openBench(viewer: Viewer, workId: string): Promise<Bench> {
	const db = database();
	await authorise(db, viewer, 'work.see', workId);
	const { assignmentId, teamId } = await workRow(db, workId);
	const [worksheet, documentId, kept, people] = await Promise.all([
		experiments.worksheetOf(db, assignmentId),
		readingsDocument(db, viewer, workId),
		files.ofWork(viewer, workId),
		db.execute<{ id: string; name: string; initials: string }>(sql`
			select u.id, u.name, u.initials from team_members tm join users u on u.id = tm.user_id
			where tm.team_id = ${teamId} and tm.during @> now() order by u.name`)
	]);
	const [access, readings] = await Promise.all([
		documentAccess(db, viewer.id, documentId),
		readingsOf(db, documentId, worksheet)
	]);
	return {
		workId,
		document: {
			id: documentId,
			epoch: access?.epoch ?? 1,
			canWrite: access?.write ?? false,
			closed: access?.closed ?? null
		},
		worksheet,
		readings,
		files: kept,
		people: people.map(({ id, name, initials }) => ({ id, name, initials }))
	};
}

async function readingsOf(db: Database, documentId: string, worksheet: Worksheet): Promise<Readings> {
	const { doc } = await storedDocument(db, documentId);
	const readings = readReadings(
		doc,
		worksheet.tables.map((table) => table.name)
	);
	doc.destroy();
	return readings;
}

/** The stored readings of a work, with their place in the log. */
export async function storedReadings(
	viewer: Viewer,
	workId: string
): Promise<{ documentId: string; epoch: number; seq: number; readings: Readings; worksheet: Worksheet }> {
	const db = database();
	await authorise(db, viewer, 'work.see', workId);
	const { assignmentId } = await workRow(db, workId);
	const worksheet = await experiments.worksheetOf(db, assignmentId);
	const documentId = await readingsDocument(db, viewer, workId);
	const access = await documentAccess(db, viewer.id, documentId);
	const { doc, seq } = await storedDocument(db, documentId);
	const readings = readReadings(
		doc,
		worksheet.tables.map((table) => table.name)
	);
	doc.destroy();
	return { documentId, epoch: access?.epoch ?? 1, seq, readings, worksheet };
}

/** The evaluation of the stored readings: the same code that runs in the browser while typing. */
export async function evaluation(viewer: Viewer, workId: string): Promise<Evaluation> {
	const { worksheet, readings } = await storedReadings(viewer, workId);
	return evaluate(worksheet, readings);
}

/** Files kept with a work, for those who may see it. Errors: Refusal 'not-found'. */
export async function filesOf(
	viewer: Viewer,
	workId: string
): Promise<{ id: string; name: string; size: number; by: string; createdAt: string }[]> {
	await authorise(database(), viewer, 'work.see', workId);
	const kept = await files.ofWork(viewer, workId);
	return kept.map((file) => ({ ...file, createdAt: file.createdAt.toISOString() }));
}
