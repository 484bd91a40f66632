import { AlertDeliveryEntity } from './alert-delivery';
import { AlertRuleEntity } from './alert-rule';
import { AlertRunEntity } from './alert-run';
import { AnalysisEntity } from './analysis';
import { ApiTokenEntity } from './api-token';
import { AppUserEntity } from './app-user';
import { AuditEventEntity } from './audit-event';
import { CalibrationEntity } from './calibration';
import { EpisodeEntity } from './episode';
import { HourEntity } from './hour';
import { MappingEntity } from './mapping';
import { MembershipEntity } from './membership';
import { OrganizationEntity } from './organization';
import { PlantEntity } from './plant';
import { PlantDayEntity } from './plant-day';
import { PlantSettingsEntity } from './plant-settings';
import { PointEntity } from './point';
import { ResultBlockEntity } from './result-block';
import { SampleBlockEntity } from './sample-block';
import { SampleLayerEntity } from './sample-layer';
import { SessionEntity } from './session';
import { SpotCheckEntity } from './spot-check';
import { StaleDayEntity } from './stale-day';
import { UploadEntity } from './upload';
import { UploadChunkEntity } from './upload-chunk';

/** Every entity, listed by import: a bundled program finds no files to search. */
export const ENTITIES = [
  AlertDeliveryEntity,
  AlertRuleEntity,
  AlertRunEntity,
  AnalysisEntity,
  ApiTokenEntity,
  AppUserEntity,
  AuditEventEntity,
  CalibrationEntity,
  EpisodeEntity,
  HourEntity,
  MappingEntity,
  MembershipEntity,
  OrganizationEntity,
  PlantEntity,
  PlantDayEntity,
  PlantSettingsEntity,
  PointEntity,
  ResultBlockEntity,
  SampleBlockEntity,
  SampleLayerEntity,
  SessionEntity,
  SpotCheckEntity,
  StaleDayEntity,
  UploadEntity,
  UploadChunkEntity,
];

export {
  AlertDeliveryEntity,
  AlertRuleEntity,
  AlertRunEntity,
  AnalysisEntity,
  ApiTokenEntity,
  AppUserEntity,
  AuditEventEntity,
  CalibrationEntity,
  EpisodeEntity,
  HourEntity,
  MappingEntity,
  MembershipEntity,
  OrganizationEntity,
  PlantEntity,
  PlantDayEntity,
  PlantSettingsEntity,
  PointEntity,
  ResultBlockEntity,
  SampleBlockEntity,
  SampleLayerEntity,
  SessionEntity,
  SpotCheckEntity,
  StaleDayEntity,
  UploadEntity,
  UploadChunkEntity,
};

export type { AlertDelivery } from './alert-delivery';
export type { AlertRule } from './alert-rule';
export type { AlertRun } from './alert-run';
export type { Analysis } from './analysis';
export type { ApiToken } from './api-token';
export type { AppUser } from './app-user';
export type { AuditEvent } from './audit-event';
export type { Calibration } from './calibration';
export type { Episode } from './episode';
export type { Hour } from './hour';
export type { Mapping } from './mapping';
export type { Membership } from './membership';
export type { Organization } from './organization';
export type { Plant } from './plant';
export type { PlantDay } from './plant-day';
export type { PlantSettingsRevision } from './plant-settings';
export type { Point } from './point';
export type { ResultBlock } from './result-block';
export type { SampleBlock } from './sample-block';
export type { SampleLayer } from './sample-layer';
export type { Session } from './session';
export type { SpotCheck } from './spot-check';
export type { StaleDay } from './stale-day';
export type { Upload } from './upload';
export type { UploadChunk } from './upload-chunk';
