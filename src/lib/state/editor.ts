import { autocompletion, completionStatus, startCompletion } from '@codemirror/autocomplete';
import { standardKeymap } from '@codemirror/commands';
import { EditorState } from '@codemirror/state';
import { EditorView, keymap, placeholder } from '@codemirror/view';
import type { Awareness } from 'y-protocols/awareness';
import { yCollab, yUndoManagerKeymap } from 'y-codemirror.next';
import * as Y from 'yjs';
import { sectionText } from '$lib/collab';
import type { Evaluation } from '$lib/worksheets';
import { linkCompletion } from './editor-links';
import { quietMarks } from './editor-marks';

export interface EditorOptions {
	parent: HTMLElement;
	doc: Y.Doc;
	awareness: Awareness | null;
	/** names the text field: "Abstract, as typed" */
	label: string;
	/** of the page's content policy, for the editor's own style elements */
	nonce: string;
	evaluation: () => Evaluation | null;
	/** Ctrl+Enter */
	ondraw: () => void;
	/** the cursor moved to this UTF-16 offset */
	onmove?: (offset: number) => void;
	/** where the cursor is to begin */
	at?: number;
}

export interface SectionEditor {
	focus(): void;
	/** opens the list of what can be linked */
	offerLinks(): void;
	destroy(): void;
}

/** The page's look in the editor's own terms: the reading serif, no gutter, marks that step back. */
const sheet = EditorView.theme({
	'&': { color: 'var(--ink)', backgroundColor: 'transparent', fontSize: 'inherit' },
	'&.cm-focused': { outline: 'none' },
	'.cm-scroller': { fontFamily: 'inherit', lineHeight: 'inherit', overflow: 'visible' },
	'.cm-content': { padding: '0', caretColor: 'var(--liquid)', minHeight: '3.5rem' },
	'.cm-line': { padding: '0' },
	'.cm-placeholder': { color: 'var(--quiet)' },
	'.mk-quiet': { color: 'var(--quiet)' },
	'.mk-strong, .mk-heading': { fontWeight: '600' },
	'.mk-slanted': { fontStyle: 'italic' },
	'.mk-formula': { fontFamily: 'var(--mono)', fontSize: '0.88em', lineHeight: '1' },
	'.mk-link': {
		fontFamily: 'var(--mono)',
		fontSize: '0.88em',
		lineHeight: '1',
		borderBottom: '1px solid var(--liquid)'
	},
	'.cm-tooltip': {
		border: '1px solid var(--ink)',
		borderRadius: '2px',
		backgroundColor: 'var(--page)',
		color: 'var(--ink)',
		boxShadow: '0 0 0 8px var(--page)',
		maxWidth: 'min(28rem, calc(100vw - 2.5rem))'
	},
	'.cm-tooltip.cm-tooltip-autocomplete > ul': {
		fontFamily: 'var(--sans)',
		fontSize: '1rem',
		maxHeight: '15rem',
		maxWidth: '100%',
		minWidth: '0'
	},
	'.cm-tooltip.cm-tooltip-autocomplete > ul > li': {
		minHeight: '2.75rem',
		padding: '0.25rem 0.75rem',
		lineHeight: '1.25rem',
		whiteSpace: 'normal'
	},
	'.cm-tooltip.cm-tooltip-autocomplete > ul > li[aria-selected]': {
		background: 'var(--chosen)',
		color: 'var(--ink)'
	},
	'.cm-completionDetail': {
		display: 'block',
		marginLeft: '0',
		fontStyle: 'normal',
		fontSize: '0.875rem',
		color: 'var(--quiet)'
	},
	'.cm-completionMatchedText': { textDecoration: 'none', fontWeight: '600' },
	'.cm-ySelectionInfo': {
		fontFamily: 'var(--sans)',
		fontSize: '0.8125rem',
		color: 'var(--page)',
		opacity: '1',
		padding: '0 0.25rem'
	}
});

/** An editor of one section's text, bound to its live document. Undo takes back one's own edits only. */
export function openEditor(options: EditorOptions): SectionEditor {
	const text = sectionText(options.doc);
	const undoManager = new Y.UndoManager(text);
	const links = linkCompletion(options.evaluation);
	const view = new EditorView({
		parent: options.parent,
		state: EditorState.create({
			doc: text.toString(),
			selection: { anchor: Math.min(options.at ?? text.length, text.length) },
			extensions: [
				EditorView.cspNonce.of(options.nonce),
				keymap.of([
					{ key: 'Mod-Enter', run: () => (options.ondraw(), true) },
					{ key: 'Ctrl-Space', run: startCompletion },
					...yUndoManagerKeymap,
					...standardKeymap
				]),
				// Nothing is chosen until an arrow key does: Enter after a number that is asked about begins a line, as ever.
				autocompletion({
					selectOnOpen: false,
					override: [links],
					icons: false,
					aboveCursor: false,
					tooltipClass: () => 'mk-offer'
				}),
				EditorView.lineWrapping,
				EditorView.contentAttributes.of({
					'aria-label': options.label,
					spellcheck: 'true',
					autocapitalize: 'sentences',
					autocorrect: 'on'
				}),
				EditorView.updateListener.of((update) => {
					if (update.selectionSet || update.docChanged) options.onmove?.(update.state.selection.main.head);
				}),
				placeholder('Write here.'),
				quietMarks,
				sheet,
				yCollab(text, options.awareness, { undoManager })
			]
		})
	});
	return {
		focus: () => view.focus(),
		offerLinks() {
			view.focus();
			if (completionStatus(view.state) === null) startCompletion(view);
		},
		destroy() {
			options.awareness?.setLocalStateField('cursor', null);
			view.destroy();
			undoManager.destroy();
		}
	};
}
