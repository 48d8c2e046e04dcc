import { describeReferenceLevels } from './reference-levels';

// 12 870 determinants, a file of its own so that it can run beside the others.
describeReferenceLevels('ch2o_sto3g_8o');
