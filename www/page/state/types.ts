/**
 * The document and the answers as they travel: generated from the Rust types, with one difference. What the
 * core leaves out of the JSON when it is empty may be absent here, which the generated types do not say.
 */
import type { Body as WholeBody } from "../../shared/generated/Body";
import type { Channel as WholeChannel } from "../../shared/generated/Channel";
import type { Coherent as WholeCoherent } from "../../shared/generated/Coherent";
import type { Data as WholeData } from "../../shared/generated/Data";
import type { Incoherent as WholeIncoherent } from "../../shared/generated/Incoherent";
import type { Couplings as WholeCouplings } from "../../shared/generated/Couplings";
import type { Diagrams as WholeDiagrams } from "../../shared/generated/Diagrams";
import type { FlatteChannel as WholeFlatteChannel } from "../../shared/generated/FlatteChannel";
import type { HelicityTerm as WholeHelicityTerm } from "../../shared/generated/HelicityTerm";
import type { KMatrix as WholeKMatrix } from "../../shared/generated/KMatrix";
import type { Loop as WholeLoop } from "../../shared/generated/Loop";
import type { LsTerm as WholeLsTerm } from "../../shared/generated/LsTerm";
import type { Mediator as WholeMediator } from "../../shared/generated/Mediator";
import type { Wave as WholeWave } from "../../shared/generated/Wave";
import type { PoleReading as WholePoleReading } from "../../shared/generated/PoleReading";
import type { WaveReading as WholeWaveReading } from "../../shared/generated/WaveReading";
import type { Request as WholeRequest } from "../../shared/generated/Request";
import type { Resonance as WholeResonance } from "../../shared/generated/Resonance";
import type { Row as WholeRow } from "../../shared/generated/Row";
import type { Shape as WholeShape } from "../../shared/generated/Shape";
import type { Sheet as WholeSheet } from "../../shared/generated/Sheet";
import type { Strength as WholeStrength } from "../../shared/generated/Strength";
import type { Vertex as WholeVertex } from "../../shared/generated/Vertex";

/** Lists, flags and notes that are left out when empty. */
type LeftOut =
  | "gaussian_factors"
  | "goals"
  | "blocked"
  | "luminosity_at"
  | "energy_covariance"
  | "table"
  | "channels"
  | "covariance"
  | "angle_bins"
  | "beams_apart"
  | "strengths"
  | "phases"
  | "other"
  | "constraints"
  | "left_out"
  | "running"
  | "comment"
  | "hypothesis"
  | "waves"
  | "flatte"
  | "loops"
  | "pseudoscalar";

type MayBeAbsent<T, K extends keyof T> = null extends T[K] ? K : K extends LeftOut ? K : never;

type Loose<T> = T extends readonly unknown[]
  ? T extends readonly [infer A, infer B]
    ? [Loose<A>, Loose<B>]
    : T extends readonly (infer U)[]
      ? Loose<U>[]
      : T
  : T extends object
    ? { [K in keyof T as MayBeAbsent<T, K> extends never ? K : never]: Loose<T[K]> } & {
        [K in keyof T as MayBeAbsent<T, K>]?: Loose<T[K]> | undefined;
      }
    : T;

export type Body = Loose<WholeBody>;
export type Channel = Loose<WholeChannel>;
export type Coherent = Loose<WholeCoherent>;
export type Data = Loose<WholeData>;
export type Incoherent = Loose<WholeIncoherent>;
export type Couplings = Loose<WholeCouplings>;
export type Diagrams = Loose<WholeDiagrams>;
export type FlatteChannel = Loose<WholeFlatteChannel>;
export type HelicityTerm = Loose<WholeHelicityTerm>;
export type KMatrix = Loose<WholeKMatrix>;
export type Loop = Loose<WholeLoop>;
export type LsTerm = Loose<WholeLsTerm>;
export type Mediator = Loose<WholeMediator>;
export type Wave = Loose<WholeWave>;
export type PoleReading = Loose<WholePoleReading>;
export type WaveReading = Loose<WholeWaveReading>;
export type Request = Loose<WholeRequest>;
export type Resonance = Loose<WholeResonance>;
export type Row = Loose<WholeRow>;
export type Shape = Loose<WholeShape>;
export type Sheet = Loose<WholeSheet>;
export type Strength = Loose<WholeStrength>;
export type Vertex = Loose<WholeVertex>;
export type { Arrangement } from "../../shared/generated/Arrangement";
export type { ColumnReading } from "../../shared/generated/ColumnReading";
export type { Dial } from "../../shared/generated/Dial";
export type { Form } from "../../shared/generated/Form";
export type { KnownLimit } from "../../shared/generated/KnownLimit";
export type { KnownParticle } from "../../shared/generated/KnownParticle";
export type { Named } from "../../shared/generated/Named";
export type { Given } from "../../shared/generated/Given";
export type { ModelKind } from "../../shared/generated/ModelKind";
export type { Reaction } from "../../shared/generated/Reaction";
export type { MassConvention } from "../../shared/generated/MassConvention";
export type { DiagramReading } from "../../shared/generated/DiagramReading";
export type { Words } from "../../shared/generated/Words";
export type { Refusal } from "../../shared/generated/Refusal";
export type { SpreadKind } from "../../shared/generated/SpreadKind";
export type { Table } from "../../shared/generated/Table";
export type { Warning } from "../../shared/generated/Warning";
