/** Every threshold of the judgements, with its source. */

/** Chance that a set in which nothing is wrong gets any take flagged. Common practice, no source: 5 %. */
export const DEFAULT_RISK = 0.05;

/** Effect in dB below which a partner's influence does not matter to the user. Common practice, no source: 1 dB. */
export const DEFAULT_TOLERANCE = 1;

/** Chance to find a shift of the size called smallest detectable. Source: Baarda 1968 (0.1 % and 80 %). */
export const DETECTION_POWER = 0.8;
export const DETECTION_RISK = 0.001;

/**
 * Two explanations, or two takes, count as equally good when the better one is less than this many times as likely.
 * Source: the grade 'strong' of Kass & Raftery 1995, J. Am. Statist. Assoc. 90, 773–795 (recalled from memory).
 */
export const EQUALLY_GOOD_RATIO = 20;

/** At most this part of the takes is set aside; where more disagree, it is the model that fails. Common practice, no source. */
export const LARGEST_FLAGGED_PART = 0.25;

/**
 * A band as a whole fails where more than the first part of the units shows more partner scatter than the tolerance, and
 * more than the second is surely above it: four times as many as the 2.5 % that a 95 % interval lets pass by chance where
 * all are just at the tolerance. Common practice, no source.
 */
export const FAILING_PART = 0.5;
export const SURELY_FAILING_PART = 0.1;
