import { SURFACE_CODE_DEFAULTS, whatif } from '../../core/estimate';
import type { JobContext } from '../../core/job';
import {
  countCircuit,
  inspectIntegrals,
  runComparison,
  runVerification,
  writeCircuit,
} from '../../core/plan';
import { checkEncoding, writeEncoding } from './encode-files';
import { loadInputs, openInputs, readReference } from './inputs';
import { MixingFile } from './mixing-file';
import { refuseUsedFolder, writeStreamed } from './output';
import type {
  CircuitRequest,
  CompareRequest,
  EncodeRequest,
  InspectRequest,
  Request,
  TablesRequest,
  VerifyRequest,
} from './request';
import type { Result } from './result';

/** Does what a request asks for. Runs in the job's thread; writes nothing but circuits, tables and the state of mixing, to temporary names. */
export async function answer(request: Request, context: JobContext): Promise<Result> {
  switch (request.command) {
    case 'inspect':
      return inspect(request, context);
    case 'compare':
      return compare(request, context);
    case 'verify':
      return verify(request, context);
    case 'circuit':
      return circuit(request, context);
    case 'encode':
      return encode(request, context);
    case 'tables':
      return tables(request, context);
    case 'whatif':
      return { command: 'whatif', whatIf: whatif(request.options, SURFACE_CODE_DEFAULTS) };
    case 'copy-demo':
      return request;
  }
}

async function inspect(request: InspectRequest, context: JobContext): Promise<Result> {
  const inputs = await openInputs(request, context);
  const set = await loadInputs(inputs, 'all', 'keep', context);
  const { writeRecipe } = request;
  return {
    command: 'inspect',
    inspection: await inspectIntegrals(set, context),
    recipe:
      writeRecipe === null
        ? null
        : { path: writeRecipe, text: `${JSON.stringify(inputs.recipe, null, 2)}\n` },
  };
}

async function compare(request: CompareRequest, context: JobContext): Promise<Result> {
  const { comparison } = request;
  const set = await loadInputs(await openInputs(request, context), comparison.terms, 'throw', context);
  const mixing = request.mixingState === null ? null : new MixingFile(request.mixingState);
  try {
    const run = await runComparison(set, comparison, context, {}, mixing?.states ?? null);
    return { command: 'compare', run, meaning: comparison.target.meaning };
  } finally {
    mixing?.flush();
  }
}

async function verify(request: VerifyRequest, context: JobContext): Promise<Result> {
  const inputs = await openInputs(request, context);
  const set = await loadInputs(inputs, request.terms, 'throw', context);
  const evidence = await runVerification(set, request, context, await readReference(inputs));
  return { command: 'verify', evidence };
}

async function circuit(request: CircuitRequest, context: JobContext): Promise<Result> {
  const { out, part } = request;
  const set = await loadInputs(await openInputs(request, context), request.circuit.terms, 'throw', context);
  if (out === null)
    return { command: 'circuit-count', count: await countCircuit(set, request.circuit, context) };
  const text = await writeStreamed(out, (write) =>
    writeCircuit(set, { ...request.circuit, part }, context, write),
  );
  return { command: 'circuit-text', text, out };
}

async function encode(request: EncodeRequest, context: JobContext): Promise<Result> {
  const { out } = request;
  refuseUsedFolder(out.path);
  const set = await loadInputs(await openInputs(request, context), request.encode.terms, 'throw', context);
  return { command: 'encode', tables: await writeEncoding(set, request.encode, out, context), out };
}

async function tables({ folder, against }: TablesRequest, context: JobContext): Promise<Result> {
  return { command: 'tables', folder, check: await checkEncoding(folder, against, context) };
}
