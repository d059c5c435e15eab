/** A live document as the rest of the application knows it. */
export type { Doc as SharedDocument } from 'yjs';
export {
	readReadings,
	readingsParts,
	rowIds,
	insertRows,
	setCell,
	setStatus,
	setParameter,
	removeRow,
	writeReadings,
	type NewRow,
	type RowStatus
} from './readings';
export { sectionText, readText, writeText } from './section';
export { seedSection, seedReadings } from './seed';
export { orderBetween, ordersBetween, compareOrder } from './order';
export {
	encodeMessage,
	parseClientMessage,
	parseServerMessage,
	documentName,
	parseDocumentName,
	type ClientMessage,
	type ServerMessage,
	type BarrierMessage,
	type StoredMessage,
	type RefusedMessage,
	type DocumentAddress
} from './messages';
