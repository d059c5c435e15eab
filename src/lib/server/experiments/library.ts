import { readdir } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { authorise, type Viewer } from '../auth';
import { database } from '../db';
import { readTemplate } from './read-template';

/** The experiments that come with the software, beside where it runs. */
export const libraryFolder = resolve('templates');

/** Experiments a course can set. For those who may change it. */
export async function library(
	viewer: Viewer,
	courseId: string
): Promise<{ slug: string; title: string; summary: string }[]> {
	await authorise(database(), viewer, 'course.change', courseId);
	const entries = await readdir(libraryFolder, { withFileTypes: true });
	const worksheets = await Promise.all(
		entries
			.filter((entry) => entry.isDirectory())
			.map((entry) => readTemplate(join(libraryFolder, entry.name)))
	);
	return worksheets
		.map(({ slug, title, summary }) => ({ slug, title, summary }))
		.sort((a, b) => a.title.localeCompare(b.title, 'en'));
}
