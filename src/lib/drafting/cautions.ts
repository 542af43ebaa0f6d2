/** For whatever is boned or laced: general words, from published work on tight lacing (C. R. Gau 1998) and usual practice. */
export const lacingCaution =
  'Tight lacing: never more than a tenth of the waist. Loosen at once on faintness, short breath, numbness or pain. Not for children, in pregnancy, after an operation, or with a condition of lungs, heart, stomach or spine unless a clinician agrees. It must open quickly; it is not for sleep or sport. Sit and bend at the fitting; bone ends are blunt and capped.';
