import { postBatch } from './batches.ts'
import { getDesign, getRevision, listDesigns, postDesign } from './designs.ts'
import type { Endpoint } from './endpoint.ts'
import { listFindings, postAnswer, postClosing, postFinding } from './findings.ts'
import { countRecords, exportRecords, exportRecordsCsv, listRecorders } from './history.ts'
import { listInstruments, patchInstrument, postInstrument, putInstrumentRule } from './instruments.ts'
import { getCheckpoint, getConsistency, getLedgerKey, getProof } from './ledger.ts'
import { listCheckpoints, listKeys, postKey } from './ledger-checkpoints.ts'
import { listEntries, listStrays } from './ledger-entries.ts'
import { postClose, postExpected, postLot, postReference, postSignOff } from './lot-acts.ts'
import { getLot, listLots, listLotUnits, listMissing, listStationMonths } from './lots.ts'
import {
  getDifference,
  getUse,
  postRelease,
  postReturn,
  postReview,
  postRevision,
  postWithdrawal,
  putRevision,
} from './revisions.ts'
import { deleteSession, getMe, getSetup, postSession, postSetup } from './session.ts'
import { listStations, patchStation, postStation } from './stations.ts'
import { deleteToken, listTokens, postToken } from './tokens.ts'
import { getCertificate, getTrim, listTrims, postTrim } from './trims.ts'
import { findUnits } from './units.ts'

/** Every operation that is served. The router, OpenAPI and the tests of access are made from this list. */
export const allEndpoints: readonly Endpoint[] = [
  postSession,
  deleteSession,
  getMe,
  getSetup,
  postSetup,
  listDesigns,
  postDesign,
  getDesign,
  getRevision,
  postRevision,
  putRevision,
  postReview,
  postReturn,
  postRelease,
  postWithdrawal,
  getUse,
  getDifference,
  listLots,
  postLot,
  getLot,
  listLotUnits,
  listMissing,
  postExpected,
  postClose,
  postSignOff,
  postReference,
  listStationMonths,
  postTrim,
  postBatch,
  listTrims,
  getTrim,
  getCertificate,
  listFindings,
  postFinding,
  postAnswer,
  postClosing,
  countRecords,
  listRecorders,
  exportRecords,
  exportRecordsCsv,
  findUnits,
  listStations,
  postStation,
  patchStation,
  listInstruments,
  postInstrument,
  patchInstrument,
  putInstrumentRule,
  listTokens,
  postToken,
  deleteToken,
  getCheckpoint,
  getLedgerKey,
  getConsistency,
  getProof,
  listKeys,
  postKey,
  listCheckpoints,
  listEntries,
  listStrays,
] as const satisfies readonly Endpoint[]
