/**
 * Places of the sensor from places of the receiver's antenna: so far ahead along the course, so far to the right of it.
 * Where there is no course (the walker stands) the antenna's place stays.
 */
export function sensorPlaces(
  { x, y }: { readonly x: Float64Array; readonly y: Float64Array }, courseDeg: Float64Array,
  { sensorForwardM, sensorRightM }: { readonly sensorForwardM: number; readonly sensorRightM: number },
): { x: Float64Array; y: Float64Array } {
  if (sensorForwardM === 0 && sensorRightM === 0) return { x, y };
  const outX = x.slice();
  const outY = y.slice();
  for (let i = 0; i < x.length; i++) {
    if (Number.isNaN(courseDeg[i]!)) continue;
    const sin = Math.sin(courseDeg[i]! * Math.PI / 180);
    const cos = Math.cos(courseDeg[i]! * Math.PI / 180);
    outX[i]! += sensorForwardM * sin + sensorRightM * cos;
    outY[i]! += sensorForwardM * cos - sensorRightM * sin;
  }
  return { x: outX, y: outY };
}
