/** Small made grids in each of the file formats, written independently of the readers from the formats' descriptions. */

/** Offsets in degrees, positive east and north, at the nodes of a regular table from its south-west corner. */
export interface MadeTable {
  readonly west: number;
  readonly south: number;
  readonly step: number;
  readonly width: number;
  readonly height: number;
  readonly offset: (lonDeg: number, latDeg: number) => readonly [number, number];
}

const RAD = Math.PI / 180;

function nodes({ west, south, step, width, height, offset }: MadeTable): (readonly [number, number])[] {
  return Array.from({ length: width * height }, (_, node) => offset(west + (node % width) * step, south + Math.floor(node / width) * step));
}

function ascii(bytes: Uint8Array, at: number, text: string): void {
  bytes.set(Array.from(text, (character) => character.charCodeAt(0)), at);
}

export function ctableBytes(table: MadeTable, title: string): Uint8Array {
  const bytes = new Uint8Array(160 + table.width * table.height * 8);
  const view = new DataView(bytes.buffer);
  ascii(bytes, 0, 'CTABLE V2.0     ');
  ascii(bytes, 16, `${title}\n`);
  [table.west, table.south, table.step, table.step].forEach((value, i) => view.setFloat64(96 + 8 * i, value * RAD, true));
  view.setInt32(128, table.width, true);
  view.setInt32(132, table.height, true);
  nodes(table).forEach(([lon, lat], node) => {
    view.setFloat32(160 + 8 * node, -lon * RAD, true);
    view.setFloat32(164 + 8 * node, lat * RAD, true);
  });
  return bytes;
}

export interface Ntv2Options {
  readonly little: boolean;
  readonly from?: string;
  readonly to?: string;
}

export function ntv2Bytes(tables: readonly MadeTable[], { little, from = 'NAD27', to = 'NAD83' }: Ntv2Options): Uint8Array {
  const bytes = new Uint8Array(16 * (11 + tables.reduce((sum, { width, height }) => sum + 11 + width * height, 0)));
  const view = new DataView(bytes.buffer);
  let at = 0;
  const put = (key: string, value: string | number, kind: 'text' | 'integer' | 'double'): void => {
    ascii(bytes, at, key.padEnd(8));
    if (kind === 'text') ascii(bytes, at + 8, String(value).padEnd(8));
    else if (kind === 'integer') view.setInt32(at + 8, Number(value), little);
    else view.setFloat64(at + 8, Number(value), little);
    at += 16;
  };
  put('NUM_OREC', 11, 'integer');
  put('NUM_SREC', 11, 'integer');
  put('NUM_FILE', tables.length, 'integer');
  put('GS_TYPE', 'SECONDS', 'text');
  put('VERSION', 'NTv2.0', 'text');
  put('SYSTEM_F', from, 'text');
  put('SYSTEM_T', to, 'text');
  for (const axis of ['MAJOR_F', 'MINOR_F', 'MAJOR_T', 'MINOR_T']) put(axis, 6378137, 'double');
  tables.forEach((table, index) => {
    const { west, south, step, width, height } = table;
    put('SUB_NAME', `PART${index}`, 'text');
    put('PARENT', index === 0 ? 'NONE' : 'PART0', 'text');
    put('CREATED', '', 'text');
    put('UPDATED', '', 'text');
    put('S_LAT', south * 3600, 'double');
    put('N_LAT', (south + (height - 1) * step) * 3600, 'double');
    put('E_LONG', -(west + (width - 1) * step) * 3600, 'double');
    put('W_LONG', -west * 3600, 'double');
    put('LAT_INC', step * 3600, 'double');
    put('LONG_INC', step * 3600, 'double');
    put('GS_COUNT', width * height, 'integer');
    for (let row = 0; row < height; row++) {
      for (let column = width - 1; column >= 0; column--) {
        const [lon, lat] = table.offset(west + column * step, south + row * step);
        [lat * 3600, -lon * 3600, -1, -1].forEach((value, i) => view.setFloat32(at + 4 * i, value, little));
        at += 16;
      }
    }
  });
  return bytes;
}

export interface TiffOptions {
  readonly unit: 'arc-second' | 'degree' | 'radian';
  readonly positive: 'east' | 'west';
  readonly lonFirst?: boolean;
  readonly pixelIsArea?: boolean;
  readonly type?: string;
  readonly described?: boolean;
  readonly target?: string;
  /** Raw value = (value − offset) / scale, in the unit and direction of the band. */
  readonly packed?: { readonly scale: number; readonly offset: number };
  /** Index (row from the north, column) of nodes without a value. */
  readonly holes?: readonly (readonly [number, number])[];
}

function item(name: string, value: string, sample?: number, role?: string): string {
  return `<Item name="${name}"${sample === undefined ? '' : ` sample="${sample}"`}${role ? ` role="${role}"` : ''}>${value}</Item>`;
}

const PER_DEGREE = { 'arc-second': 3600, degree: 1, radian: RAD };
const NO_DATA = -9999;

/** One image, uncompressed, 32-bit floats, two interleaved bands. */
export function tiffBytes(table: MadeTable, options: TiffOptions): Uint8Array {
  const { unit, positive, lonFirst = false, pixelIsArea = false, type = 'HORIZONTAL_OFFSET', described = true, target = '4269', holes = [], packed = { scale: 1, offset: 0 } } = options;
  const { west, south, step, width, height } = table;
  const scale = PER_DEGREE[unit];
  const band = { lon: lonFirst ? 0 : 1, lat: lonFirst ? 1 : 0 };
  const metadata = `<GDALMetadata>${item('TYPE', type)}${target ? item('target_crs_epsg_code', target) : ''}${described ? [
    item('DESCRIPTION', 'latitude_offset', band.lat, 'description'), item('UNITTYPE', unit, band.lat, 'unittype'),
    item('DESCRIPTION', 'longitude_offset', band.lon, 'description'), item('UNITTYPE', unit, band.lon, 'unittype'), item('positive_value', positive, band.lon),
    ...[0, 1].flatMap((sample) => [item('OFFSET', String(packed.offset), sample, 'offset'), item('SCALE', String(packed.scale), sample, 'scale')]),
  ].join('') : ''}</GDALMetadata>`;
  const north = south + (height - 1) * step;
  const half = pixelIsArea ? step / 2 : 0;
  const geoKeys = [1, 1, 0, 3, 1024, 0, 1, 2, 1025, 0, 1, pixelIsArea ? 1 : 2, 2048, 0, 1, 4267];
  const entries: { tag: number; kind: 2 | 3 | 4 | 12; values: number[] }[] = [
    { tag: 256, kind: 4, values: [width] }, { tag: 257, kind: 4, values: [height] }, { tag: 258, kind: 3, values: [32, 32] }, { tag: 259, kind: 3, values: [1] },
    { tag: 262, kind: 3, values: [1] }, { tag: 273, kind: 4, values: [0] }, { tag: 277, kind: 3, values: [2] }, { tag: 278, kind: 4, values: [height] },
    { tag: 279, kind: 4, values: [width * height * 8] }, { tag: 284, kind: 3, values: [1] }, { tag: 338, kind: 3, values: [0] }, { tag: 339, kind: 3, values: [3, 3] },
    { tag: 33550, kind: 12, values: [step, step, 0] }, { tag: 33922, kind: 12, values: [0, 0, 0, west - half, north + half, 0] }, { tag: 34735, kind: 3, values: geoKeys },
    { tag: 42112, kind: 2, values: [...Array.from(metadata, (c) => c.charCodeAt(0)), 0] }, { tag: 42113, kind: 2, values: [...Array.from(`${NO_DATA}`, (c) => c.charCodeAt(0)), 0] },
  ];
  const size = { 2: 1, 3: 2, 4: 4, 12: 8 } as const;
  const start = 8 + 2 + entries.length * 12 + 4;
  const long = entries.reduce((sum, { kind, values }) => sum + (values.length * size[kind] > 4 ? Math.ceil((values.length * size[kind]) / 8) * 8 : 0), 0);
  const pixels = Math.ceil(start / 8) * 8 + long;
  const bytes = new Uint8Array(pixels + width * height * 8);
  const view = new DataView(bytes.buffer);
  ascii(bytes, 0, 'II');
  view.setUint16(2, 42, true);
  view.setUint32(4, 8, true);
  view.setUint16(8, entries.length, true);
  let free = Math.ceil(start / 8) * 8;
  entries.forEach(({ tag, kind, values }, index) => {
    const at = 10 + index * 12;
    view.setUint16(at, tag, true);
    view.setUint16(at + 2, kind, true);
    view.setUint32(at + 4, values.length, true);
    const inside = values.length * size[kind] <= 4;
    const to = inside ? at + 8 : free;
    if (!inside) { view.setUint32(at + 8, free, true); free += Math.ceil((values.length * size[kind]) / 8) * 8; }
    (tag === 273 ? [pixels] : values).forEach((value, i) => {
      if (kind === 2) view.setUint8(to + i, value);
      else if (kind === 3) view.setUint16(to + 2 * i, value, true);
      else if (kind === 4) view.setUint32(to + 4 * i, value, true);
      else view.setFloat64(to + 8 * i, value, true);
    });
  });
  const all = nodes(table);
  for (let row = 0; row < height; row++) {
    for (let column = 0; column < width; column++) {
      const [lon, lat] = all[(height - 1 - row) * width + column]!;
      const hole = holes.some(([r, c]) => r === row && c === column);
      const at = pixels + (row * width + column) * 8;
      view.setFloat32(at + 4 * band.lon, hole ? NO_DATA : (lon * scale * (positive === 'west' ? -1 : 1) - packed.offset) / packed.scale, true);
      view.setFloat32(at + 4 * band.lat, hole ? NO_DATA : (lat * scale - packed.offset) / packed.scale, true);
    }
  }
  return bytes;
}
