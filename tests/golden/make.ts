import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { engineVersion, evaluate } from '../../src/lib/worksheets';
import { readTemplate } from '../../src/lib/worksheets/authoring';
import { tenReadings } from './readings';

// Writes the golden snapshot of the present engine: `node --import tsx tests/golden/make.ts`, then prettier. One file for
// each engine version, made once; an old one is never written over, for it is what its engine said.

const templates = new URL('../../templates/vaporization-of-water/', import.meta.url).pathname;
const file = new URL(`vaporization-${engineVersion}.json`, import.meta.url).pathname;
if (existsSync(file) && !process.argv.includes('--again')) throw new Error(`${file} is there already`);
const read = (name: string) => readFileSync(templates + name, 'utf8');
const worksheet = readTemplate(
	{ 'template.yaml': read('template.yaml'), 'guide.md': read('guide.md') },
	'templates/vaporization-of-water'
);
const readings = tenReadings;
const evaluation = evaluate(worksheet, readings);
writeFileSync(file, JSON.stringify({ engine: engineVersion, worksheet, readings, evaluation }, null, '\t'));
