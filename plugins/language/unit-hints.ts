/** What an author probably meant by a text that is no unit. */
import { type Dimension, equal } from './dimensions.ts';
import { PREFIXES, parseUnit, SYMBOLS } from './units.ts';

/** Words that stand for a unit's symbol. */
const WORDS: { readonly [word: string]: string } = {
  volt: 'V',
  volts: 'V',
  amp: 'A',
  amps: 'A',
  ampere: 'A',
  amperes: 'A',
  ohms: 'Ω',
  sec: 's',
  secs: 's',
  second: 's',
  seconds: 's',
  msec: 'ms',
  usec: 'µs',
  minute: 'min',
  minutes: 'min',
  hour: 'h',
  hours: 'h',
  hertz: 'Hz',
  farad: 'F',
  farads: 'F',
  henry: 'H',
  henries: 'H',
  watt: 'W',
  watts: 'W',
  kelvin: 'K',
  celsius: '°C',
  degrees: '°',
  degree: '°',
  radian: 'rad',
  radians: 'rad',
  percent: '%',
  db: 'dB',
};

/**
 * Units that differ from the text in the case of its letters alone, or that it spells out (`Mhz`: `MHz`; `uf`: `µF`;
 * `volts`: `V`), those of the wanted dimension alone where one is given.
 */
export function suggestUnits(text: string, wanted?: Dimension): readonly string[] {
  const lower = text.trim().toLowerCase();
  const found = new Set<string>();
  const word = Object.hasOwn(WORDS, lower) ? WORDS[lower] : undefined;
  if (word !== undefined) found.add(word);
  for (const symbol of SYMBOLS.keys()) {
    for (const prefix of ['', ...PREFIXES.keys()]) {
      const candidate = prefix + symbol;
      if (candidate.toLowerCase() !== lower || candidate === text) continue;
      const unit = parseUnit(candidate);
      if (unit) found.add(unit.text);
    }
  }
  const fitting = [...found].filter((candidate) => !wanted || equal(parseUnit(candidate)!.dimension, wanted));
  return fitting.slice(0, 3);
}
