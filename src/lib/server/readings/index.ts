export {
	appendUpdate,
	documentAccess,
	documentPositions,
	loadDocument,
	raiseEpoch,
	updatesAfter,
	type DocumentAccess,
	type LoggedUpdate
} from './document-log';
export { compactDocument, documentState, storedDocument } from './document-state';
export { ensureDocuments, seedDocument, type DocumentRow } from './ensure-documents';
export { keepText } from './keep-text';
export { storeVersion } from './store-version';
export { countRecords, fileRows, largestFile, liveRows } from './live-limits';
export { evaluation, filesOf, openBench, storedReadings, type Bench } from './open-bench';
export { openDocument, versionsOf, type DocumentHead, type ListedVersion } from './open-document';
export { takeFile, type TakenFile } from './take-file';
export { setFreezing } from './set-freezing';
