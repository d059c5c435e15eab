export { canonicalBytes, publish, storePart, type PublishedExperiment } from './publish';
export { readTemplate } from './read-template';
export {
	rubricOf,
	rubricOfVersion,
	worksheetOf,
	type StoredCriterion,
	type StoredRubric
} from './worksheet-of';
export { addAssignment, type NewAssignment } from './add-assignment';
export { library } from './library';
