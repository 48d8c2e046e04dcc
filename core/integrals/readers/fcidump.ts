import { InputError, type JobContext } from '../../job';
import type { SpinFreeContents, SpinorContents } from '../raw';
import type { ByteSource } from '../source';
import { refuseEmpty } from './chunks';
import { EntryParser } from './fcidump-entry';
import { type FcidumpHeader, readHeader, requireElectrons, requirePlausible } from './fcidump-header';
import type { Clash, FcidumpSink } from './fcidump-sink';
import { SpatialSink, spatialBytes } from './fcidump-spatial';
import { SpinorSink, spinorBytes } from './fcidump-spinor';
import { NamelistCollector } from './namelist';
import { forEachLine } from './text-lines';

/**
 * Reads an FCIDUMP (P. J. Knowles and N. C. Handy, Comput. Phys. Commun. 54, 75 (1989)): a namelist, then one
 * integral a line, hartree, chemists' notation. Real values over spatial orbitals may be listed under any of
 * their eight permutations. A file with `TREL=.TRUE.` or with values `(re,im)` is over complex spinors, the
 * first and third index belonging to the conjugated functions.
 *
 * Reads the file once, in blocks; a second time only to say where two lines clash.
 * @throws InputError with file and line.
 */
export async function readFcidump(
  source: ByteSource,
  context: JobContext,
): Promise<SpinFreeContents | SpinorContents> {
  refuseEmpty(source);
  const collector = new NamelistCollector(source.path, 'FCI');
  const state: { header?: FcidumpHeader; parser?: EntryParser; sink?: FcidumpSink } = {};
  let lastLine = 1;
  await forEachLine(source, context, (bytes, start, end, line) => {
    lastLine = line;
    if (state.header === undefined) {
      if (collector.add(bytes, start, end, line)) state.header = readHeader(source.path, collector.parse());
      return;
    }
    state.parser ??= new EntryParser(source.path, state.header.orbitals);
    const { parser, header } = state;
    if (!parser.parse(bytes, start, end, line)) return;
    // The first entry decides: only now is it known what the values are over.
    state.sink ??= openSink(source, header, parser.complex);
    if (parser.complex && state.sink instanceof SpatialSink) throw mixed(source.path, line);
    state.sink.add(parser, line);
  });
  const { header, sink } = state;
  if (header === undefined) throw collector.unclosed(lastLine);
  if (sink === undefined) throw noEntries(source.path, lastLine);
  const clash = sink.clash();
  if (clash) throw await describe(clash, source, header, sink, context);
  return sink.finish(context);
}

function openSink(source: ByteSource, header: FcidumpHeader, complex: boolean): FcidumpSink {
  const spinor = complex || header.relativistic;
  const n = header.orbitals;
  requireElectrons(header, spinor ? n : 2 * n, spinor);
  requirePlausible(header, spinor ? spinorBytes(n) : spatialBytes(n), source.size);
  return spinor ? new SpinorSink(source.path, header) : new SpatialSink(source.path, header);
}

/** Looks up the first line that gave the integral of a clash. */
async function describe(
  clash: Clash,
  source: ByteSource,
  header: FcidumpHeader,
  sink: FcidumpSink,
  context: JobContext,
): Promise<InputError> {
  const parser = new EntryParser(source.path, header.orbitals);
  const collector = new NamelistCollector(source.path, 'FCI');
  let inHeader = true;
  const given: { line: number; text: string }[] = [];
  await forEachLine(source, context, (bytes, start, end, line) => {
    if (inHeader) inHeader = !collector.add(bytes, start, end, line);
    else if ((given.length === 0 || line === clash.line) && parser.parse(bytes, start, end, line)) {
      if (sink.slotOf(parser) === clash.slot) {
        const { re, im, complex, i, j, k, l } = parser;
        given.push({ line, text: `${complex ? `(${re},${im})` : re} for ${i} ${j} ${k} ${l}` });
      }
    }
  });
  const [first, second] = given;
  return new InputError({
    code: 'duplicate-entry',
    where: `${source.path}:${clash.line}`,
    found: `${second?.text}, but line ${first?.line} has ${first?.text}, the same integral`,
    expected: 'equal values for equal integrals',
    mend: 'Remove or correct one of the two lines.',
  });
}

const mixed = (path: string, line: number): InputError =>
  new InputError({
    code: 'mixed-values',
    where: `${path}:${line}`,
    found: 'a complex value among real ones',
    expected: 'only real values, or only complex ones (TREL=.TRUE.)',
    mend: 'Write all values of a spinor file as (re,im).',
  });

const noEntries = (path: string, line: number): InputError =>
  new InputError({
    code: 'no-entries',
    where: `${path}:${line}`,
    found: 'the end of the file after the header',
    expected: 'lines of a value and four indices',
    mend: 'The file was cut short: write or copy it again.',
  });
