// Times the locating of records in each form: made rows about an invented township, seeded. Processor time is said beside
// wall time, since the collector runs on the other core. Build first. Usage: node test/bench/locate.mjs [rows, default 200000]
import { crs } from '../../dist/src/geodesy/crs.js';
import { datumShift } from '../../dist/src/geodesy/datumShift.js';
import { sectionLayer } from '../../dist/src/geodesy/sections/sectionLayer.js';
import { Random } from '../../dist/src/numerics/random.js';
import { locateInBatches, locateRecords } from '../../dist/src/records/locateRecords.js';

const ROWS = Number(process.argv[2] ?? 200_000);
const MILE_M = (5280 * 1200) / 3937;
const FOOT_M = 1200 / 3937;
const frame = crs('EPSG:26917');
const [centreX, centreY] = frame.forward(-80.2, 39.3);
const square = (x, y, side) => [[x, y], [x + side, y], [x + side, y + side], [x, y + side], [x, y]];
const parcel = [[square(centreX - 200, centreY - 200, 400)]];
const site = { frame, parcel, exclusions: [], open: parcel, shiftFrom: (from) => datumShift(from, 'NAD83') };

/** A square township with the parcel in the middle of its section 15. */
const sections = () => sectionLayer({
  source: 'made', crs: frame,
  features: Array.from({ length: 36 }, (_, i) => {
    const [row, along] = [Math.floor(i / 6), i % 6];
    const col = row % 2 === 0 ? 5 - along : along;
    const ring = square(centreX + (col - 3.5) * MILE_M, centreY + (1.5 - row) * MILE_M, MILE_M);
    return { geometry: { type: 'Polygon', coordinates: [ring] }, properties: { TWNSHPNO: '5N', RANGENO: '1E', FRSTDIVNO: String(i + 1) } };
  }),
});

const random = new Random(3);
const place = () => [centreX + 1500 * (random.uniform() - 0.5), centreY + 1500 * (random.uniform() - 0.5)];
const degrees = ([x, y]) => {
  const [lon, lat] = frame.inverse(x, y);
  return [lat.toFixed(5), lon.toFixed(5)];
};
const call = () => `${random.integer(2400)} FNL ${random.integer(2400)} FEL Sec ${1 + random.integer(36)} T5N R1E`;
const LATLON = { recordId: 'id', latitude: 'lat', longitude: 'lon' };
const FORMS = {
  'degrees on NAD27': [{ columns: LATLON, datum: 'NAD27', source: 'map', mapScale: 24000 }, () => { const [lat, lon] = degrees(place()); return { lat, lon }; }],
  'degrees, datum unknown': [{ columns: LATLON, unknownDatum: { NAD27: 0.7, NAD83: 0.3 }, source: 'map', mapScale: 24000 }, () => { const [lat, lon] = degrees(place()); return { lat, lon }; }],
  'footage calls': [{ columns: { recordId: 'id', location: 'loc' } }, () => ({ loc: call() })],
  'parts of sections': [{ columns: { recordId: 'id', location: 'loc' } }, () => ({ loc: `NE/4 SW/4 Sec ${1 + random.integer(36)} T5N R1E` })],
  'degrees with calls and API number': [{ columns: { ...LATLON, location: 'loc', apiNumber: 'api' }, datum: 'NAD83', source: 'map', mapScale: 24000 }, (i) => {
    const [x, y] = place();
    const [lat, lon] = degrees([x, y]);
    const [north, east] = [centreY + MILE_M / 2 - y, centreX + MILE_M / 2 - x].map((m) => Math.round(m / FOOT_M));
    return { lat, lon, loc: `${north} FNL ${east} FEL Sec 15 T5N R1E`, api: `37${String(1 + 2 * Math.floor(i / 99_000)).padStart(3, '0')}${String(i % 99_000).padStart(5, '0')}` };
  }],
};

for (const [form, [settings, row]] of Object.entries(FORMS)) {
  const rows = Array.from({ length: ROWS }, (_, i) => ({ id: String(i), ...row(i) }));
  const names = Object.keys(rows[0]);
  const table = { source: 'made.csv', names, rows: ROWS, columns: new Map(names.map((name) => [name, rows.map((each) => each[name])])) };
  const source = { kind: 'table', name: 'made.csv', table, settings };
  const [cpu, wall] = [process.cpuUsage(), performance.now()];
  const { placed, unplaced } = locateRecords([source], site, { sections: sections() });
  const used = process.cpuUsage(cpu);
  console.log(`${form}: ${ROWS} rows, ${((performance.now() - wall) / 1000).toFixed(1)} s (${((used.user + used.system) / 1e6).toFixed(1)} s of processor), ${placed.length} placed, ${unplaced.length} not`);
  let most = 0;
  for (const batch of locateInBatches([{ ...source, table: { ...table, rows: Math.min(ROWS, 50_000) } }], site, { sections: sections(), batchRows: 2000 })) most = Math.max(most, batch.placed.length);
  if (most > 2000) throw new Error('a batch holds more than its rows');
}
