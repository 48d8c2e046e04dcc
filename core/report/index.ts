export {
  formatChange,
  formatCount,
  formatDuration,
  formatExactCount,
  formatOneNorm,
  formatRatio,
  formatShare,
  formatSignificant,
  NOT_APPLICABLE,
} from './figures';
