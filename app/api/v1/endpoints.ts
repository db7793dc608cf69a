import * as accounts from "@/lib/accounts/account-endpoints";
import * as analyses from "@/lib/analyses/analysis-endpoints";
import * as archives from "@/lib/archives/archive-endpoints";
import * as detections from "@/lib/detections/detection-endpoints";
import { healthEndpoint } from "@/lib/health/health-endpoint";
import type { Endpoint } from "@/lib/http/endpoint";
import { openapiEndpoint } from "@/lib/http/openapi-endpoint";
import { cancelJobEndpoint, getJobEndpoint, jobEventsEndpoint, listRunJobsEndpoint } from "@/lib/jobs/job-endpoints";
import * as studies from "@/lib/studies/study-endpoints";
import { brightnessEndpoint, createRunEndpoint, deleteRunEndpoint, getRunEndpoint, histogramsEndpoint, listRunsEndpoint, updateRunEndpoint } from "@/lib/runs/run-endpoints";

/** Every call of the HTTP API. A route that is missing here, or the other way round, fails the suite. */
export const ENDPOINTS: Endpoint[] = [
  ...Object.values(accounts),
  createRunEndpoint,
  listRunsEndpoint,
  getRunEndpoint,
  updateRunEndpoint,
  deleteRunEndpoint,
  histogramsEndpoint,
  brightnessEndpoint,
  listRunJobsEndpoint,
  ...Object.values(archives),
  ...[detections.createDetectionEndpoint, detections.listDetectionsEndpoint, detections.getDetectionEndpoint],
  ...[analyses.createAnalysisEndpoint, analyses.listAnalysesEndpoint, analyses.getAnalysisEndpoint],
  ...[analyses.correlatorsEndpoint, analyses.tracesEndpoint, analyses.frontEndpoint, analyses.figureEndpoint],
  ...Object.values(studies),
  getJobEndpoint,
  cancelJobEndpoint,
  jobEventsEndpoint,
  healthEndpoint,
  openapiEndpoint,
];
