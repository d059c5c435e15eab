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
export { statedValues, type StatedNumber } from './stated';
export { compareStated, type StatedLine } from './compare';
export { parseUnit, type UnitForm } from './units';
export { checkReport, type CheckedSection } from './checks';
export { suggestLinks, suggestForNumber, type LinkSuggestion } from './suggest';
export { sectionTree, countWords, type OutlineEntry, type SectionNode } from './outline';
export { explainUnknown, placedLabel } from './links';
