import { z } from 'zod';
import { AlertRule, Alerts, RunAlert } from '../../schemas/alert';
import { listOf, PlantParams } from '../../schemas/common';
import { EpisodeParams, PatchEpisode } from '../../schemas/episode';
import { OverviewPlant, OverviewQuery } from '../../schemas/overview';
import { PlantsQuery, UnitsQuery } from '../../schemas/plant-requests';
import { CreatePlant, Plant, UpdatePlant } from '../../schemas/plant';
import { Episode } from '../../schemas/results';
import { named, type Operation } from './describe';

const PlantDocument = named('Plant', Plant);
const common = { tag: 'Plants' } as const;
const alerts = { tag: 'Alerts and episodes' } as const;

export const PLANT_OPERATIONS: readonly Operation[] = [
  {
    ...common,
    method: 'get',
    path: '/plants',
    summary: 'The plants of your organizations, by name.',
    who: 'every role; scopes read and manage',
    query: PlantsQuery,
    answers: { 200: { description: 'A page of plants.', schema: listOf(PlantDocument) } },
  },
  {
    ...common,
    method: 'get',
    path: '/overview',
    summary:
      'Your plants in the order in which to look at them (reverse hours and warm supply, then cost, then doubt, then silence), with the seven local days that end with yesterday.',
    who: 'every role; scopes read and manage',
    query: OverviewQuery,
    answers: { 200: { description: 'A page of plants.', schema: listOf(named('OverviewPlant', OverviewPlant)) } },
  },
  {
    ...common,
    method: 'post',
    path: '/plants',
    summary: 'Make a plant. organizationId is needed when you belong to several organizations.',
    who: 'owner, engineer; scope manage',
    body: named('CreatePlant', CreatePlant),
    idempotent: true,
    answers: { 201: { description: 'The plant, with its first settings revision.', schema: PlantDocument } },
  },
  {
    ...common,
    method: 'get',
    path: '/plants/{plantId}',
    summary: 'A plant. Design numbers nobody has given carry a default and are listed in `assumed`.',
    who: 'every role; scopes read and manage',
    params: PlantParams,
    query: UnitsQuery,
    answers: { 200: { description: 'The plant.', schema: PlantDocument } },
  },
  {
    ...common,
    method: 'patch',
    path: '/plants/{plantId}',
    summary:
      'Merge into a plant (RFC 7396: null takes a value back, lists are replaced whole). A change that results depend on makes a settings revision and has the stored days analysed again.',
    who: 'owner, engineer; scope manage',
    params: PlantParams,
    body: named('UpdatePlant', UpdatePlant),
    answers: {
      200: {
        description: 'The plant, and the analysis that began, if one did.',
        schema: z.object({ ...Plant.shape, analysisId: z.uuid().nullable() }),
      },
    },
    refusals: [409],
  },
  {
    ...common,
    method: 'delete',
    path: '/plants/{plantId}',
    summary: 'Take a plant out of sight; its tokens stop working.',
    who: 'owner',
    params: PlantParams,
    answers: { 204: { description: 'Done.' } },
  },
  {
    ...alerts,
    method: 'get',
    path: '/plants/{plantId}/alerts',
    summary: 'The daily alert: its rule, runs, mails with acknowledgements, and who gets the next one.',
    who: 'every role; scopes read and manage',
    params: PlantParams,
    answers: { 200: { description: 'The alert.', schema: Alerts } },
  },
  {
    ...alerts,
    method: 'put',
    path: '/plants/{plantId}/alert-rule',
    summary: 'Set the daily alert’s rule.',
    who: 'owner, engineer; scope manage',
    params: PlantParams,
    body: named('AlertRule', AlertRule),
    answers: { 200: { description: 'The rule.', schema: named('AlertRule', AlertRule) } },
  },
  {
    ...alerts,
    method: 'post',
    path: '/plants/{plantId}/alerts/runs',
    summary: 'Evaluate a local day now, as the schedule would. A day already mailed is not mailed again.',
    who: 'owner, engineer; scope manage',
    params: PlantParams,
    body: RunAlert,
    idempotent: true,
    answers: { 202: { description: 'The run.', schema: z.object({ id: z.uuid() }) } },
  },
  {
    ...alerts,
    method: 'patch',
    path: '/episodes/{episodeId}',
    summary: 'Acknowledge an episode, or take that back, and keep a note.',
    who: 'every role; scope manage',
    params: EpisodeParams,
    query: UnitsQuery,
    body: PatchEpisode,
    answers: { 200: { description: 'The episode.', schema: named('Episode', Episode) } },
  },
];
