/** SI defining constants, exact (BIPM, The International System of Units, 9th edition, 2019, section 2.2). */
export const BOLTZMANN = 1.380649e-23; // J/K
export const ELEMENTARY_CHARGE = 1.602176634e-19; // C

/** kT/q in volt. */
export function thermalVoltage(kelvin: number): number {
  return (BOLTZMANN * kelvin) / ELEMENTARY_CHARGE;
}
