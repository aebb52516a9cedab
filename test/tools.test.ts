import { describe, expect, it } from 'vitest';
import { HAS_DEBIAN_GDAL, hasProgram } from './support/debianTools.js';

/** Elsewhere the tests that need these are skipped, where everybody can see it; in CI nothing may be skipped for want of them. */
describe.skipIf(process.env.CI === undefined)('what CI needs beyond Node', () => {
  it.each(['ogrinfo', 'gdalinfo', 'chromium'])('has %s', (program) => {
    expect(hasProgram(program)).toBe(true);
  });

  it('has the COG validator of Debian\'s python3-gdal', () => {
    expect(HAS_DEBIAN_GDAL).toBe(true);
  });
});
