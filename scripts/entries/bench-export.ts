import { writeMadeTable, type ExportCase } from '@/scripts/bench/export-run';

// One table in a process of its own, so that its memory is that of writing alone. `npm run bench -- --exports` starts it.
const [text, folder] = process.argv.slice(2);
process.stdout.write(JSON.stringify(await writeMadeTable(JSON.parse(text) as ExportCase, folder)));
