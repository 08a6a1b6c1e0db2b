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
