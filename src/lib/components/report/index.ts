export { default as ReportBlocks } from './ReportBlocks.svelte';
export { anchorId, blockAnchors, type AnchorKind, type BlockAnchor, type SectionAnchor } from './anchors';
export { markHtml } from './mark-html';
export { rangesOf, runTreeOf, selectedWords, type SelectedWords } from './projection-dom';
export { blocksOf, sectionId, type ReportMode, type ReportSection } from './sections';
