/** What all forms have in common. */
export const COMMON_CONVENTIONS = {
  energies: 'hartree',
  arrays:
    'row-major (C order), little-endian, one NumPy .npy file (format 1.0) each; counts and positions from 0; extents by their names in sizes, arrays without numbers left out; crc32 of the numbers without the header',
  spinOrbitals: 'mode 2p + spin, spin 0 = up; qubit = mode (Jordan-Wigner)',
} as const;
