/** The room a figure is drawn in. Text is 11 or 12 px in all of them: 6.4 and 7 pt at the journal widths. */
export interface Size {
  /** Widest drawing, px. */
  readonly width: number;
  /** Columns on the left for the names of covariates, px. */
  readonly names: number;
  /** One text column of a journal: labels are shortened, numbers in cells left out. */
  readonly narrow: boolean;
}

/** As the page shows it. */
export const SCREEN: Size = { width: 1080, names: 178, narrow: false };

/** A pixel of an exported drawing, mm: 12 px of text are 7 pt. */
export const MM_PER_PX = ((7 / 12) * 25.4) / 72;

/** The two widths at which journals print figures, mm, and the room a drawing has in them. */
export const JOURNAL_WIDTHS = [
  { mm: 85, size: { width: Math.floor(85 / MM_PER_PX), names: 138, narrow: true } },
  { mm: 170, size: { width: Math.floor(170 / MM_PER_PX), names: 170, narrow: false } },
] as const satisfies readonly { readonly mm: number; readonly size: Size }[];
