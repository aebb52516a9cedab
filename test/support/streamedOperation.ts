/**
 * A module of a caller's own operations, as a user would write it: `waves` makes a grid of 700 × 1300 cells, held in
 * memory or made as its rows are read (and lost half-way where it is told so); two operations after it want that grid,
 * one of them only if it can be had.
 */
export const WAVES_MODULE = `const place = { width: 700, height: 1300, west: 442800, north: 171900, cellM: 0.5 };
const cell = (column, row) => (Math.hypot(column - 350, row - 700) < 90 ? NaN : Math.fround(80 * Math.sin(column / 40) * Math.cos(row / 55) + ((column * 7919 + row * 104729) % 97) / 10));
const rows = (first, count) => Float32Array.from({ length: place.width * count }, (_, i) => cell(i % place.width, first + Math.floor(i / place.width)));
const described = (id, rest) => ({ id, version: '1.0.0', title: id, summary: 'Of the test.', parameters: { type: 'object', properties: {}, additionalProperties: false }, inputs: {}, sources: [], example: 'ironplat ' + id, ...rest });

export default [
  described('waves', {
    parameters: { type: 'object', additionalProperties: false, required: ['as'], properties: { as: { type: 'string', enum: ['held', 'streamed', 'lost'], description: 'How the grid is handed over.' } } },
    outputs: { waves: { title: 'Waves', form: 'grid', unit: 'nT' } },
    async run({ parameters, warn }) {
      warn('waves everywhere');
      if (parameters.as === 'held') return { waves: { ...place, values: rows(0, place.height) } };
      let read = 0;
      return { waves: {
        ...place,
        async readRows(first, count) {
          if (first !== read) throw new Error('rows out of order: ' + first + ' after ' + read);
          if (parameters.as === 'lost' && first > 0) throw new Error('row ' + first + ' is lost');
          read += count;
          return rows(first, count);
        },
        remarks: () => ({ notes: [], warnings: ['waves everywhere', read + ' rows were read'] }),
      } };
    },
  }),
  described('crests', {
    parameters: { type: 'object', additionalProperties: false, required: ['least'], properties: { least: { type: 'number', description: 'Least height.' } } },
    inputs: { waves: { title: 'Waves', form: 'grid' } }, outputs: { crests: { title: 'Crests', form: 'json' } },
    run: async ({ inputs, parameters }) => ({ crests: inputs.waves.values.filter((value) => value > parameters.least).length }),
  }),
  described('tale', {
    inputs: { waves: { title: 'Waves', form: 'grid', optional: true } }, outputs: { tale: { title: 'Tale', form: 'json' } },
    run: async ({ inputs }) => ({ tale: inputs.waves ? 'waves' : 'none' }),
  }),
];
`;
