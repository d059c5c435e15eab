export { default as CheckEntry } from './CheckEntry.svelte';
export { default as ReportBlocks } from './ReportBlocks.svelte';
export { default as SectionActs } from './SectionActs.svelte';
export { default as SectionEditor } from './SectionEditor.svelte';
export { anchorId, blockAnchors, type AnchorKind, type BlockAnchor, type SectionAnchor } from './anchors';
export { markHtml } from './mark-html';
export { rangesOf, runTreeOf, selectedWords, type SelectedWords } from './projection-dom';
export { blocksOf, sectionId, type ReportMode, type ReportSection } from './sections';
