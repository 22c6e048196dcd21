package solver

// closeness is the relative size below which two quantities computed along different routes count as the
// same: 2^-40, about 9e-13. Derivation: a double carries 2^-53; a state or an event time comes out of at
// most a few dozen operations whose condition is, on the corridors this is built for, below 2^8, so honest
// differences stay below about 2^-40. Treating as equal what differs by less displaces at most 2^-40 of the
// flow, jam density or horizon in question: a thousandth of the 1e-9 that answers promise.
//
// It scales with the relation (jam density, capacity, free-flow speed) for states and with the horizon for
// times, never with the number at hand, so that it means the same everywhere in a scenario.
const closeness = 0x1p-40

// halfDigits is above the relative error of a double root of a quadratic that is itself right to closeness: 2^-20, the
// root of that, times four for what the place computed there adds. It is used only where a shock vanishes, and what
// it lets pass changes a count by its square.
const halfDigits = 0x1p-18

// consistency is the relative difference up to which over-determined inputs (all four parameters of a
// triangular relation, say) count as agreeing: callers pass rounded decimals, 1e-6 forgives six digits.
const consistency = 1e-6
