import { and, eq, isNull, sql } from 'drizzle-orm';
import { createTransport } from 'nodemailer';
import { database, schema } from '../db';
import { env } from '../env';
import { letters, type Letter, type LetterKind } from './letters';

const { outbox } = schema;

/** Patience with the mail server, ms; a transaction waits meanwhile. */
const patience = 10_000;
const longestProblem = 500;

/**
 * Sends one letter of the outbox and marks it sent. The row is locked meanwhile, so that two workers cannot both send it;
 * a crash between the mail server's answer and the commit sends it again, under the same Message-ID.
 * Throws what the mail server said, after noting it beside the letter: the queue tries again later.
 */
export async function deliver(outboxId: string): Promise<void> {
	const problem = await database().transaction(async (tx) => {
		const [row] = await tx
			.select()
			.from(outbox)
			.where(and(eq(outbox.id, outboxId), isNull(outbox.sentAt)))
			.for('update', { skipLocked: true });
		if (!row) return undefined;
		try {
			await send(row.id, row.recipient, render(row.kind, row.payload));
		} catch (thrown) {
			const message = thrown instanceof Error ? thrown.message : String(thrown);
			await tx
				.update(outbox)
				.set({ attempts: sql`${outbox.attempts} + 1`, lastProblem: message.slice(0, longestProblem) })
				.where(eq(outbox.id, outboxId));
			return new Error(`The mail server did not take it: ${message}`, { cause: thrown });
		}
		await tx
			.update(outbox)
			.set({
				attempts: sql`${outbox.attempts} + 1`,
				lastProblem: null,
				sentAt: sql`now()`,
				// The link's secret has done its work here.
				payload: sql`${outbox.payload} - 'token'`
			})
			.where(eq(outbox.id, outboxId));
		return undefined;
	});
	if (problem) throw problem;
}

function render(kind: string, payload: unknown): Letter {
	if (!(kind in letters)) throw new Error(`no letter of kind ${kind}`);
	return letters[kind as LetterKind](payload as never);
}

/** Stable for each letter, so that a mail reader shows a repeated one once. */
export const messageId = (outboxId: string): string => `<${outboxId}@${new URL(env().ORIGIN).hostname}>`;

async function send(outboxId: string, to: string, { subject, text }: Letter): Promise<void> {
	const transport = createTransport({
		url: env().SMTP_URL,
		connectionTimeout: patience,
		greetingTimeout: patience,
		socketTimeout: patience
	});
	try {
		await transport.sendMail({
			from: env().MAIL_FROM,
			to,
			subject,
			text,
			messageId: messageId(outboxId),
			headers: { 'auto-submitted': 'auto-generated' }
		});
	} finally {
		transport.close();
	}
}
