import * as addressChanges from './address-changes';
import * as clothTrialJob from './cloth-trial-job';
import * as guides from './guides';
import { registerJob } from './jobs';
import * as resets from './resets';
import * as settleJob from './settle-job';
import * as signUps from './sign-ups';

/** Makes every kind of job known: at the start of the server, and in tests that need one of them. */
export function registerAllJobs(): void {
  registerJob('sign-up', signUps.job);
  registerJob('password-reset', resets.job);
  registerJob('address-change', addressChanges.job);
  registerJob('guide', guides.job);
  registerJob('settle', settleJob.job);
  registerJob('cloth-trial', clothTrialJob.job);
}
