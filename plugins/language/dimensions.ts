/** Physical dimension as exponents of the SI base units that occur here, and an optional tag for angles. */
export interface Dimension {
  readonly metre: number;
  readonly kilogram: number;
  readonly second: number;
  readonly ampere: number;
  readonly kelvin: number;
  readonly candela: number;
}
