import { availableParallelism } from 'node:os';
import { defineConfig } from 'vitest/config';
import { BaseSequencer, type TestSpecification } from 'vitest/node';

/** Files that take longest, longest first: begun early, they do not hold up the end of a run on two cores. */
const LONG = ['survey/fieldDays', 'survey/honesty', 'survey/delivery', 'survey/airborne', 'anomalies/delineate', 'raster/', 'detection/', 'records/', 'cli/'];

class LongestFirst extends BaseSequencer {
  override async sort(files: TestSpecification[]): Promise<TestSpecification[]> {
    const rank = ({ moduleId }: TestSpecification): number => {
      const at = LONG.findIndex((part) => moduleId.includes(`/test/${part}`));
      return at < 0 ? LONG.length : at;
    };
    // oxlint-disable-next-line unicorn/no-array-sort -- the sequencer's own method, no array's
    return (await super.sort(files)).toSorted((a, b) => rank(a) - rank(b));
  }
}

export default defineConfig({
  test: {
    root: new URL('..', import.meta.url).pathname,
    include: ['test/**/*.test.ts'],
    testTimeout: 120_000,
    hookTimeout: 120_000,
    pool: 'forks',
    // All cores: by default one is left idle, which on two cores is half of them.
    maxWorkers: availableParallelism(),
    sequence: { sequencer: LongestFirst },
  },
});
