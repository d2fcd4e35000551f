import type { Sequelize } from 'sequelize';
import { Analysis } from './analysis';
import { ApiToken } from './api-token';
import { AuditEntry } from './audit-entry';
import { Campaign } from './campaign';
import { Candidate } from './candidate';
import { CorrectionRow } from './correction-row';
import { Folder } from './folder';
import { JobRun } from './job-run';
import { Lab } from './lab';
import { Membership } from './membership';
import { RecipeVersion } from './recipe';
import { Recording } from './recording';
import { Run } from './run';
import { Upload } from './upload';
import { User } from './user';
import { WorkerProcess } from './worker-process';
import { getSequelize } from './database';

const classes = {
  Analysis,
  ApiToken,
  AuditEntry,
  Campaign,
  Candidate,
  CorrectionRow,
  Folder,
  JobRun,
  Lab,
  Membership,
  RecipeVersion,
  Recording,
  Run,
  Upload,
  User,
  WorkerProcess,
};

// Which pool the classes talk to; defining them again moves them to another database (tests do).
let definedFor: Sequelize | null = null;

/** The model classes, tied to the database of this process on first use. */
export function models(): typeof classes {
  const sequelize = getSequelize();
  if (definedFor !== sequelize) {
    for (const model of Object.values(classes)) model.define(sequelize);
    definedFor = sequelize;
  }
  return classes;
}
