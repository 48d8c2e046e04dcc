import type { WhatIfResult } from '../../core/estimate';
import { throwFirstError } from '../../core/integrals';
import { type ComparisonRun, comparisonDocument } from '../../core/plan';
import { circuitCountText, circuitText } from './circuit-text';
import { compareText } from './compare-text';
import { encodeText, tablesText } from './encode-text';
import { inspectText } from './inspect-text';
import { outcomeLines } from './outcome-text';
import { copyFolder, placeReserved, writeWhole } from './output';
import type { TerminalStream } from './progress';
import type { Manner } from './request';
import type { Result } from './result';
import { BUG, CHECK_FAILED, DONE, FAILED } from './status';
import { verifyText } from './verify-text';
import { whatIfText } from './whatif-text';

/** For files and pipes, which have no width. */
const DEFAULT_COLUMNS = 140;

/** Writes the answer, and the files it stands for; returns the exit status. */
export function printResult(
  result: Result,
  manner: Manner,
  out: TerminalStream,
  err: TerminalStream,
): number {
  const columns = out.columns ?? DEFAULT_COLUMNS;
  const answer = (document: () => object, text: () => string): void => {
    out.write(manner.json ? `${JSON.stringify(document(), null, 2)}\n` : text());
  };
  const note = (text: string): void => {
    if (!manner.quiet) err.write(`${text}\n`);
  };
  switch (result.command) {
    case 'inspect': {
      const { inspection, recipe } = result;
      if (recipe) {
        writeWhole(recipe.path, recipe.text);
        note(`Wrote ${recipe.path}.`);
      }
      answer(
        () => inspection,
        () => inspectText(inspection, columns),
      );
      // All is listed by now; the status still tells scripts that the set cannot be used.
      throwFirstError(inspection.findings);
      return DONE;
    }
    case 'compare': {
      const { run, meaning } = result;
      answer(
        () => comparisonDocument(run.comparison),
        () => compareText(run, meaning, columns),
      );
      if (manner.json) for (const line of outcomeLines(run.outcomes)) err.write(`${line}\n`);
      return compareStatus(run);
    }
    case 'verify': {
      const { evidence } = result;
      answer(
        () => evidence,
        () => verifyText(evidence),
      );
      return evidence.checks.every(({ ok }) => ok) ? DONE : CHECK_FAILED;
    }
    case 'circuit-count':
      answer(
        () => result.count,
        () => circuitCountText(result.count),
      );
      return DONE;
    case 'circuit-text': {
      const { text, out: file } = result;
      placeReserved(file);
      answer(
        () => ({ ...text, file: file.path }),
        () => circuitText(text, file.path),
      );
      return DONE;
    }
    case 'encode': {
      const { tables, out: folder } = result;
      placeReserved(folder);
      answer(
        () => ({ ...tables, folder: folder.path }),
        () => encodeText(tables, folder.path),
      );
      return DONE;
    }
    case 'tables': {
      const { check, folder } = result;
      answer(
        () => check,
        () => tablesText(check, folder),
      );
      return check.checks.every(({ ok }) => ok) ? DONE : CHECK_FAILED;
    }
    case 'whatif':
      answer(
        () => whatIfDocument(result.whatIf),
        () => whatIfText(result.whatIf, columns),
      );
      return DONE;
    case 'copy-demo': {
      const files = copyFolder(result.from, result.out);
      answer(
        () => ({ folder: result.out, files }),
        () =>
          `Copied ${files.length} files to ${result.out}. Next: spinwright compare ${result.out} --target 5cm-1\n`,
      );
      return DONE;
    }
  }
}

function compareStatus({ outcomes }: ComparisonRun): number {
  const failures = outcomes.flatMap((outcome) => (outcome.status === 'failed' ? [outcome.problem] : []));
  if (failures.length === 0) return DONE;
  return failures.some(({ code }) => code === 'bug') ? BUG : FAILED;
}

/** Without the tree of subroutines, which is many times larger than the rest. */
function whatIfDocument({ step, ...rest }: WhatIfResult): object {
  const { schema, parameters, bits, logicalQubits, walkSteps, totalToffoli, totalT } = rest;
  const { toffoli, t, parts } = step;
  return {
    schema,
    parameters,
    bits,
    step: { toffoli, t, parts },
    logicalQubits,
    walkSteps,
    totalToffoli,
    totalT,
    physical: rest.physical,
    published: rest.published,
    difference: rest.difference,
  };
}
