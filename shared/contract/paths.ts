/**
 * Where each route lives. Kept apart from the schemas so that the browser can read it without
 * carrying a validation library.
 */
export const PATHS = {
  me: ['GET', '/api/me'],
  signIn: ['POST', '/api/session'],
  signOut: ['DELETE', '/api/session'],
  changePassword: ['POST', '/api/me/password'],

  listStorms: ['GET', '/api/storms'],
  openStorm: ['POST', '/api/storms'],
  closeStorm: ['POST', '/api/storms/:stormId/closing'],
  boardPicture: ['GET', '/api/storms/:stormId/board'],

  takeCall: ['POST', '/api/storms/:stormId/calls'],
  findHousehold: ['GET', '/api/storms/:stormId/household'],
  readCall: ['GET', '/api/calls/:callId'],
  amendCall: ['PATCH', '/api/calls/:callId'],
  addRemark: ['POST', '/api/calls/:callId/remarks'],
  claimCall: ['POST', '/api/calls/:callId/claim'],
  releaseCall: ['POST', '/api/calls/:callId/release'],
  answerPhoneCheck: ['POST', '/api/calls/:callId/phone-check'],
  concludeCall: ['POST', '/api/calls/:callId/conclusion'],
  returnToWaiting: ['POST', '/api/calls/:callId/waiting'],
  sendMessage: ['POST', '/api/calls/:callId/messages'],
  readMessages: ['POST', '/api/calls/:callId/messages/reading'],

  region: ['GET', '/api/region'],
  feeders: ['GET', '/api/region/feeders'],
  suggestAddresses: ['GET', '/api/addresses'],
  nearestAddress: ['GET', '/api/addresses/nearest'],

  drawArea: ['POST', '/api/storms/:stormId/areas'],
  changeArea: ['PATCH', '/api/areas/:areaId'],
  removeArea: ['POST', '/api/areas/:areaId/removal'],
  pockets: ['GET', '/api/storms/:stormId/pockets'],

  addStormRoad: ['POST', '/api/storms/:stormId/storm-roads'],
  reportStormRoad: ['POST', '/api/day/storm-roads'],
  changeStormRoad: ['PATCH', '/api/storm-roads/:stormRoadId'],
  confirmStormRoad: ['POST', '/api/storm-roads/:stormRoadId/confirmation'],
  liftStormRoad: ['POST', '/api/storm-roads/:stormRoadId/lifting'],
  undoStormRoad: ['POST', '/api/storm-roads/:stormRoadId/undoing'],

  listTechnicians: ['GET', '/api/technicians'],
  addTechnician: ['POST', '/api/technicians'],
  changeTechnician: ['PATCH', '/api/technicians/:technicianId'],

  proposePlan: ['POST', '/api/storms/:stormId/plans'],
  publishPlan: ['POST', '/api/plans/:planId/publication'],
  discardPlan: ['POST', '/api/plans/:planId/discarding'],
  addStop: ['POST', '/api/calls/:callId/stop'],
  lockStop: ['POST', '/api/stops/:stopId/lock'],
  moveStop: ['POST', '/api/stops/:stopId/move'],
  pullStop: ['POST', '/api/stops/:stopId/pull'],

  technicianDay: ['GET', '/api/day'],
  reportPosition: ['POST', '/api/day/position'],
  acceptStop: ['POST', '/api/stops/:stopId/acceptance'],
  declineStop: ['POST', '/api/stops/:stopId/decline'],
  startTravel: ['POST', '/api/stops/:stopId/travel'],
  tellEta: ['POST', '/api/stops/:stopId/eta'],
  arrive: ['POST', '/api/stops/:stopId/arrival'],
  finishStop: ['POST', '/api/stops/:stopId/finish'],

  listMessages: ['GET', '/api/storms/:stormId/messages'],
  resolveMessage: ['POST', '/api/messages/:messageId/resolution'],

  listNightLogs: ['GET', '/api/storms/:stormId/night-logs'],
  uploadNightLog: ['POST', '/api/storms/:stormId/night-logs'],
  readNightLog: ['GET', '/api/night-logs/:logId'],
  previewNightLog: ['POST', '/api/night-logs/:logId/preview'],
  importNightLog: ['POST', '/api/night-logs/:logId/import'],
  listAsides: ['GET', '/api/storms/:stormId/asides'],
  settleNightLogRow: ['POST', '/api/night-log-rows/:rowId/settlement'],

  drain: ['GET', '/api/storms/:stormId/drain'],
  settings: ['GET', '/api/settings'],
  changeSettings: ['PATCH', '/api/settings'],
  measuredSpeeds: ['GET', '/api/measured-speeds'],
  resetMeasuredSpeeds: ['POST', '/api/measured-speeds/reset'],
  listUsers: ['GET', '/api/users'],
  addUser: ['POST', '/api/users'],
  changeUser: ['PATCH', '/api/users/:userId'],
  resetPassword: ['POST', '/api/users/:userId/passphrase'],
  audit: ['GET', '/api/storms/:stormId/audit'],
  officeAudit: ['GET', '/api/audit'],
} as const satisfies Record<string, readonly ['GET' | 'POST' | 'PATCH' | 'DELETE', string]>;

export type RouteName = keyof typeof PATHS;
