/** The directions between rooms (see DEVELOPERS.md). A finding fails `npm test`. */
const pure = '^src/lib/(formats|signal|agreement|simulate)/';
module.exports = {
	forbidden: [
		{ name: 'no-circles', severity: 'error', from: {}, to: { circular: true } },
		{
			name: 'pure-rooms-no-framework',
			comment: 'Readers, signal methods, statistics and the simulator run in the page, the server and the command line.',
			severity: 'error',
			from: { path: pure, pathNot: '\\.spec\\.ts$' },
			to: { path: '(^node:|node_modules/(svelte|@sveltejs|drizzle-orm|postgres|uplot)/|^src/(routes|cli)|^src/lib/(server|timeline|charts|components)/)' }
		},
		{
			name: 'pure-rooms-no-node',
			severity: 'error',
			from: { path: pure, pathNot: '\\.spec\\.ts$' },
			to: { dependencyTypes: ['core'] }
		},
		{
			name: 'formats-first',
			comment: 'Readers know nothing of what comes after them.',
			severity: 'error',
			from: { path: '^src/lib/formats/', pathNot: '\\.spec\\.ts$' },
			to: { path: '^src/lib/(signal|agreement|simulate)/' }
		},
		{
			name: 'signal-not-agreement',
			severity: 'error',
			from: { path: '^src/lib/signal/', pathNot: '\\.spec\\.ts$' },
			to: { path: '^src/lib/(agreement|simulate)/' }
		},
		{
			name: 'agreement-alone',
			comment: 'Agreement sees traces and tags, neither readers nor the offset search.',
			severity: 'error',
			from: { path: '^src/lib/agreement/', pathNot: '\\.spec\\.ts$' },
			to: { path: '^src/lib/(signal|simulate)/' }
		},
		{
			name: 'server-fence',
			severity: 'error',
			from: { path: '^src/lib/(timeline|charts|components)/' },
			to: { path: '^src/lib/server/' }
		},
		{ name: 'no-routes-from-lib', severity: 'error', from: { path: '^src/lib/' }, to: { path: '^src/routes/' } }
	],
	options: {
		doNotFollow: { path: 'node_modules' },
		tsPreCompilationDeps: true,
		tsConfig: { fileName: 'tsconfig.json' },
		enhancedResolveOptions: { exportsFields: ['exports'], conditionNames: ['import', 'svelte', 'types', 'default'] }
	}
};
