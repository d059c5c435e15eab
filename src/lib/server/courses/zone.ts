import { parseDateTime, toZoned } from '@internationalized/date';

/**
 * The instant of a wall-clock time ('YYYY-MM-DD HH:MM[:SS]', space or T) in an IANA zone.
 * A time that daylight saving skips is ruled late, one that occurs twice is ruled its second occurrence:
 * whoever hands in is never worse off for the change of clocks.
 */
export function instantOf(wallClock: string, zone: string): Date {
	return toZoned(parseDateTime(wallClock.replace(' ', 'T')), zone, 'later').toDate();
}
