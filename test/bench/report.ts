/** What a benchmark found: one JSON object a line, or aligned columns. */
export type BenchRecord = { readonly [key: string]: string | number | boolean };

export interface Report {
  readonly record: (record: BenchRecord) => void;
  readonly remark: (text: string) => void;
}

export function createReport(json: boolean): Report {
  let heads = '';
  return {
    record: (record) => {
      if (json) {
        console.log(JSON.stringify(record));
        return;
      }
      const keys = Object.keys(record);
      const line = (cells: readonly string[]): string =>
        cells
          .map((cell) => cell.padEnd(cell.length > 12 ? 34 : 12))
          .join(' ')
          .trimEnd();
      if (keys.join() !== heads) {
        heads = keys.join();
        console.log(
          `\n${line(keys.map((key, k) => (String(Object.values(record)[k]).length > 12 ? key.padEnd(34) : key)))}`,
        );
      }
      console.log(
        line(
          Object.values(record).map((value) =>
            typeof value === 'number' ? String(Number(value.toPrecision(4))) : String(value),
          ),
        ),
      );
    },
    remark: (text) => console.error(text),
  };
}
