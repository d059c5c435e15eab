export { accountsOfSite, type SiteAccount } from './accounts-of-site';
export { addCourse, addLabSection, type NewCourse } from './add-course';
export { changeDates, grantExtension, mustBeInOrder, type Dates } from './dates';
export { dueFor, type Due } from './due';
export { extensionsOf, type ExtensionRow } from './extensions-of';
export {
	mine,
	open,
	rotation,
	sections,
	type CourseHead,
	type CourseRole,
	type LabSectionRow,
	type RotationRow
} from './open';
export { people, type Person } from './people';
export { startWork } from './start-work';
export { addTeam, placeInTeam } from './teams';
export { workOf, type WorkHead } from './work-of';
export { instantOf } from './zone';
