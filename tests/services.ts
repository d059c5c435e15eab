import { sweep, throwAwayCluster } from './throw-away';

/** Starts what server and browser tests need, once, unless the environment already names it. */
export async function setup(): Promise<() => Promise<void>> {
	const stops: (() => Promise<void>)[] = [];
	const stopAll = async () => {
		for (const stop of stops.reverse()) await stop();
	};
	try {
		if (!process.env['TEST_DATABASE_OWNER_URL']) {
			await sweep();
			const cluster = await throwAwayCluster();
			stops.push(() => cluster.remove());
			set(stops, {
				TEST_DATABASE_OWNER_URL: cluster.ownerUrl(),
				TEST_DATABASE_APPLICATION_URL: cluster.applicationUrl('postgres')
			});
		}
	} catch (problem) {
		await stopAll();
		throw problem;
	}
	return stopAll;
}

/** Sets variables until teardown, so that a second project's setup in the same process finds the first one's services. */
function set(stops: (() => Promise<void>)[], values: Record<string, string>): void {
	Object.assign(process.env, values);
	stops.push(async () => {
		for (const name of Object.keys(values)) Reflect.deleteProperty(process.env, name);
	});
}
