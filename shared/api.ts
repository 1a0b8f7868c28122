import type {components, operations} from './api.gen.ts';

/** Short names for the types that the contract generates. */
type Schemas = components['schemas'];

export type OperationId = keyof operations;
export type ProblemCode = Schemas['ProblemCode'];
export type Problem = Schemas['Problem'];

export type Operation = Schemas['Operation'];
export type ConsoleOperation = Schemas['ConsoleOperation'];
export type Units = Schemas['Units'];
export type EchoedUnits = Schemas['EchoedUnits'];
export type Vector3 = Schemas['Vector3'];
export type ChargeColumns = Schemas['ChargeColumns'];
export type PointColumns = Schemas['PointColumns'];
export type Placement = Schemas['Placement'];
export type Body = Schemas['Body'];
export type Grid = Schemas['Grid'];
export type Path = Schemas['Path'];
export type Targets = Schemas['Targets'];
export type OnCoincidence = Schemas['OnCoincidence'];

export type PotentialRequest = Schemas['PotentialRequest'];
export type FieldRequest = Schemas['FieldRequest'];
export type ForceRequest = Schemas['ForceRequest'];
export type MomentRequest = Schemas['MomentRequest'];
export type EstimateRequest = Schemas['EstimateRequest'];

export type FieldColumns = Schemas['FieldColumns'];
export type FieldAnswer = Schemas['FieldAnswer'];
export type ForceAnswer = Schemas['ForceAnswer'];
export type MomentAnswer = Schemas['MomentAnswer'];
export type Estimate = Schemas['Estimate'];
export type Notice = Schemas['Notice'];

export type Quota = Schemas['Quota'];
export type UsageDay = Schemas['UsageDay'];
export type UsageReport = Schemas['UsageReport'];
export type ConsoleUsage = Schemas['ConsoleUsage'];
export type AccountBalance = Schemas['AccountBalance'];
export type KeyBalance = Schemas['KeyBalance'];

export type Role = Schemas['Role'];
export type Person = Schemas['Person'];
export type Session = Schemas['Session'];
export type Scope = Schemas['Scope'];
export type Key = Schemas['Key'];
export type KeyState = Schemas['KeyState'];
export type CreatedKey = Schemas['CreatedKey'];
export type NewKey = Schemas['NewKey'];
export type Rotation = Schemas['Rotation'];
export type SignIn = Schemas['SignIn'];
export type FirstPassword = Schemas['FirstPassword'];
