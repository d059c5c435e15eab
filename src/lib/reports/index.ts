export type * from './types';
export { createRenderer, renderSection, numberPlacements, type Renderer } from './render';
export {
	projectSection,
	projectionVersion,
	blockAt,
	blockNumber,
	type Projection,
	type ProjectedBlock,
	type ProjectedLink
} from './projection';
export { runsToOffset, offsetToPlace, runsLength, runsText, type RunTree, type TreePlace } from './runs';
export {
	describeSelection,
	describePlaced,
	attach,
	type Anchor,
	type Attachment,
	type Selector,
	type TextQuoteSelector,
	type TextPositionSelector,
	type FragmentSelector
} from './anchors';
export { compareResults, shownResults, type ResultDifference, type ShownResult } from './shown-results';
