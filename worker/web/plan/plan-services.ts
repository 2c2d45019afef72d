/** What the pages of a training day ask of the rest. */
import type { PlanContext } from '../../../lib/config/plan.ts';
import type { DayPlan } from '../../../lib/plan/day-plan.ts';
import type { JudgedDays, PlanRequest } from '../../../lib/plan/request.ts';

/** A plan as it is kept behind its link. */
export interface KeptPlan {
  readonly id: string;
  readonly revision: number;
  readonly request: PlanRequest;
  readonly plan: DayPlan;
  /** Whether somebody is told when a block turns. */
  readonly isTold: boolean;
}

export interface PlanServices {
  now(): Date;
  /** Seconds that this sender has to wait before the next plan is made; 0 for none. */
  wait(who: string): number;
  /** The sites and sheets that there are here. */
  known(): Promise<PlanContext>;
  /** The day that stands on the page before anybody has entered one. */
  example(): unknown;
  judge(request: PlanRequest): Promise<JudgedDays>;
  /** Keeps a new plan, or one anew, and gives the token of its link; null where no link can be derived. */
  keep(plan: Pick<KeptPlan, 'request' | 'plan'>, before: KeptPlan | null): Promise<string | null>;
  /** Tells the subscription behind a manage link from now on, or nobody for null; false when there is none behind it. */
  tell(plan: KeptPlan, manageLink: string | null): Promise<boolean>;
  /** null for a token that is not ours, revoked, or of a plan that is gone. */
  kept(token: string): Promise<KeptPlan | null>;
}
