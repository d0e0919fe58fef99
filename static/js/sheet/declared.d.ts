// Made by `python -m fieldlog.sheet.generate` from fieldlog/sheet/. Do not edit.

export interface FieldDeclaration {
  name: string;
  type: string;
  label: string;
  help: string;
  group: string;
  unit: string;
  minimum: number | null;
  maximum: number | null;
  decimals: number | null;
  vocabulary: string | null;
  refers_to: string | null;
  max_length: number;
  required: boolean;
  measure: boolean;
  carries: string;
  optional: boolean;
  derived_from: string[];
  clocked: boolean;
  asked: boolean;
  retired: boolean;
}
export interface SheetDeclaration {
  kind: string;
  label: string;
  groups: Record<string, string>;
  fields: FieldDeclaration[];
}
export interface Word {
  value: string;
  label: string;
  definition: string;
  retired: boolean;
}
export const SHEETS: Record<string, SheetDeclaration>;
export const VOCABULARIES: Record<string, Word[]>;
export const CONSTANTS: {
  absences: Record<string, string>;
  phone_kinds: string[];
  cautions: string[];
  clock_off_ms: number;
  sheet_version: string;
};

export interface SurveyRow {
  record: string;
  name: string | null;
  time_zone: string | null;
  target_half_width_deg: number | null;
  fewest_dunes: number | null;
  reading_step_deg: number | null;
  optional_fields: string[] | null;
  note: string | null;
  photo_long_edge_px: number | null;
  photo_original: boolean | null;
  ask_square_deg: number | null;
  ask_steepest_deg: number | null;
  ask_gentlest_deg: number | null;
  ask_accuracies: number | null;
  ask_opposed_deg: number | null;
  ask_opposed_others: number | null;
  ask_opposed_resultant: number | null;
  ask_outlier_readings: number | null;
  ask_outlier_spreads: number | null;
  ask_repeat_s: number | null;
  ask_back_s: number | null;
  ask_declination_deg: number | null;
  ask_declination_steps: number | null;
  ask_north_readings: number | null;
  ask_north_errors: number | null;
}

export interface CrewRow {
  record: string;
  name: string | null;
  lead: boolean | null;
}

export interface SiteRow {
  record: string;
  name: string | null;
  lat_deg: number | null;
  lon_deg: number | null;
  radius_m: number | null;
  dune_pattern: string | null;
  dune_rule: string | null;
  target_half_width_deg: number | null;
  expected_facing_deg: number | null;
  note: string | null;
  crossed_out: string | null;
}

export interface ObservationRow {
  record: string;
  site: string | null;
  bedform: number | null;
  bedform_order: string | null;
  face: string | null;
  dune_type: string | null;
  observed_at: string | null;
  observed_by_clock: string | null;
  lat_deg: number | null;
  lon_deg: number | null;
  altitude_m: number | null;
  accuracy_m: number | null;
  fix_method: string | null;
  fixes_n: number | null;
  fixes_spread_m: number | null;
  sighted_bearing_deg: number | null;
  sighted_distance_m: number | null;
  instrument: string | null;
  north: string | null;
  how_read: string | null;
  reading_step_deg: number | null;
  declination_deg: number | null;
  declination_model: string | null;
  convergence_deg: number | null;
  crest_read_deg: number | null;
  crest_read_deg_absent: string | null;
  crest_deg: number | null;
  crest_place: string | null;
  crest_chord_m: number | null;
  slip_face_read_deg: number | null;
  slip_face_read_deg_absent: string | null;
  slip_face_looking: string | null;
  slip_face_deg: number | null;
  slip_face_dip_deg: number | null;
  slip_face_dip_deg_absent: string | null;
  slip_face_state: string | null;
  brink_read_deg: number | null;
  brink_read_deg_absent: string | null;
  brink_deg: number | null;
  ripple_crest_read_deg: number | null;
  ripple_crest_read_deg_absent: string | null;
  ripple_crest_deg: number | null;
  grain_class: string | null;
  grain_class_absent: string | null;
  grain_class_second: string | null;
  sorting: string | null;
  sample_bag: string | null;
  surface_type: string | null;
  surface_type_absent: string | null;
  stone_cover_percent: number | null;
  landform: string | null;
  dune_position: string | null;
  height_m: number | null;
  spacing_m: number | null;
  crest_length_m: number | null;
  vegetation_cover_percent: number | null;
  crust_mm: number | null;
  days_since_wind: number | null;
  activity: string | null;
  check_of: string | null;
  transcribed: boolean | null;
  note: string | null;
  crossed_out: string | null;
}

export interface PhotoRow {
  record: string;
  observation: string | null;
  sha256: string | null;
  bytes: number | null;
  width_px: number | null;
  height_px: number | null;
  bearing_deg: number | null;
  taken_at: string | null;
  crossed_out: string | null;
}

export interface TrackRow {
  record: string;
  name: string | null;
  crew: string | null;
  part: number | null;
  points: [number, number, number | null, string | null][] | null;
  crossed_out: string | null;
}

export interface Same_duneRow {
  record: string;
  site: string | null;
  dune: string | null;
  other: string | null;
  crossed_out: string | null;
}
