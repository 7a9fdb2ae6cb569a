/** What a person may be in the workshop; each person has one or more. */
export const ROLES = ['technician', 'supervisor', 'quality lead', 'auditor', 'owner'] as const;

export type Role = (typeof ROLES)[number];
