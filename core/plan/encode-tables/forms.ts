import type { FormName, TablesForm } from './form';
import { SPARSE } from './sparse';
import { SPINOR } from './spinor';
import { TRIPLET } from './triplet';

type AnyForm = { readonly [F in FormName]: TablesForm<F> }[FormName];

/** Every form whose tables can be written. */
export const FORMS: readonly AnyForm[] = [TRIPLET, SPINOR, SPARSE];
