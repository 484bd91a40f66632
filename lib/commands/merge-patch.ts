const isRecord = (value: unknown): value is Record<string, unknown> =>
  value !== null && typeof value === 'object' && !Array.isArray(value);

/**
 * JSON merge patch (RFC 7396): objects are merged key by key, null removes a key, anything else (a list too) replaces what stands
 * there. The target is not changed.
 */
export function mergePatch(target: unknown, patch: Record<string, unknown>): Record<string, unknown> {
  const merged: Record<string, unknown> = isRecord(target) ? { ...target } : {};
  for (const [key, value] of Object.entries(patch)) {
    // No settings key is called that; assigning it would set the prototype.
    if (key === '__proto__') continue;
    if (value === null) delete merged[key];
    else merged[key] = isRecord(value) ? mergePatch(merged[key], value) : value;
  }
  return merged;
}
