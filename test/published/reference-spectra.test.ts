import { describeReferenceLevels } from './reference-levels';

for (const name of ['f_sto3g_2p', 'c_631g_2p', 'br_def2svp_4p', 'oh_sto3g', 'ch2_sto3g', 'h2se_def2svp_6o']) {
  describeReferenceLevels(name);
}
