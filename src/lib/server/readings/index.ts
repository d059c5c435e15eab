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
