import { createContext } from 'svelte';

/** How an entry stands in the margin. */
export interface EntryPlace {
	/** px from the top of the page column */
	top: number;
	/** px that it stands below (+) or above (-) the line it talks about */
	displaced: number;
	/** full; one line; or the one that speaks for `more` others on its block; hidden: spoken for */
	form: 'full' | 'line' | 'gathered' | 'hidden';
	/** how many the gathered one speaks for, itself included */
	more: number;
}

export interface EntryRegistration {
	id: string;
	/** the lane's lines fold into the remarks where the window has no lane */
	column: 'remarks' | 'lane';
	/** the block's number: entries gather by it */
	block: string;
	/** element id of the words, number or figure it talks about */
	anchor: string;
	/** order among entries on the same line: smaller is older */
	age: number;
	/** larger stays open longer */
	urgency: number;
	/** natural box of the content, whatever is shown of it */
	content: HTMLElement;
}

/** What a sheet asks of the controller that levels its margin entries. */
export interface Levels {
	readonly active: string | null;
	attach(page: HTMLElement): () => void;
	register(entry: EntryRegistration): () => void;
	placeOf(id: string): EntryPlace | undefined;
	activate(id: string | null): void;
	/** unfold all entries of a block */
	open(block: string): void;
	/** from an entry back to its words */
	returnToWords(id: string): void;
}

export const [sheetLevels, setSheetLevels, onSheet] = createContext<() => Levels | undefined>();
