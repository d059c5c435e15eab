// Who may import what. scripts/boundaries.mjs runs these rules, over Svelte's type imports too.

const lib = '^src/lib/';
const pure = [
	'quantities',
	'statistics',
	'regression',
	'worksheets',
	'reports',
	'rubrics',
	'similarity',
	'plots',
	'collab',
	'contracts'
];
/** Smallest first: an area knows only those before it. */
const areas = [
	'audit',
	'files',
	'mail',
	'jobs',
	'accounts',
	'courses',
	'experiments',
	'readings',
	'reports',
	'marking',
	'moderation',
	'desk'
];
const rooms = ['readings', 'workings', 'report', 'marking', 'spread'];

const anyOf = (names) => `(${names.join('|')})`;
const folder = (name) => `${lib}${name}/`;

/** Of our own sources, a folder imports itself and these. */
const only = (name, from, allowed, comment) => ({
	name,
	comment,
	severity: 'error',
	from: { path: from },
	to: { path: '^src/', pathNot: [from, ...allowed] }
});

const pureImports = {
	quantities: [],
	statistics: ['quantities'],
	regression: ['quantities', 'statistics'],
	worksheets: ['quantities', 'statistics', 'regression'],
	reports: ['worksheets'],
	rubrics: [],
	similarity: [],
	plots: ['quantities', 'statistics', 'regression'],
	collab: ['reports', 'worksheets'],
	contracts: []
};

const serverBase = [
	folder('server/db'),
	folder('server/auth'),
	`${lib}server/(errors|env|logger)\\.ts$`,
	folder(anyOf(pure))
];

/** The edge between the framework and the areas. */
const edge = `${lib}server/(http|handle|requests|process)\\.ts$`;

/** Libraries and the only places that may use them: a library that many places know cannot be replaced. */
const owners = [
	['@hocuspocus/server|ws', ['server/collab']],
	['@hocuspocus/provider', ['state']],
	[
		'yjs|lib0|y-protocols',
		['collab', 'state', 'server/collab', 'server/readings', 'server/reports', 'components/report']
	],
	['y-indexeddb', ['state']],
	['@codemirror/[^/]+|y-codemirror\\.next', ['components/report', 'state']],
	['drizzle-orm', ['server']],
	['postgres', ['server/db', 'server/collab']],
	['ioredis', ['server/collab']],
	['graphile-worker', ['server/jobs', 'server/db']],
	['nodemailer', ['server/mail']],
	['@aws-sdk/[^/]+|file-type', ['server/files']],
	['pino', ['server/logger.ts']],
	['@node-rs/argon2|rate-limiter-flexible', ['server/auth']],
	['lucia', ['server/auth', 'server/accounts', 'server/requests.ts']],
	['canonicalize', ['server/experiments', 'server/reports']],
	['mathjs', ['worksheets', 'quantities']],
	['yaml', ['worksheets']],
	['@stdlib/[^/]+', ['quantities', 'statistics', 'regression']],
	['d3-[^/]+', ['plots', 'components/figures', 'components/shared']],
	['unified|remark-[^/]+|rehype-[^/]+|unist-util-visit|approx-string-match', ['reports']],
	['katex', ['reports', 'worksheets', 'components/figures', 'components/shared', 'components/report']],
	['papaparse', ['worksheets']],
	['zod', ['contracts', 'server', 'worksheets']],
	['@tanstack/[^/]+', ['state', 'components/shared']],
	['sveltekit-superforms', ['components/shared']],
	['@internationalized/date', ['server/courses', 'server/desk', 'components/shared']]
];
/** These two belong to pages and their forms, query's provider to the outermost layout. */
const alsoRoutes = ['@tanstack/[^/]+', 'sveltekit-superforms', 'katex'];

/** @type {import('dependency-cruiser').IConfiguration} */
module.exports = {
	forbidden: [
		{
			name: 'no-cycles',
			comment: 'Modules that import each other cannot be understood one at a time.',
			severity: 'error',
			from: { path: '^src/' },
			to: { circular: true }
		},
		{
			name: 'resolvable',
			comment: 'The import leads nowhere.',
			severity: 'error',
			from: { path: '^src/' },
			to: { couldNotResolve: true, pathNot: ['^[$](app|env|service-worker)/', '[$]types', '^(hast|mdast)$'] }
		},
		{
			name: 'declared',
			comment: 'A package that package.json does not name disappears when somebody else stops needing it.',
			severity: 'error',
			from: { path: '^src/' },
			to: {
				dependencyTypes: ['npm-no-pkg', 'npm-unknown'],
				dependencyTypesNot: ['type-only'],
				pathNot: ['^node_modules/svelte/', '^[$]']
			}
		},

		...pure.map((name) =>
			only(
				`${name}-imports`,
				folder(name),
				pureImports[name].map(folder),
				pureImports[name].length ? `May import ${pureImports[name].join(', ')}.` : 'Imports nothing of ours.'
			)
		),
		{
			name: 'reports-types-only',
			comment: 'Of worksheets only types.',
			severity: 'error',
			from: { path: folder('reports') },
			to: { path: folder('worksheets'), dependencyTypesNot: ['type-only'] }
		},
		{
			name: 'pure-without-surroundings',
			comment: 'Pure modules take no file system, network, process or framework.',
			severity: 'error',
			from: { path: folder(anyOf(pure)) },
			to: { dependencyTypes: ['core'] }
		},
		{
			name: 'pure-without-framework',
			comment: 'Pure modules know neither Svelte nor the kit.',
			severity: 'error',
			from: { path: folder(anyOf(pure)) },
			to: { path: '^(node_modules/svelte/|node_modules/@sveltejs/|[$]app|[$]env)' }
		},

		only(
			'components-shared-imports',
			folder('components/shared'),
			[],
			'Shared components import only each other.'
		),
		only(
			'components-figures-imports',
			folder('components/figures'),
			[folder('components/shared'), folder('state'), folder(anyOf(pure))],
			'Figures import shared components, state and pure modules.'
		),
		...rooms.map((room) =>
			only(
				`components-${room}-imports`,
				folder(`components/${room}`),
				[folder('components/(shared|figures)'), folder('state'), folder(anyOf(pure))],
				'A room of components imports shared, figures, state and pure modules, no other room.'
			)
		),
		only('state-imports', folder('state'), [folder(anyOf(pure))], 'State imports pure modules.'),

		only(
			'server-db-imports',
			folder('server/db'),
			[`${lib}server/(env|errors)\\.ts$`],
			'The database knows settings and typed errors, nothing above.'
		),
		only(
			'server-auth-imports',
			folder('server/auth'),
			[folder('server/db'), `${lib}server/(errors|env|logger)\\.ts$`, folder(anyOf(pure))],
			'Accounts and permissions stand below every area.'
		),
		...areas.map((area, place) =>
			only(
				`server-${area}-imports`,
				folder(`server/${area}`),
				[
					...serverBase,
					...areas.slice(0, place).map((smaller) => `${folder(`server/${smaller}`)}index\\.ts$`)
				],
				`Of other areas only the indexes of smaller ones: ${areas.slice(0, place).join(', ') || 'none'}.`
			)
		),
		only(
			'server-collab-imports',
			folder('server/(collab|pdf)'),
			[...serverBase, ...areas.map((area) => `${folder(`server/${area}`)}index\\.ts$`)],
			'Live editing and the PDF writer sit above the areas and use their indexes.'
		),
		{
			name: 'server-without-framework',
			comment: 'Areas can be tested without the framework; only the edge knows it.',
			severity: 'error',
			from: { path: folder('server'), pathNot: [edge] },
			to: { path: '^(node_modules/@sveltejs/kit|[$]app|[$]env)' }
		},
		{
			name: 'small-server-modules',
			comment: 'Settings, errors and the log stand at the bottom.',
			severity: 'error',
			from: { path: `${lib}server/(errors|env|logger)\\.ts$` },
			to: { path: '^src/', pathNot: [`${lib}server/(errors|env|logger)\\.ts$`] }
		},

		{
			name: 'routes-server-imports',
			comment: 'A route identifies, calls one verb, responds; it never touches the database.',
			severity: 'error',
			from: { path: '^src/routes/.*([+]server[.]ts|[.]server[.]ts)$' },
			to: { path: [folder('server/db'), folder('components')] }
		},
		{
			name: 'pages-imports',
			comment:
				'What runs in the browser imports components, state and pure modules; of the server only the types of what was loaded.',
			severity: 'error',
			from: { path: '^src/(routes|hooks[.]client)', pathNot: ['([+]server[.]ts|[.]server[.]ts)$'] },
			to: { path: [folder('server'), '[.]server[.]'], dependencyTypesNot: ['type-only'] }
		},
		{
			name: 'components-without-server',
			comment: 'Components and state take what they show from contracts.',
			severity: 'error',
			from: { path: `${lib}(components|state)/` },
			to: { path: [folder('server'), '[.]server[.]'] }
		},
		{
			name: 'nothing-imports-routes',
			comment: 'Routes are leaves.',
			severity: 'error',
			from: { path: lib },
			to: { path: '^src/routes/' }
		},

		{
			name: 'by-index',
			comment: 'Outsiders import a module by its index.',
			severity: 'error',
			from: { path: '^src/', pathNot: [folder(anyOf(pure.filter((name) => name !== 'contracts')))] },
			to: {
				path: `${folder(anyOf(pure.filter((name) => name !== 'contracts')))}`,
				pathNot: ['/index\\.ts$', `${lib}worksheets/authoring(/index)?\\.ts$`]
			}
		},
		...pure
			.filter((name) => name !== 'contracts')
			.map((name) => ({
				name: `${name}-by-index`,
				comment: 'Another pure module imports it by its index.',
				severity: 'error',
				from: { path: folder(anyOf(pure.filter((other) => other !== name))) },
				to: { path: folder(name), pathNot: ['/index\\.ts$'] }
			})),
		{
			name: 'areas-by-index',
			comment: 'Outsiders import an area by its index.',
			severity: 'error',
			from: { path: '^src/(routes|hooks|lib/server/[^/]+\\.ts$)' },
			to: { path: `${lib}server/[^/]+/`, pathNot: ['/index\\.ts$'] }
		},

		...owners.map(([libraries, places]) => ({
			name: `owner-of-${libraries
				.split('|')[0]
				.replace(/[^a-z0-9-]+/gi, '-')
				.replace(/^-|-$/g, '')}`,
			comment: `Belongs to ${places.join(', ')}.`,
			severity: 'error',
			from: {
				path: '^src/',
				pathNot: [
					...places.map((place) => `${lib}${place.replace('.', '\\.')}${place.includes('.') ? '$' : '/'}`),
					...(alsoRoutes.includes(libraries) ? ['^src/routes/'] : [])
				]
			},
			to: { path: `^node_modules/(@types/)?(${libraries})/` }
		}))
	],
	options: {
		doNotFollow: { path: 'node_modules' },
		tsPreCompilationDeps: true,
		enhancedResolveOptions: {
			exportsFields: ['exports'],
			conditionNames: ['svelte', 'import', 'types', 'default'],
			extensions: ['.ts', '.js', '.mjs', '.svelte', '.svelte.ts', '.json']
		}
	}
};
