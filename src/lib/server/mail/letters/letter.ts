import { env } from '../../env';

/** Plain text, as it is read in a terminal or on a watch. */
export interface Letter {
	subject: string;
	text: string;
}

/** Address of a page, as the reader's browser will reach it. */
export const pageAddress = (path: string): string => `${env().ORIGIN}${path}`;

/** A letter from its paragraphs; a closing line says why it came. */
export function letter(subject: string, paragraphs: string[], why: string): Letter {
	return { subject, text: [...paragraphs, `-- \nMeniscus, ${env().ORIGIN}\n${why}`, ''].join('\n\n') };
}
