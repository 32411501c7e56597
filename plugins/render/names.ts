/** A name that is not taken yet: `base`, or `base-2`, `base-3`, ... */
export function uniqueName(base: string, taken: ReadonlySet<string>): string {
  let name = base;
  for (let k = 2; taken.has(name); k++) name = `${base}-${k}`;
  return name;
}
