/** Bytes an upload may have, as sent and as unpacked: UPLOAD_LIMIT_BYTES, or 2 GiB. */
export function uploadLimitBytes(): number {
  const given = Number(process.env.UPLOAD_LIMIT_BYTES ?? '');
  return Number.isSafeInteger(given) && given > 0 ? given : 2 * 1024 ** 3;
}

/** `2 GB`, `500 MB`, `64 kB`: a limit as a person reads it. */
export function sizeInWords(bytes: number): string {
  const units: [number, string][] = [
    [1024 ** 3, 'GB'],
    [1024 ** 2, 'MB'],
    [1024, 'kB'],
  ];
  const [scale, unit] = units.find(([each]) => bytes >= each) ?? [1, 'bytes'];
  return `${Number((bytes / scale).toPrecision(3))} ${unit}`;
}
