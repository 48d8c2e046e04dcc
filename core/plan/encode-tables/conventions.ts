/** What all forms have in common. */
export const COMMON_CONVENTIONS = {
  energies: 'hartree',
  arrays:
    'row-major (C order), little-endian, one NumPy .npy file (format 1.0) each; counts and positions from 0; extents by their names in sizes, arrays without numbers left out; crc32 of the numbers without the header; the crc32 of this document is that of all the rest as JSON without blanks, numbers as ECMAScript writes them',
  spinOrbitals: 'mode 2p + spin, spin 0 = up; qubit = mode (Jordan-Wigner)',
  basis:
    "where there is an array frame F, the tables are over a turned basis. Its kind is spin: component l of an operator is L'_l = sum_k F_kl L_k in the given axes x, y, z. Or orbital: orbital p is sum_q F_pq times the given orbital q. F is orthogonal: its transpose turns back.",
} as const;
