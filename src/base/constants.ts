// constants.ts: the physical constants and unit factors, each once. CODATA 2022 (NIST SP 961); exact where the SI fixes them.

/** Boltzmann constant, eV/K (exact in the SI, rounded). */
export const boltzmannEvPerK = 8.617333262e-5;
/** Hartree energy, eV. */
export const hartreeEv = 27.211386245981;
/** Rydberg energy, eV: half a hartree. */
export const rydbergEv = hartreeEv / 2;
/** Bohr radius, angstrom. */
export const bohrA = 0.529177210544;
/** Conductance e^2/hbar, siemens: 2 pi / (25812.80745... ohm), exact through e and h. */
export const e2OverHbarS = 2.434134805788e-4;
/** Elementary charge, coulomb (exact in the SI). */
export const chargeC = 1.602176634e-19;
/** hbar^2 / m_e in eV angstrom^2: hartree times bohr^2. */
export const hbar2OverMeEvA2 = hartreeEv * bohrA * bohrA;
/** hbar in eV s (exact in the SI, rounded). */
export const hbarEvS = 6.582119569e-16;
/** A velocity of 1 m/s as hbar v, in eV angstrom. */
export const hbarMetrePerSecondEvA = hbarEvS * 1e10;
/** 1/angstrom in 1/cm. */
export const perAngstromInPerCm = 1e8;
