// What `npm run bench` shows: gridding and COG writing beside GDAL where it is installed. Build first (npm run
// bench does). Usage: node test/bench/run.mjs [largest number of readings, default 5 million]
import { benchCog } from './cog.mjs';
import { benchGrid } from './grid.mjs';

await benchGrid(process.argv[2] === undefined ? undefined : Number(process.argv[2]));
await benchCog();
