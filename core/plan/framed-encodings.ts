import {
  type Encoding,
  formatVariant,
  type OrbitalFrame,
  orbitalFrame,
  spinFrame,
  type VariantName,
} from '../encode';
import type { Factorisation } from '../factor';
import { rotateOrbitals, rotateSpin, type SpatialHamiltonian, type SpinHamiltonian } from '../hamiltonian';
import type { JobContext } from '../job';
import type { Encodings } from './encodings';
import {
  type Frame,
  type FrameRecord,
  type FrameRequest,
  frameNote,
  GIVEN_FRAMES,
  judgeOf,
  rowsOf,
  WORTHWHILE,
} from './frame';

/**
 * Encodings of one Hamiltonian, each in the frame that the request wants for it: the given one, or spin axes or orbitals
 * turned for a smaller λ. Frames are sought once and shared between variants; the true λ decides whether one is taken.
 */
export class FramedEncodings {
  readonly #hamiltonian: SpinHamiltonian;
  readonly #make: (hamiltonian: SpinHamiltonian) => Encodings;
  readonly #request: FrameRequest;
  readonly #given: Encodings;
  readonly #frames = new Map<string, Frame>();
  readonly #framed = new Map<Frame, Encodings>();
  readonly #encodings = new Map<string, Encoding>();
  #turnedOrbitals: (OrbitalFrame & { readonly hamiltonian: SpatialHamiltonian }) | null | undefined;
  readonly #users = new Map<Frame, string[]>();

  /** @param make - encodings of a Hamiltonian, under whatever else the request asks for */
  constructor(
    hamiltonian: SpinHamiltonian,
    make: (hamiltonian: SpinHamiltonian) => Encodings,
    request: FrameRequest = GIVEN_FRAMES,
  ) {
    this.#hamiltonian = hamiltonian;
    this.#make = make;
    this.#request = request;
    this.#given = make(hamiltonian);
  }

  /** Why the variant is left out though its name is sound, or null. */
  refusal(variant: VariantName): string | null {
    return this.#given.refusal(variant);
  }

  /** The variant's encoding, over the basis of {@link frameOf}, with a note on it. */
  async of(variant: VariantName, context: JobContext): Promise<Encoding> {
    const frame = await this.frameOf(variant, context);
    const encodings = this.#encodingsIn(frame);
    const encoding = await encodings.of(variant, context);
    if (!frame) return encoding;
    const users = this.#users.get(frame) ?? [];
    const name = formatVariant(variant);
    if (!users.includes(name)) users.push(name);
    this.#users.set(frame, users);
    const key = formatVariant({ ...variant, spin: 'index', lookup: 'clean' });
    let noted = this.#encodings.get(key);
    if (!noted) {
      noted = { ...encoding, notes: [...(encoding.notes ?? []), frameNote(frame.record, variant)] };
      this.#encodings.set(key, noted);
    }
    return noted;
  }

  /** What the variant's encoding is made from, over the same basis; null for the sparse form. */
  async factorisationOf(variant: VariantName, context: JobContext): Promise<Factorisation | null> {
    return this.#encodingsIn(await this.frameOf(variant, context)).factorisationOf(variant, context);
  }

  /** The frame sought for the variant, or null where none was asked for or can matter. */
  async frameOf(variant: VariantName, context: JobContext): Promise<Frame | null> {
    const h = this.#hamiltonian;
    const judge = h.kind === 'spatial' ? judgeOf(variant, this.#request) : null;
    if (h.kind !== 'spatial' || !judge) return null;
    const key = formatVariant(judge);
    let frame = this.#frames.get(key);
    if (!frame) {
      frame = await this.#seek(h, judge, context);
      this.#frames.set(key, frame);
    }
    return frame;
  }

  /** The Hamiltonian that the variant's encoding stands for, in the encoding's own basis. */
  async hamiltonianOf(variant: VariantName, context: JobContext): Promise<SpinHamiltonian> {
    return (await this.frameOf(variant, context))?.hamiltonian ?? this.#hamiltonian;
  }

  /** All frames that encodings were made in so far. */
  records(): FrameRecord[] {
    return [...this.#users].map(([{ record }, variants]) => {
      const { kind, ...rest } = record;
      return { kind, variants: [...variants], ...rest };
    });
  }

  #encodingsIn(frame: Frame | null): Encodings {
    if (!frame?.record.turned) return this.#given;
    let encodings = this.#framed.get(frame);
    if (!encodings) {
      encodings = this.#make(frame.hamiltonian);
      this.#framed.set(frame, encodings);
    }
    return encodings;
  }

  /** One search serves every sparse variant: the norm that it lowers is the same. */
  async #orbitals(h: SpatialHamiltonian, context: JobContext) {
    if (this.#turnedOrbitals === undefined) {
      const found = await orbitalFrame(h, {}, context);
      this.#turnedOrbitals = found && {
        ...found,
        hamiltonian: await rotateOrbitals(h, found.rotation, context),
      };
    }
    return this.#turnedOrbitals;
  }

  async #seek(h: SpatialHamiltonian, judge: VariantName, context: JobContext): Promise<Frame> {
    const before = await this.#given.of(judge, context);
    const kind = judge.factorisation === 'sparse' ? 'orbital' : 'spin';
    const size = kind === 'spin' ? 3 : h.orbitals;
    const found =
      kind === 'spin'
        ? await spinFrame(h, (await this.#given.factorisationOf(judge, context))!, judge, context)
        : await this.#orbitals(h, context);
    const record = {
      kind,
      judgedBy: formatVariant(judge),
      evaluations: found?.evaluations ?? 0,
    } as const;
    const rowsBefore = before.shape.rows;
    const kept: Frame = {
      hamiltonian: h,
      record: {
        ...record,
        turned: false,
        rotation: rowsOf(identity(size), size),
        lambda: { before: before.lambda.total, after: before.lambda.total },
        rows: { before: rowsBefore, after: rowsBefore },
      },
    };
    if (!found || isIdentity(found.rotation, size)) return kept;
    const hamiltonian = 'hamiltonian' in found ? found.hamiltonian : rotateSpin(h, found.rotation);
    const encodings = this.#make(hamiltonian);
    const after = await encodings.of(judge, context);
    const gain = before.lambda.total - after.lambda.total;
    if (!(gain > WORTHWHILE * before.lambda.total)) return kept;
    const frame: Frame = {
      hamiltonian,
      record: {
        ...record,
        turned: true,
        rotation: rowsOf(found.rotation, size),
        lambda: { before: before.lambda.total, after: after.lambda.total },
        rows: { before: rowsBefore, after: after.shape.rows },
      },
    };
    this.#framed.set(frame, encodings);
    return frame;
  }
}

function identity(n: number): Float64Array {
  const out = new Float64Array(n * n);
  for (let p = 0; p < n; p++) out[p * n + p] = 1;
  return out;
}

function isIdentity(rotation: Float64Array, n: number): boolean {
  return rotation.every((x, i) => x === (i % (n + 1) === 0 ? 1 : 0));
}
