/** Meters, to three digits. */
export function meters(distance: number): string {
  if (!Number.isFinite(distance)) return '';
  return distance >= 100 ? distance.toFixed(0) : distance >= 10 ? distance.toFixed(1) : distance.toFixed(2);
}
