/** [pairs] What a call by the multipole method costs for every charge and every target. */
export const MULTIPOLE_PAIRS_PER_POINT = 1000;
