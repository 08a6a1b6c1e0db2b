/** Numbers of a figure as a table: what a reader can copy, and what the page's script reads out at the cursor. */
export interface NumbersTable {
  /** With their units. */
  readonly columns: readonly string[];
  /** A row of cells; an empty text means 'not available'. */
  readonly rows: () => Iterable<readonly string[]>;
}

/** A picture with what makes it readable without being seen. */
export interface Figure {
  /** Name of its file without ending, and of its place in the page: letters, digits and `-`. */
  readonly name: string;
  readonly title: string;
  /** What a person who sees it would tell one who does not. */
  readonly description: string;
  readonly drawing: Drawing;
  readonly numbers: NumbersTable;
  /** How to read it, and what was left out to keep it small; a sentence each. */
  readonly notes: readonly string[];
  /** Curves or markings with their names, in order; empty where the picture names them itself. */
  readonly legend: readonly LegendEntry[];
}

export interface LegendEntry {
  readonly name: string;
  /** Markup of a small sample, 28 by 14. */
  readonly sample: string;
  /** Class shared by all parts of the picture that belong to it; absent where it cannot be hidden. */
  readonly series: string | undefined;
  /** Indices of the columns of `numbers` with its value and expanded uncertainty. */
  readonly value: number | undefined;
  readonly expanded: number | undefined;
}

/** What a picture is drawn of: a plot with axes, which is as wide as there is room, or a drawing with a shape of its own. */
export type Drawing = Plot | Sketch | Panels;

/** Plots of the same kind side by side, as many in a row as there is room for. */
export interface Panels {
  readonly kind: 'panels';
  readonly panels: readonly { readonly title: string; readonly plot: Plot }[];
}

/**
 * A plot over frequency, or another one as wide as there is room. Positions around it are parts of its width in per cent
 * and pixels of its height; inside it they are units of `inner`, stretched to fit.
 */
export interface Plot {
  readonly kind: 'plot';
  /** Pixels beside and around the plot. */
  readonly left: LeftMargin;
  readonly right: RightMargin;
  readonly top: number;
  readonly bottom: number;
  /** Pixels. */
  readonly height: number;
  /** Width and height of the inner drawing in its own units. */
  readonly inner: readonly [number, number];
  readonly content: string;
  /** Behind and over the inner drawing. */
  readonly behind: string;
  readonly over: string;
  /** Frequency axis, in hertz; the page can zoom along it. */
  readonly range: readonly [number, number];
  readonly axis: string;
}

/** A style sheet has to know the margins, since a page without style attributes cannot be told them otherwise. */
export const LEFT_MARGINS = [56, 96] as const;
export const RIGHT_MARGINS = [14, 72] as const;
export type LeftMargin = (typeof LEFT_MARGINS)[number];
export type RightMargin = (typeof RIGHT_MARGINS)[number];

/** A drawing that keeps its shape, in pixels. */
export interface Sketch {
  readonly kind: 'sketch';
  readonly width: number;
  readonly height: number;
  readonly content: string;
}
