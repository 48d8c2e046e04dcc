import { roundedVector, type TripletTables } from '../../circuit';
import type { VectorProducts } from '../../encode';
import { type ArrayLayout, byRow, type Pieces, whole } from './arrays';
import type { StoredTables } from './form';

/** What forms by squares say of products of two vectors beside their items. */
export const PRODUCTS_CONVENTIONS = {
  products:
    'where sizes.products is not 0, H has further terms sign * lambda * (M_m M_n + M_n M_m)/2 for m < n and sign * lambda * (2 M_m^2 - 1) for m = n; M_m is the S row of charge (s = m = sign = 0, r = 1) of vector m, by its own angle numbers as u above. lambda of product i = sizes.outerLambda * outer probability of outer index sizes.firstProduct + i.',
} as const;

/** Arrays of the products; without products they have no numbers. */
export const PRODUCTS_ARRAYS: readonly ArrayLayout[] = [
  { name: 'product_first', type: '<u4', shape: ['products'], meaning: 'm of each product' },
  { name: 'product_second', type: '<u4', shape: ['products'], meaning: 'n of each product, m <= n' },
  { name: 'product_sign', type: '|i1', shape: ['products'], meaning: 'sign of each product, 1 or -1' },
  {
    name: 'vector_angles',
    type: '<u4',
    shape: ['vectors', 'angles'],
    meaning: 'angle numbers of the vectors that products are made of',
  },
];

export function productsData(tables: TripletTables) {
  const { places, products } = tables;
  const vectors = places?.vectors ?? 0;
  const data: Record<string, Pieces> = {
    product_first: whole(products?.first ?? new Uint32Array(0)),
    product_second: whole(products?.second ?? new Uint32Array(0)),
    product_sign: whole(products?.sign ?? new Int8Array(0)),
    vector_angles: byRow('<u4', vectors, tables.orbitals - 1, (m, target, at) =>
      target.set(tables.rows.get(places!.library + m)!.u, at),
    ),
  };
  return {
    sizes: { products: products?.lambda.length ?? 0, vectors, firstProduct: places?.firstProduct ?? 0 },
    data,
  };
}

/** @param outer - probabilities of the outer table */
export async function readProducts(
  stored: StoredTables,
  outer: Float64Array,
  angleBits: number,
): Promise<VectorProducts | null> {
  const [count, vectors, from] = [
    stored.size('products'),
    stored.size('vectors'),
    stored.size('firstProduct'),
  ];
  if (count === 0) return null;
  if (from + count > outer.length) {
    stored.refuse('sizes', `${count} products from outer index ${from}`, `${outer.length} outer indices`);
  }
  const first = await stored.array('product_first', 0, vectors);
  const second = await stored.array('product_second', 0, vectors);
  const sign = await stored.array('product_sign', -1, 2);
  const numbers = await stored.array('vector_angles', 0, 2 ** angleBits);
  const angles = stored.orbitals - 1;
  const total = stored.size('outerLambda');
  return {
    vectors: Array.from({ length: vectors }, (_, m) =>
      roundedVector(Uint32Array.from(numbers.subarray(m * angles, (m + 1) * angles)), angleBits),
    ),
    first: Uint32Array.from(first),
    second: Uint32Array.from(second),
    lambda: outer.slice(from, from + count).map((p) => total * p),
    sign: Int8Array.from(sign),
  };
}
