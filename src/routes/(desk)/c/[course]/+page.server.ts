import * as courses from '$lib/server/courses';
import * as desk from '$lib/server/desk';
import { forPage } from '$lib/server/http';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = (event) =>
	forPage(event, async () => {
		const { viewer, course } = await event.parent();
		const instant = new Date();
		const [rotation, sections, lines] = await Promise.all([
			courses.rotation(viewer, course.id),
			courses.sections(viewer, course.id),
			desk.studentLines(viewer, instant)
		]);
		const own = new Map(
			lines.filter((line) => line.course.slug === course.slug).map((line) => [line.assignmentId, line])
		);
		return {
			instant,
			sections,
			rotation: rotation.map((row) => {
				const line = own.get(row.assignmentId);
				const dates = {
					dueAt: courses.instantOf(row.dueLocal, course.zone),
					closesAt: courses.instantOf(row.closesLocal, course.zone)
				};
				return { ...row, ...dates, own: line ? { ...line, href: desk.workHref(line) } : null };
			})
		};
	});
